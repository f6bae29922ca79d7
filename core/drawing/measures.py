"""Dimension lines, set outside a part in lanes, so that no text lies on copper or on text.

On each side of the part, u runs along the side and v away from it; each lane holds lines
whose texts do not meet, and lines that reach outwards leave a gap round texts they pass.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import Enum
from math import hypot
from typing import TYPE_CHECKING, Final

from core.drawing.lettering import text_width
from core.drawing.sheet import Anchor, Box, Ink, Line, Purpose, Text
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.layout.model import Dimension, Point

_HEIGHT: Final = 2.3e-3  # of the letters
_FIRST: Final = 2.0e-3  # from the part to the first lane
_PITCH: Final = 4.0e-3  # from lane to lane
_LIFT: Final = 0.7e-3  # from a line to the text on it
_ROOM: Final = 1.0e-3  # on either side of a text
_TICK: Final = 0.7e-3
_SAME: Final = 1e-6


class _Side(Enum):
    """Side of a part; the text of a line always stands above it or to its left."""

    BOTTOM = "bottom"
    RIGHT = "right"
    TOP = "top"
    LEFT = "left"

    @property
    def upright(self) -> bool:
        return self in (_Side.BOTTOM, _Side.TOP)

    @property
    def text_outside(self) -> bool:
        """Whether texts stand on the far side of their line."""
        return self in (_Side.TOP, _Side.LEFT)


@dataclass(frozen=True)
class _Entry:
    """One dimension on its side: where it starts and ends (u), how far inside each end is (v)."""

    start: float
    end: float
    start_depth: float
    end_depth: float
    label: str
    lane: int = 0

    @property
    def middle(self) -> float:
        return (self.start + self.end) / 2

    @property
    def text_half(self) -> float:
        return text_width(self.label, _HEIGHT) / 2 + _ROOM

    @property
    def half(self) -> float:
        """Half of the room the entry takes in its lane."""
        return max((self.end - self.start) / 2 + _ROOM, self.text_half)


def is_straight(dimension: Dimension) -> bool:
    """Tell whether a dimension is a distance along x or y that a line can show.

    Parameters
    ----------
    dimension : Dimension

    Returns
    -------
    bool
        False for a length along bends, or one of nothing.
    """
    dx = dimension.end[0] - dimension.start[0]
    dy = dimension.end[1] - dimension.start[1]
    distance = hypot(dx, dy)
    return (
        distance > _SAME
        and min(abs(dx), abs(dy)) < _SAME
        and abs(distance - abs(dimension.value)) < _SAME
    )


def label(dimension: Dimension) -> str:
    """What is written on a dimension.

    Parameters
    ----------
    dimension : Dimension

    Returns
    -------
    str
        Such as "first gap 7 mm".
    """
    return f"{dimension.label} {format_quantity(abs(dimension.value), Quantity.LENGTH)}"


def dimension_lines(dimensions: Iterable[Dimension], box: Box) -> tuple[list[Ink], Box]:
    """Draw straight dimensions round a part.

    Parameters
    ----------
    dimensions : iterable of Dimension
    box : Box
        Bounds of the part, m.

    Returns
    -------
    inks : list of Ink
    box : Box
        The bounds with the dimensions, m.
    """
    sides: dict[_Side, list[_Entry]] = {side: [] for side in _Side}
    for dimension in dimensions:
        if is_straight(dimension):
            side = _side_of(dimension, box)
            sides[side].append(_entry(dimension, side, box))
    inks: list[Ink] = []
    around = box
    for upright in (True, False):
        taken = around  # texts beside the part keep clear of those above and below it
        for side in (side for side in _Side if side.upright is upright):
            placed = _in_lanes(sides[side])
            first = _first(placed, side, box, taken)
            for entry in placed:
                inks += _drawn(entry, placed, side, box, first)
                around = _with(around, entry, side, box, first)
    return inks, around


def _side_of(dimension: Dimension, box: Box) -> _Side:
    """Side nearest to where the layout would have the line."""
    (x0, y0), (x1, y1) = dimension.start, dimension.end
    span = hypot(x1 - x0, y1 - y0)
    if abs(y1 - y0) < _SAME:
        level = y0 + dimension.offset * (x1 - x0) / span
        return _Side.TOP if level >= (box.bottom + box.top) / 2 else _Side.BOTTOM
    level = x0 - dimension.offset * (y1 - y0) / span
    return _Side.RIGHT if level >= (box.left + box.right) / 2 else _Side.LEFT


def _entry(dimension: Dimension, side: _Side, box: Box) -> _Entry:
    ends = [_along_and_out(point, side, box) for point in (dimension.start, dimension.end)]
    (start, start_depth), (end, end_depth) = sorted(ends)
    return _Entry(start, end, start_depth, end_depth, label(dimension))


def _along_and_out(point: Point, side: _Side, box: Box) -> tuple[float, float]:
    """(u, v) of a point."""
    x, y = point
    outwards = {
        _Side.BOTTOM: box.bottom - y,
        _Side.RIGHT: x - box.right,
        _Side.TOP: y - box.top,
        _Side.LEFT: box.left - x,
    }
    return (x if side.upright else y), outwards[side]


def _point(u: float, v: float, side: _Side, box: Box) -> Point:
    """Point at (u, v)."""
    return {
        _Side.BOTTOM: (u, box.bottom - v),
        _Side.RIGHT: (box.right + v, u),
        _Side.TOP: (u, box.top + v),
        _Side.LEFT: (box.left - v, u),
    }[side]


def _in_lanes(entries: list[_Entry]) -> list[_Entry]:
    """Entries with their lanes: short ones near the part, no two texts in one place."""
    lanes: list[list[_Entry]] = []
    placed = []
    for entry in sorted(entries, key=lambda one: (one.end - one.start, one.start, one.label)):
        free = [
            all(abs(other.middle - entry.middle) >= other.half + entry.half for other in lane)
            for lane in lanes
        ]
        number = free.index(True) if True in free else len(lanes)
        if number == len(lanes):
            lanes.append([])
        lanes[number].append(entry)
        placed.append(replace(entry, lane=number))
    return placed


def _first(placed: list[_Entry], side: _Side, box: Box, taken: Box) -> float:
    """How far out the first lane begins."""
    if side.upright or all(
        box.bottom <= entry.middle - entry.half and entry.middle + entry.half <= box.top
        for entry in placed
    ):
        return _FIRST
    beyond = taken.right - box.right if side is _Side.RIGHT else box.left - taken.left
    return max(_FIRST, beyond)


def _with(around: Box, entry: _Entry, side: _Side, box: Box, first: float) -> Box:
    """Bounds that hold an entry too."""
    out = first + (entry.lane + 1) * _PITCH
    low = _point(entry.middle - entry.half, out, side, box)
    high = _point(entry.middle + entry.half, out, side, box)
    return Box(
        min(around.left, low[0]),
        min(around.bottom, low[1]),
        max(around.right, high[0]),
        max(around.top, high[1]),
    )


def _drawn(
    entry: _Entry, all_entries: list[_Entry], side: _Side, box: Box, first: float
) -> list[Ink]:
    """Line with ticks, text on it, and the lines from the part out to it."""
    level = _level(entry.lane, side, first)
    lines = [[(entry.start, level), (entry.end, level)]]
    for u, depth in ((entry.start, entry.start_depth), (entry.end, entry.end_depth)):
        lines.append([(u - _TICK, level - _TICK), (u + _TICK, level + _TICK)])
        gaps = _texts_passed(u, entry, all_entries, side, first)
        lines += _reaching_out(u, depth, level + (0.0 if side.text_outside else _TICK), gaps)
    inks = [
        Ink(Purpose.DIMENSION, Line(tuple(_point(u, v, side, box) for u, v in line)))
        for line in lines
    ]
    x, y = _point(entry.middle, level + (_LIFT if side.text_outside else -_LIFT), side, box)
    text = Text(x, y, entry.label, _HEIGHT, Anchor.MIDDLE, side.upright)
    return [*inks, Ink(Purpose.DIMENSION, text)]


def _level(lane: int, side: _Side, first: float) -> float:
    """Distance (v) of the dimension line in a lane."""
    return first + lane * _PITCH + (0.8e-3 if side.text_outside else _PITCH - 0.8e-3)


def _texts_passed(
    u: float, entry: _Entry, all_entries: list[_Entry], side: _Side, first: float
) -> list[tuple[float, float]]:
    """Spans of v, rising, in which a line outwards at u would run through a text."""
    passed = set()
    for other in all_entries:
        own = other is entry and not side.text_outside
        if (other.lane < entry.lane or own) and abs(u - other.middle) < other.text_half:
            level = _level(other.lane, side, first)
            far = level + (_PITCH - 0.8e-3 if side.text_outside else 0.0)
            near = level if side.text_outside else level - _PITCH + 0.8e-3
            passed.add((near, far))
    return sorted(passed)


def _reaching_out(
    u: float, start: float, end: float, gaps: list[tuple[float, float]]
) -> list[list[tuple[float, float]]]:
    """Pieces of the line at u from `start` to `end` that lie in no gap."""
    pieces = []
    for near, far in gaps:
        if near > start:
            pieces.append([(u, start), (u, near)])
        start = max(start, far)
    if end > start:
        pieces.append([(u, start), (u, end)])
    return pieces
