"""The feed of a design as lines between probe and element, found by arithmetic alone.

Kept apart from the polygons so that sizing can try hundreds of designs a second.
"""

from __future__ import annotations

import itertools
from math import hypot, inf
from typing import TYPE_CHECKING

from core.design.feed import Corner, DualEdge
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround
from core.layout.model import Bend, FeedNetwork, Landing, Probe, Run, Segment
from core.layout.route import Route, find_route

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.design.model import Design
    from core.layout.model import Point

_TOLERANCE = 1e-9


def handedness(design: Design) -> float:
    """Sign of x: -1 where the layout is the mirror image, for the left-hand sense.

    Parameters
    ----------
    design : Design

    Returns
    -------
    float
        +1 or -1.
    """
    return -1.0 if design.brief.polarisation is Polarisation.LHCP else 1.0


def feed_network(design: Design, route: Route | None = None) -> FeedNetwork:
    """Lines between probe and element.

    Parameters
    ----------
    design : Design
    route : Route, optional
        Of this design, where it is known already.

    Returns
    -------
    FeedNetwork
        Mirrored with the layout for the left-hand sense.
    """
    feed, sign = design.feed, handedness(design)
    if not isinstance(feed, DualEdge):
        x, y, diameter = feed.x * sign, feed.y, feed.probe.diameter
        landing = Landing(x, y, diameter, "")
        return FeedNetwork(Probe(x, y, diameter), (), (), ((),), (landing,), inf, True)
    route = route or find_route(design.element, feed, design.making)
    right, bottom = design.element.width / 2, -design.element.length / 2
    mitred = feed.corners is Corner.MITRED
    start, end = route.strip[0], route.strip[-1]
    to_first = (*_points_between(route, first=True), (start[0], bottom))
    to_second = (*_points_between(route, first=False), (right, end[1]))
    has_lead = len(route.lead) > 1
    arms = (
        _run(to_first, feed.delay_width, feed.first.width, mitred),
        _run(to_second, feed.delay_width, feed.second.width, mitred),
    )
    return FeedNetwork(
        probe=Probe(route.probe[0] * sign, route.probe[1], feed.probe.diameter),
        trunk=_run(route.lead[::-1], feed.lead_in.width, None, mitred) if has_lead else (),
        tee_widths=(feed.lead_in.width, *(arm[0].width for arm in arms)) if has_lead else (),
        arms=arms,
        landings=(
            Landing(start[0] * sign, bottom, feed.first.width, "y"),
            Landing(right * sign, end[1], feed.second.width, "x"),
        ),
        clearance=min(feed.first.gap, feed.second.gap),
        over_ground=_is_over_ground(design, route),
    )


def _points_between(route: Route, first: bool) -> tuple[Point, ...]:
    """Centre line of the strip from the tee to the axis of a branch."""
    points = (
        (*route.strip[: route.tee_leg + 1], route.tee)[::-1]
        if first
        else (route.tee, *route.strip[route.tee_leg + 1 :])
    )
    if len(points) > 1 and _distance(points[0], points[1]) < _TOLERANCE:
        return points[1:]
    return points


def _run(points: tuple[Point, ...], width: float, last_width: float | None, mitred: bool) -> Run:
    """Segments and bends of a path; the last piece may have a width of its own."""
    parts: list[Segment | Bend] = []
    pieces = list(itertools.pairwise(points))
    for i, (a, b) in enumerate(pieces):
        is_last = i == len(pieces) - 1
        own = last_width if is_last and last_width is not None else width
        if i > 0 and _turns(pieces[i - 1], (a, b)):
            parts.append(Bend(width, mitred and own == width))
        parts.append(Segment(own, _distance(a, b)))
    return tuple(parts)


def _turns(before: tuple[Point, Point], after: tuple[Point, Point]) -> bool:
    (a, b), (_, c) = before, after
    return abs((b[0] - a[0]) * (c[1] - b[1]) - (b[1] - a[1]) * (c[0] - b[0])) > _TOLERANCE**2


def _is_over_ground(design: Design, route: Route) -> bool:
    """Tell whether every strip lies over the ground plate, edges included."""
    feed, ground = design.feed, design.stock.ground
    if not isinstance(feed, DualEdge):
        return True
    corners = itertools.chain(
        _box_corners(route.strip, feed.delay_width / 2),
        _box_corners(route.lead, max(feed.lead_in.width, feed.probe.pad) / 2),
    )
    x0, y0 = ground.offset_x, ground.offset_y
    if isinstance(ground, DiscGround):
        return all(hypot(x - x0, y - y0) <= ground.diameter / 2 for x, y in corners)
    return all(
        abs(x - x0) <= ground.width / 2 and abs(y - y0) <= ground.length / 2 for x, y in corners
    )


def _box_corners(points: Iterable[Point], half: float) -> Iterable[Point]:
    for x, y in points:
        for dx in (-half, half):
            for dy in (-half, half):
                yield x + dx, y + dy


def _distance(a: Point, b: Point) -> float:
    return hypot(b[0] - a[0], b[1] - a[1])
