"""How much room a design leaves where copper must not go: margins of buildability.

Smooth where they can be, so that a search can run along them; what cannot be made is still
for `build_layout` to say.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.design.feed import DualEdge
from core.layout.plates import ground_reach, rim_distance
from core.layout.route import find_route

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from core.design.model import Design, Element
    from core.layout.model import Point

    Floats = NDArray[np.float64]

_NOT_THERE = 1.0  # m, margin of copper that is not there, never in the way


def margins(design: Design) -> Floats:
    """Margins that must not be negative if a design is to be made.

    Parameters
    ----------
    design : Design

    Returns
    -------
    (m,) ndarray of float
        m; as many for every design with the same kind of feed and the same bends.

    Notes
    -----
    Of the ground plate beyond the element, the strips and the probe's hole; of the landings
    to the ends of their sides; of pad and lead-in to the element; of bends and pad to what
    they are next to.
    """
    feed, element, making = design.feed, design.element, design.making
    reach = ground_reach(design) - making.edge_margin
    hole = max(feed.probe.clearance, feed.probe.pad) / 2 + making.edge_margin
    if not isinstance(feed, DualEdge):
        half = feed.probe.pad / 2
        inside = (element.width / 2 - abs(feed.x), element.length / 2 - abs(feed.y))
        room = rim_distance(design, (feed.x, feed.y)) - hole
        return np.array([reach, room, *(one - half for one in inside)])
    route = find_route(element, feed, making)
    strip_half = max(feed.delay_width, feed.first.width, feed.second.width) / 2
    probe_to_element = _outside(element, route.probe) - feed.probe.pad / 2
    return np.array(
        [
            reach,
            rim_distance(design, route.probe) - hole,
            *(
                _covered(design, (point,), strip_half)
                for point in (route.strip[0], route.strip[-1])
            ),
            _covered(design, route.strip[1:-1], feed.delay_width / 2),
            *_on_side(feed.first.landing, feed.first.width, element.width),
            *_on_side(feed.second.landing, feed.second.width, element.length),
            probe_to_element - making.narrowest_gap,
            *_lead_margins(design, feed, route.lead),
        ]
    )


def _lead_margins(design: Design, feed: DualEdge, lead: tuple[Point, ...]) -> Iterable[float]:
    """Margins of a lead-in to the rim, to the element and to its own bends."""
    if feed.lead_in.length <= 0.0:  # as many as of one that is there, for a search that ends here
        return (_NOT_THERE,) * (3 + len(feed.lead_in.bends))
    half, gap = feed.lead_in.width / 2, design.making.narrowest_gap
    clear = feed.delay_width / 2 + gap
    turns = [0.0, *(bend.distance for bend in feed.lead_in.bends), feed.lead_in.length]
    runs = np.diff(turns)
    least = [clear + half] * len(feed.lead_in.bends) + [clear + feed.probe.pad / 2]
    beside = min(_outside(design.element, point) for point in lead[1:])
    return (
        _covered(design, lead[1:], half),
        beside - half - gap,
        *(runs - least),
    )


def _on_side(landing: float, width: float, side: float) -> tuple[float, float]:
    """Room of a branch to the corner that both share and to the far one."""
    return landing - width / 2, side - landing - width / 2


def _covered(design: Design, points: Iterable[Point], half: float) -> float:
    """Least margin of the ground plate beyond squares of copper round some points."""
    steps = [(dx, dy) for dx in (-half, half) for dy in (-half, half)]
    nearest = min(rim_distance(design, (x + dx, y + dy)) for x, y in points for dx, dy in steps)
    return nearest - design.making.edge_margin


def _outside(element: Element, point: Point) -> float:
    """Distance of a point from the element; negative inside."""
    x, y = abs(point[0]) - element.width / 2, abs(point[1]) - element.length / 2
    return float(np.hypot(max(x, 0.0), max(y, 0.0)) if max(x, y) > 0 else max(x, y))
