"""Where the strips of a dual-edge feed run: centre lines, found by arithmetic alone.

Everything here is drawn for the right-hand antenna, with the shared corner at the lower
right: the first branch lands on the lower side, the delayed one on the right side.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass
from math import hypot
from typing import TYPE_CHECKING

from core.design.feed import Turn
from core.findings import Finding, Severity
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.feed import DualEdge, LeadIn
    from core.design.model import Element, Making
    from core.layout.model import Point

_TOLERANCE = 1e-9  # m; below what anyone cuts


@dataclass(frozen=True)
class Route:
    """Centre lines of a dual-edge feed, m.

    Attributes
    ----------
    first_landing, second_landing : float
        Distance of each branch from the shared corner, after sliding.
    strip : tuple of Point
        Delay strip from the first branch's axis to the second's, one point a corner.
    tee : Point
    tee_leg : int
        Number of the strip's straight piece that the tee is on.
    tee_distance : float
        From the first branch along the strip.
    lead : tuple of Point
        From the tee to the probe; one point where there is no lead-in.
    findings : tuple of Finding
        What could not be routed as asked, and what was slid or stepped out.
    """

    first_landing: float
    second_landing: float
    strip: tuple[Point, ...]
    tee: Point
    tee_leg: int
    tee_distance: float
    lead: tuple[Point, ...]
    findings: tuple[Finding, ...]

    @property
    def probe(self) -> Point:
        """Centre of the probe, m."""
        return self.lead[-1]

    @property
    def strip_length(self) -> float:
        """Length of the delay strip along its centre line, m."""
        return _path_length(self.strip)


def find_route(element: Element, feed: DualEdge, making: Making) -> Route:
    """Route the strips of a dual-edge feed round the corner of an element.

    A delay strip shorter than the way round pulls the landing points towards the corner;
    a longer one steps out with a detour, on the leg that the tee is not on where it can.

    Parameters
    ----------
    element : Element
    feed : DualEdge
    making : Making
        Its narrowest gap keeps the detour's legs apart.

    Returns
    -------
    Route
        Never clipped: what cannot be routed is in its findings, as refusals.
    """
    findings: list[Finding] = []
    first, second = _slid_landings(feed, findings)
    right, bottom = element.width / 2, -element.length / 2
    half = feed.delay_width / 2
    corner = (right + feed.second.gap + half, bottom - feed.first.gap - half)
    start, end = (right - first, corner[1]), (corner[0], bottom + second)
    spare = feed.delay_length - _path_length((start, corner, end))
    if spare > _TOLERANCE:
        strip = _with_detour(start, corner, end, spare / 2, feed, making, findings)
    else:
        strip = (start, corner, end)
    distance = _tee_distance(feed, _path_length(strip), findings)
    tee, leg, direction = _along(strip, distance)
    lead = _lead_points(tee, (direction[1], -direction[0]), feed.lead_in, findings)
    return Route(first, second, strip, tee, leg, distance, lead, tuple(findings))


def _slid_landings(feed: DualEdge, findings: list[Finding]) -> tuple[float, float]:
    """Landing points, slid towards the corner by what the delay strip is too short."""
    first, second = feed.first, feed.second
    across = second.gap + first.gap + feed.delay_width
    short = first.landing + second.landing + across - feed.delay_length
    if short <= _TOLERANCE:
        return first.landing, second.landing
    room_first = max(0.0, first.landing - first.width / 2)
    room_second = max(0.0, second.landing - second.width / 2)
    slide_second = min(max(short / 2, short - room_first), room_second)
    slide_first = min(short - slide_second, room_first)
    left = short - slide_first - slide_second
    if left > _TOLERANCE:
        findings.append(
            Finding(
                "delay-too-short",
                Severity.REFUSAL,
                f"The delay strip of {_mm(feed.delay_length)} does not reach round the corner: "
                f"the shortest way is {_mm(feed.delay_length + left)}.",
                "feed.delay_length",
                "Make the delay strip longer, or the gaps or branches narrower.",
            )
        )
    else:
        findings.append(
            Finding(
                "landing-slid",
                Severity.NOTE,
                f"The delay strip of {_mm(feed.delay_length)} is shorter than the way between the "
                f"landing points: they slid towards the corner, by {_mm(slide_first)} and "
                f"{_mm(slide_second)}.",
                "feed.delay_length",
                "Set the landing points nearer to the corner, or make the delay strip longer.",
            )
        )
    return first.landing - slide_first, second.landing - slide_second


def _with_detour(
    start: Point,
    corner: Point,
    end: Point,
    depth: float,
    feed: DualEdge,
    making: Making,
    findings: list[Finding],
) -> tuple[Point, ...]:
    """Strip with a step outwards beside the corner that uses up twice `depth`."""
    width = feed.delay_width
    apart = width + max(width, making.narrowest_gap)  # between the detour's two legs
    least = width + making.narrowest_gap
    leg_first, leg_second = corner[0] - start[0], end[1] - corner[1]
    tee_on_first = feed.tee <= leg_first
    x, y = corner
    wanted = (False, True) if tee_on_first else (True, False)
    for on_first in wanted:
        leg = leg_first if on_first else leg_second
        branch = feed.first.width if on_first else feed.second.width
        if leg >= apart + (width + branch) / 2 + making.narrowest_gap:
            run = apart
        elif leg >= least:
            run = leg  # the whole leg steps out and comes back along the branch's axis
        else:
            continue
        findings.append(_detour_note(depth, feed))
        if on_first:
            points = (start, (x - run, y), (x - run, y - depth), (x, y - depth), corner, end)
        else:
            points = (start, corner, (x + depth, y), (x + depth, y + run), (x, y + run), end)
        return _without_straight_points(points)
    findings.append(
        Finding(
            "no-room-for-detour",
            Severity.REFUSAL,
            f"The delay strip of {_mm(feed.delay_length)} is {_mm(2 * depth)} longer than the way "
            "round the corner, and there is no room to step out.",
            "feed.delay_length",
            "Make the delay strip shorter, or move the landing points away from the corner.",
        )
    )
    return (start, corner, end)


def _detour_note(depth: float, feed: DualEdge) -> Finding:
    return Finding(
        "detour",
        Severity.NOTE,
        f"The delay strip of {_mm(feed.delay_length)} is longer than the way round the corner: "
        f"it steps out by {_mm(depth)}.",
        "feed.delay_length",
        "Move the landing points away from the corner for a strip without a detour.",
    )


def _without_straight_points(points: tuple[Point, ...]) -> tuple[Point, ...]:
    """Drop points that repeat or at which the path does not turn."""
    kept: list[Point] = [points[0]]
    for i in range(1, len(points) - 1):
        before, here, after = kept[-1], points[i], points[i + 1]
        cross = (here[0] - before[0]) * (after[1] - here[1]) - (here[1] - before[1]) * (
            after[0] - here[0]
        )
        if abs(cross) > _TOLERANCE**2:
            kept.append(here)
    if hypot(points[-1][0] - kept[-1][0], points[-1][1] - kept[-1][1]) > _TOLERANCE:
        kept.append(points[-1])
    return tuple(kept)


def _tee_distance(feed: DualEdge, strip_length: float, findings: list[Finding]) -> float:
    if feed.tee <= strip_length + _TOLERANCE:
        return min(feed.tee, strip_length)
    findings.append(
        Finding(
            "tee-off-strip",
            Severity.REFUSAL,
            f"The tee at {_mm(feed.tee)} lies beyond the end of the delay strip, which is "
            f"{_mm(strip_length)} long.",
            "feed.tee",
            "Move the tee towards the first branch.",
        )
    )
    return strip_length


def _along(points: tuple[Point, ...], distance: float) -> tuple[Point, int, Point]:
    """Point at a distance along a path, the piece it is on, and that piece's direction."""
    left = distance
    for i, (a, b) in enumerate(itertools.pairwise(points)):
        span = hypot(b[0] - a[0], b[1] - a[1])
        direction = ((b[0] - a[0]) / span, (b[1] - a[1]) / span)
        if left <= span + _TOLERANCE or i == len(points) - 2:
            return (a[0] + direction[0] * left, a[1] + direction[1] * left), i, direction
        left -= span
    raise AssertionError("a strip has at least two points")


