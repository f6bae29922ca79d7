"""What the field check may move in a layout, and how far: a unit box round a design.

Wider than the boxes that sizing searches: gaps and bends are free too, and what no limit of a
single length can say, such as a strip that must lie over the ground plate, is left to
`core.sizing.room`.

Shapes: n freedoms.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from core.design.feed import Branch, DualEdge, LeadBend, LeadIn, ProbeFeed
from core.design.model import Element
from core.design.polarisation import Polarisation
from core.sizing.knobs import GRID, Box, Knob, fixed_element_boxes
from core.sizing.seed import starting_values

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from core.design.model import Design
    from core.sizing.knobs import Rounding

    Floats = NDArray[np.float64]

_SIDE_RANGE = 1.4
_NARROWEST_RATIO = 0.01  # width over spacer height
_WIDEST, _WIDEST_LEAD = 0.25, 0.5  # strips, of the element's shorter side
_FARTHEST = 0.75  # landing from the shared corner, of its side
# How far each may go, in turns of its knob, with the response still about linear.
_STRIP_STEP, _TEE_STEP, _LEAD_STEP, _PROBE_STEP = 0.25, 0.15, 0.12, 0.1
_BANDWIDTHS = 1.2  # and a side, in bandwidths of the element's mode


@dataclass(frozen=True, eq=False)
class Freedoms:
    """Lengths that may move.

    Attributes
    ----------
    box : Box
    start : (n,) ndarray of float
        Turns of the design; outside 0 to 1 where it is beyond a limit.
    steps : (n,) ndarray of float
        Turns over which the response stays about linear.
    """

    box: Box
    start: Floats
    steps: Floats


def freedoms(design: Design, *, keep_element: bool = False) -> Freedoms:
    """Every length of a design that the field check may move.

    Parameters
    ----------
    design : Design
    keep_element : bool
        Whether the sides stay as they are.

    Returns
    -------
    Freedoms
        The probe's pin, the ground plate and a detour of the delay strip stay as they are.
    """
    feed = design.feed
    box, steps = _probe_box(design, feed) if isinstance(feed, ProbeFeed) else _strip_box(design)
    if keep_element:
        (box,) = fixed_element_boxes((box,), design.element)
    else:
        quality = starting_values(design.brief, design.stock).quality
        steps = [_BANDWIDTHS / quality / (2.0 * np.log(_SIDE_RANGE))] * 2 + steps
    start = np.array([knob.turn(knob.start) for knob in box.knobs])
    return Freedoms(box, start, np.array(steps))


def _probe_box(design: Design, feed: ProbeFeed) -> tuple[Box, list[float]]:
    """Sides and the place of the probe, on the nearer axis if linear; steps of the latter."""
    element, edge = design.element, ("the element's edge",) * 2
    room = feed.probe.pad / 2
    reach_x, reach_y = element.width / 2 - room, element.length / 2 - room
    place_x = Knob("probe x", -reach_x, reach_x, feed.x, False, *edge)
    place_y = Knob("probe y", -reach_y, reach_y, feed.y, False, *edge)
    is_linear = design.brief.polarisation is Polarisation.LINEAR
    is_along_x = abs(feed.x) / element.width > abs(feed.y) / element.length

    def place(values: list[float], rounding: Rounding) -> Design:
        width, length, *at = map(rounding, values)
        if is_linear:
            at = [at[0], 0.0] if is_along_x else [0.0, at[0]]
        moved = replace(feed, x=at[0], y=at[1])
        return replace(design, element=Element(width, length), feed=moved)

    places: tuple[Knob, ...] = (place_x, place_y)
    if is_linear:
        places = (place_x,) if is_along_x else (place_y,)
    return Box((*_sides(element), *places), place), [_PROBE_STEP] * len(places)


def _strip_box(design: Design) -> tuple[Box, list[float]]:
    """Sides and strips of a dual-edge design; steps of the strips."""
    feed, element = design.feed, design.element
    assert isinstance(feed, DualEdge)
    lead, branches = feed.lead_in, (feed.first, feed.second)
    shorter = min(element.width, element.length)
    knobs = [
        *_landings(branches, element),
        *(_gap(design, name, one.gap) for name, one in zip(_NAMES, branches, strict=True)),
        *(
            _width(design, f"{name} branch", one.width)
            for name, one in zip(_NAMES, branches, strict=True)
        ),
        _width(design, "delay strip", feed.delay_width),
        Knob("tee", 0.0, 1.0, feed.tee / feed.delay_length),
    ]
    steps = [_STRIP_STEP] * 7 + [_TEE_STEP]
    if lead.length > 0.0:
        distances = [lead.length, *(bend.distance for bend in lead.bends)]
        labels = ["lead-in length", *(f"bend {i}" for i, _ in enumerate(lead.bends, 1))]
        knobs.append(_width(design, "lead-in", lead.width, _WIDEST_LEAD))
        knobs += [
            Knob(label, 0.0, max(shorter, distance), distance)
            for label, distance in zip(labels, distances, strict=True)
        ]
        steps += [_STRIP_STEP] + [_LEAD_STEP] * len(distances)
    detour = max(0.0, feed.delay_length - _way_round(feed))

    def place(values: list[float], rounding: Rounding) -> Design:
        return _placed(design, feed, detour, values, rounding)

    return Box((*_sides(element), *knobs), place), steps


_NAMES = ("first", "second")


def _placed(
    design: Design, feed: DualEdge, detour: float, values: list[float], rounding: Rounding
) -> Design:
    """Design of some lengths, its delay strip as long as the way round and a detour."""
    width, length, *lengths = map(rounding, values)
    first, second = (Branch(*lengths[i:6:2]) for i in (0, 1))
    around = replace(feed, first=first, second=second, delay_width=lengths[6])
    delay_length = rounding(_way_round(around) + detour)
    lead = LeadIn(0.0, lengths[6])
    if len(lengths) > 8:
        bends = zip(lengths[10:], feed.lead_in.bends, strict=True)
        turned = tuple(LeadBend(distance, bend.turn) for distance, bend in bends)
        lead = LeadIn(lengths[9], lengths[8], turned)
    tee = rounding(values[9] * delay_length)
    return replace(
        design,
        element=Element(width, length),
        feed=replace(around, delay_length=delay_length, tee=tee, lead_in=lead),
    )


def _way_round(feed: DualEdge) -> float:
    """Length of the delay strip from one branch to the other without a detour."""
    gaps = feed.first.gap + feed.second.gap
    return feed.first.landing + feed.second.landing + gaps + feed.delay_width


def _sides(element: Element) -> tuple[Knob, Knob]:
    pairs = ("width", element.width), ("length", element.length)
    width, length = (
        Knob(label, side / _SIDE_RANGE, side * _SIDE_RANGE, side, True, *["its range"] * 2)
        for label, side in pairs
    )
    return width, length


def _landings(branches: Sequence[Branch], element: Element) -> list[Knob]:
    sides = (element.width, element.length)
    return [
        Knob(f"{name} landing", 0.0, max(_FARTHEST * side, one.landing), one.landing)
        for name, one, side in zip(_NAMES, branches, sides, strict=True)
    ]


def _width(design: Design, label: str, start: float, widest: float = _WIDEST) -> Knob:
    making, element = design.making, design.element
    narrowest = max(making.narrowest_strip, 2 * GRID, _NARROWEST_RATIO * design.stock.height)
    most = max(widest * min(element.width, element.length), 2 * narrowest, start)
    reason = f"the narrowest strip that {making.process} cuts"
    return Knob(label, narrowest, most, max(start, narrowest), True, reason, "its greatest width")


def _gap(design: Design, name: str, start: float) -> Knob:
    making, element = design.making, design.element
    narrowest = max(making.narrowest_gap, 2 * GRID)
    most = max(_WIDEST * min(element.width, element.length), 2 * narrowest, start)
    reason = f"the smallest gap that {making.process} leaves"
    return Knob(f"{name} gap", narrowest, most, max(start, narrowest), True, reason)
