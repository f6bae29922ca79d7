"""What can be pulled on the Mat, and what a pull does to the design.

Each handle moves with the hand. A handle in the middle of something centred, such as a side of
the element, moves the opposite side as well: its gain is 2.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable
from dataclasses import dataclass, replace
from math import copysign, hypot
from typing import TYPE_CHECKING

from core.design import edit
from core.design.feed import DualEdge
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround
from core.errors import InputError
from core.layout.route import find_route

if TYPE_CHECKING:
    from core.design.feed import ProbeFeed
    from core.design.model import Design
    from core.layout.route import Route

Point = tuple[float, float]


@dataclass(frozen=True)
class Pull:
    """A parameter that grows by `gain` metres for a metre moved along `way`."""

    key: str
    way: Point
    gain: float = 1.0


@dataclass(frozen=True)
class Handle:
    """One thing to pull.

    Attributes
    ----------
    name : str
        Dotted name of the parameter that it stands for; a second handle for it adds a word.
    label : str
        Words for people.
    x, y : float
        Where it sits on the Mat, m.
    pulls : tuple of Pull
        In the frame of the Mat, so already mirrored for a left-hand antenna.
    rail : tuple of Point
        Path that it slides along instead of a straight way; empty for none.
    """

    name: str
    label: str
    x: float
    y: float
    pulls: tuple[Pull, ...]
    rail: tuple[Point, ...] = ()


Words = Callable[[Handle], str]
"""Tells what a handle stands at."""


def no_words(_handle: Handle) -> str:
    """Words of a state that shows nothing."""
    return ""


def plan_handles(design: Design) -> tuple[Handle, ...]:
    """Handles of the plan view, those that matter most first."""
    width, length = design.element.width / 2, design.element.length / 2
    found = [
        Handle("element.width", "Width", -width, length / 3, (Pull("element.width", (-1, 0), 2),)),
        Handle("element.length", "Length", width / 3, length, (Pull("element.length", (0, 1), 2),)),
    ]
    if isinstance(design.feed, DualEdge):
        route = find_route(design.element, design.feed, design.making)
        found += _branch_handles(design, design.feed, route)
    else:
        found += _probe_handles(design.feed)
    found += _ground_handles(design)
    found += [
        Handle(
            "element.width right", "Width", width, length / 3, (Pull("element.width", (1, 0), 2),)
        ),
        Handle(
            "element.length low",
            "Length",
            -width / 3,
            -length,
            (Pull("element.length", (0, -1), 2),),
        ),
    ]
    if design.brief.polarisation is Polarisation.LHCP:
        return tuple(map(_mirrored, found))
    return tuple(found)


def settled(design: Design) -> Design:
    """Return the design with its landing points where they are drawn.

    A delay strip that is too short pulls them towards the corner. A pull on one of them starts
    from there, and leaves the other in its place.
    """
    feed = design.feed
    if not isinstance(feed, DualEdge):
        return design
    route = find_route(design.element, feed, design.making)
    first = replace(feed.first, landing=max(route.first_landing, 0.0))
    second = replace(feed.second, landing=max(route.second_landing, 0.0))
    return replace(design, feed=replace(feed, first=first, second=second))


def pulled(design: Design, handle: Handle, across: float, up: float) -> Design:
    """Return the design after a handle is moved by so much (m) from where `design` has it.

    Stops where a parameter would leave its range.
    """
    before = design
    for pull in handle.pulls:
        if handle.rail:
            moved = _along(handle.rail, (handle.x + across, handle.y + up))
            moved -= _along(handle.rail, (handle.x, handle.y))
        else:
            moved = across * pull.way[0] + up * pull.way[1]
        if moved:
            design = _changed(design, pull.key, pull.gain * moved)
    lands = any(pull.key.endswith(".landing") for pull in handle.pulls)
    return before if lands and design == settled(before) else design


def nudged(design: Design, handle: Handle, across: float, up: float) -> Design:
    """Return the design after an arrow key on a handle: its number grows or shrinks by that much.

    `across` or `up` is the size of the step (m), the other is 0.
    """
    size = abs(across) + abs(up)
    for pull in handle.pulls:
        along = across * pull.way[0] + up * (1.0 if handle.rail else pull.way[1])
        if abs(along) > size / 2:
            design = _changed(design, pull.key, copysign(size, along))
    return design


def _changed(design: Design, key: str, change: float) -> Design:
    """Return the design with one number changed, and what hangs on it."""
    if not key.endswith(".landing"):
        return _grown(design, key, change)
    design = _grown(settled(design), key, change)
    return _with_other_end(design, "second" if ".first." in key else "first")


def _with_other_end(design: Design, other: str) -> Design:
    """Return the design with the other landing point drawn in by what the delay strip lacks.

    The strip keeps its length, like a rope round the corner: where one end is pulled out, the
    other follows, so that the pulled one stays under the hand.
    """
    feed = design.feed
    assert isinstance(feed, DualEdge)
    route = find_route(design.element, feed, design.making)
    lacking = feed.first.landing - route.first_landing
    lacking += feed.second.landing - route.second_landing
    branch = getattr(feed, other)
    if lacking <= 0.0 or branch.landing - lacking < branch.width / 2:
        return design
    return _grown(design, f"feed.{other}.landing", -lacking)


def _grown(design: Design, key: str, change: float) -> Design:
    old = edit.value_at(design, key)
    assert isinstance(old, float)
    try:
        # Twelve digits are a thousand times finer than an atom at this size.
        return edit.with_number(design, key, float(f"{old + change:.12g}"))
    except InputError:
        return design


def _branch_handles(design: Design, feed: DualEdge, route: Route) -> list[Handle]:
    right, bottom = design.element.width / 2, -design.element.length / 2
    start, end = route.strip[0], route.strip[-1]
    half = feed.delay_width / 2
    first_x, second_y = start[0], end[1]
    first_gap, second_gap = route.strip[1], route.strip[-2]
    outer, way = _outermost(route)
    lead = route.lead
    found = [
        _handle("feed.first.landing", "First landing", first_x, bottom, (-1, 0)),
        _handle("feed.second.landing", "Second landing", right, second_y, (0, 1)),
        _handle(
            "feed.first.gap", "First gap", (first_x + first_gap[0]) / 2, start[1] + half, (0, -1)
        ),
        _handle(
            "feed.second.gap", "Second gap", end[0] - half, (second_y + second_gap[1]) / 2, (1, 0)
        ),
        _handle("feed.delay_length", "Delay strip length", *outer, way, 2),
        Handle("feed.tee", "Tee", *route.tee, (Pull("feed.tee", (1, 0)),), route.strip),
        _handle(
            "feed.first.width",
            "First branch width",
            first_x - feed.first.width / 2,
            bottom - feed.first.gap / 2,
            (-1, 0),
            2,
        ),
        _handle(
            "feed.second.width",
            "Second branch width",
            right + feed.second.gap / 2,
            second_y + feed.second.width / 2,
            (0, 1),
            2,
        ),
        _handle(
            "feed.delay_width",
            "Delay strip width",
            end[0] + half,
            second_y + (second_gap[1] - second_y) / 4,
            (1, 0),
        ),
    ]
    if len(lead) > 1:
        last = _direction(lead[-2], lead[-1])
        found.append(_handle("feed.lead_in.length", "Lead-in length", *lead[-1], last))
    return found


def _probe_handles(feed: ProbeFeed) -> list[Handle]:
    pulls = (Pull("feed.x", (1, 0)), Pull("feed.y", (0, 1)))
    return [Handle("feed.x", "Probe", feed.x, feed.y, pulls)]


def _ground_handles(design: Design) -> list[Handle]:
    ground = design.stock.ground
    x, y = ground.offset_x, ground.offset_y
    if isinstance(ground, DiscGround):
        key, half = "stock.ground.diameter", ground.diameter / 2
        slant = half * 0.5**0.5
        way = (0.5**0.5, 0.5**0.5)
        return [_handle(key, "Ground diameter", x + slant, y + slant, way, 2)]
    return [
        _handle("stock.ground.width", "Ground width", x + ground.width / 2, y, (1, 0), 2),
        _handle("stock.ground.length", "Ground length", x, y + ground.length / 2, (0, 1), 2),
    ]


def _handle(key: str, label: str, x: float, y: float, way: Point, gain: float = 1.0) -> Handle:
    return Handle(key, label, x, y, (Pull(key, way, gain),))


def _outermost(route: Route) -> tuple[Point, Point]:
    """Middle of the delay strip's outer leg, and the way in which pulling makes it longer."""
    points = route.strip
    corner = points[0][1], points[-1][0]
    lowest = min(point[1] for point in points)
    if lowest < corner[0]:
        leg = [point for point in points if point[1] == lowest]
        return ((leg[0][0] + leg[-1][0]) / 2, lowest), (0.0, -1.0)
    rightmost = max(point[0] for point in points)
    leg = [point for point in points if point[0] == rightmost]
    if rightmost > corner[1]:
        return (rightmost, (leg[0][1] + leg[-1][1]) / 2), (1.0, 0.0)
    return (corner[1], corner[0]), (1.0, 0.0)


def _mirrored(handle: Handle) -> Handle:
    pulls = tuple(
        replace(pull, way=(-pull.way[0], pull.way[1]), gain=pull.gain) for pull in handle.pulls
    )
    rail = tuple((-x, y) for x, y in handle.rail)
    return replace(handle, x=-handle.x, pulls=pulls, rail=rail)


def _along(path: tuple[Point, ...], point: Point) -> float:
    """Distance along a path of the place on it that is nearest to a point."""
    best, walked, found = float("inf"), 0.0, 0.0
    for a, b in itertools.pairwise(path):
        span = hypot(b[0] - a[0], b[1] - a[1])
        way = _direction(a, b)
        along = (point[0] - a[0]) * way[0] + (point[1] - a[1]) * way[1]
        along = min(max(along, 0.0), span)
        away = hypot(a[0] + way[0] * along - point[0], a[1] + way[1] * along - point[1])
        if away < best:
            best, found = away, walked + along
        walked += span
    return found


def _direction(a: Point, b: Point) -> Point:
    span = hypot(b[0] - a[0], b[1] - a[1])
    return (b[0] - a[0]) / span, (b[1] - a[1]) / span