def _lead_points(
    tee: Point, direction: Point, lead: LeadIn, findings: list[Finding]
) -> tuple[Point, ...]:
    """Centre line of the lead-in, from the tee outwards."""
    if lead.length <= _TOLERANCE:
        return (tee,)
    points, here, walked = [tee], tee, 0.0
    for number, bend in enumerate(lead.bends, 1):
        if bend.distance >= lead.length:
            findings.append(
                Finding(
                    "bend-beyond-lead-in",
                    Severity.REFUSAL,
                    f"Bend {number} at {_mm(bend.distance)} lies beyond the end of the lead-in, "
                    f"which is {_mm(lead.length)} long.",
                    f"feed.lead_in.bends.{number}.distance",
                    "Make the lead-in longer, or move the bend towards the tee.",
                )
            )
            break
        here = _stepped(here, direction, bend.distance - walked)
        if here != points[-1]:  # a bend right at the tee only sets the way
            points.append(here)
        walked = bend.distance
        x, y = direction
        direction = (-y, x) if bend.turn is Turn.LEFT else (y, -x)
    end = _stepped(here, direction, lead.length - walked)
    return (*points, end) if end != points[-1] else tuple(points)


def _stepped(point: Point, direction: Point, distance: float) -> Point:
    return point[0] + direction[0] * distance, point[1] + direction[1] * distance


def _path_length(points: tuple[Point, ...]) -> float:
    return sum(hypot(b[0] - a[0], b[1] - a[1]) for a, b in itertools.pairwise(points))


def _mm(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=4)
