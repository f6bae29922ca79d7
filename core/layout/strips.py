"""Copper of the strips: outlines round centre lines, pads and contacts."""

from __future__ import annotations

import itertools
from math import hypot
from typing import TYPE_CHECKING

from core.design.feed import Corner
from core.shapes.outline import Outline, Region, circle, polyline, rectangle

if TYPE_CHECKING:
    from core.design.feed import DualEdge
    from core.design.model import Element
    from core.layout.model import Point
    from core.layout.route import Route

# A mitre that cuts both outer edges one strip width before the corner takes away half of the
# corner's diagonal: the 50 % mitre that the bend formula stands for.
_MITRE_LEG = 1.0


def strip_regions(element: Element, feed: DualEdge, route: Route) -> dict[str, Region]:
    """Copper of each strip by name, right-hand frame, overlapping where strips join.

    Parameters
    ----------
    element : Element
    feed : DualEdge
    route : Route

    Returns
    -------
    dict of str to Region
        "first branch", "second branch", "delay strip", "pad", and "lead-in" where there is one.
    """
    mitred = feed.corners is Corner.MITRED
    half = feed.delay_width / 2
    start, end = route.strip[0], route.strip[-1]
    bottom, right = -element.length / 2, element.width / 2
    strip = _strip_to_branch_edges(route.strip, feed)
    regions = {
        "first branch": Region(
            rectangle(
                feed.first.width,
                bottom - start[1] + half,
                (start[0], (bottom + start[1] - half) / 2),
            )
        ),
        "second branch": Region(
            rectangle(
                end[0] + half - right,
                feed.second.width,
                ((right + end[0] + half) / 2, end[1]),
            )
        ),
        "delay strip": Region(_strip_outline(strip, feed.delay_width, mitred)),
        "pad": Region(circle(feed.probe.pad, route.probe)),
    }
    if len(route.lead) > 1:
        lead = _extended(route.lead, 0.0, feed.lead_in.width / 2)
        regions["lead-in"] = Region(_strip_outline(lead, feed.lead_in.width, mitred))
    return regions


def _strip_to_branch_edges(points: tuple[Point, ...], feed: DualEdge) -> tuple[Point, ...]:
    """Delay strip up to the far edge of each branch that it meets at a right angle.

    A detour may come back along a branch's own axis; there it ends on the axis.
    """
    along_first = points[0][0] == points[1][0]
    along_second = points[-1][1] == points[-2][1]
    return _extended(
        points,
        0.0 if along_first else feed.first.width / 2,
        0.0 if along_second else feed.second.width / 2,
    )


def _extended(points: tuple[Point, ...], before: float, after: float) -> tuple[Point, ...]:
    """Path made longer at both ends."""
    first = _beyond(points[1], points[0], before)
    last = _beyond(points[-2], points[-1], after)
    return (first, *points[1:-1], last)


def _beyond(inner: Point, end: Point, distance: float) -> Point:
    span = hypot(end[0] - inner[0], end[1] - inner[1])
    ratio = distance / span
    return end[0] + (end[0] - inner[0]) * ratio, end[1] + (end[1] - inner[1]) * ratio


def _strip_outline(points: tuple[Point, ...], width: float, mitred: bool) -> Outline:
    """Outline of a strip with right-angled corners along a centre line."""
    # Down the right-hand edge and back up the other: counter-clockwise by construction.
    return polyline([*_side(points, width / 2, mitred), *_side(points[::-1], width / 2, mitred)])


def _side(points: tuple[Point, ...], half: float, mitred: bool) -> list[Point]:
    """Right-hand edge of a strip, walked from its first point to its last."""
    ways = [_unit(a, b) for a, b in itertools.pairwise(points)]
    edge = [_offset(points[0], ways[0], half)]
    for i in range(1, len(points) - 1):
        into, out = ways[i - 1], ways[i]
        turns_left = into[0] * out[1] - into[1] * out[0] > 0.0
        here = points[i]
        corner = (
            here[0] + half * (into[1] + out[1]),
            here[1] - half * (into[0] + out[0]),
        )
        if mitred and turns_left:  # the right-hand edge is the outer one
            leg = min(
                2 * half * _MITRE_LEG,
                _distance(points[i - 1], here),
                _distance(here, points[i + 1]),
            )
            edge.append((corner[0] - into[0] * leg, corner[1] - into[1] * leg))
            edge.append((corner[0] + out[0] * leg, corner[1] + out[1] * leg))
        else:
            edge.append(corner)
    edge.append(_offset(points[-1], ways[-1], half))
    return edge


def _unit(a: Point, b: Point) -> Point:
    span = _distance(a, b)
    return (b[0] - a[0]) / span, (b[1] - a[1]) / span


def _distance(a: Point, b: Point) -> float:
    return hypot(b[0] - a[0], b[1] - a[1])


def _offset(point: Point, way: Point, half: float) -> Point:
    """Point moved to the right-hand side of the way."""
    return point[0] + half * way[1], point[1] - half * way[0]
