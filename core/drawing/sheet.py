"""What a drawing is made of, whatever becomes of it: a file, a print or a preview.

A sheet has x to the right and y up, in metres. Its groups are drawn in their order. What a
group is for decides how it looks, so that a cutter can tell its lines apart by colour.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import Enum
from typing import TYPE_CHECKING, Final

from core.shapes.outline import Outline, Vertex

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.layout.model import Point


class Purpose(Enum):
    """What a group of items is for, in the order of drawing: inside is cut before outside."""

    COPPER = "copper"
    GROUND_COPPER = "ground-copper"
    TRIM = "trim"
    FRAME = "frame"
    DIMENSION = "dimensions"
    RULER = "rulers"
    REGISTRATION = "registration"
    NOTES = "notes"
    WARNING = "warning"
    PAD = "pads"
    SCORE = "score"
    FOLD = "fold"
    DRILL = "drill"
    CUT_INSIDE = "cut-inside"
    CUT_OUTSIDE = "cut-outside"


@dataclass(frozen=True)
class Look:
    """How items of one purpose look.

    Attributes
    ----------
    ink : str
        Colour of lines and text, "#rrggbb"; empty for no line.
    width : float
        Of lines, m.
    fill : str
        Colour of areas, "#rrggbb"; empty for none.
    dash : float
        Length of dashes and of the gaps between them, m; 0 for a whole line.
    """

    ink: str
    width: float = 0.1e-3
    fill: str = ""
    dash: float = 0.0


_LOOKS: Final = {
    Purpose.COPPER: Look("", fill="#f3dcc4"),
    Purpose.GROUND_COPPER: Look("", fill="#dfe6ea"),
    Purpose.TRIM: Look("#b9c2c9", dash=2e-3),
    Purpose.FRAME: Look("#7d8a95", 0.15e-3),
    Purpose.DIMENSION: Look("#5c6b78", 0.07e-3),
    Purpose.RULER: Look("#20262b", 0.12e-3),
    Purpose.REGISTRATION: Look("#20262b"),
    Purpose.NOTES: Look("#20262b", 0.2e-3),
    Purpose.WARNING: Look("#a3341a", 0.25e-3),
    Purpose.PAD: Look("#8a4b14", 0.15e-3),
    Purpose.SCORE: Look("#0b5fa5"),
    Purpose.FOLD: Look("#1d7a4d", dash=3e-3),
    Purpose.DRILL: Look("#000000"),
    Purpose.CUT_INSIDE: Look("#a0209a"),
    Purpose.CUT_OUTSIDE: Look("#d0021b"),
}


def look(purpose: Purpose) -> Look:
    """How items of a purpose look.

    Parameters
    ----------
    purpose : Purpose

    Returns
    -------
    Look
    """
    return _LOOKS[purpose]


@dataclass(frozen=True)
class Area:
    """Closed rings, filled by the even-odd rule and stroked, as the look has it."""

    rings: tuple[Outline, ...]

    def moved(self, x: float, y: float) -> Area:
        """Area moved by (x, y), m."""
        return Area(
            tuple(
                Outline(tuple(Vertex(v.x + x, v.y + y, v.bulge) for v in ring.vertices))
                for ring in self.rings
            )
        )


@dataclass(frozen=True)
class Line:
    """Open polyline through points, m."""

    points: tuple[Point, ...]

    def moved(self, x: float, y: float) -> Line:
        """Line moved by (x, y), m."""
        return Line(tuple((px + x, py + y) for px, py in self.points))


@dataclass(frozen=True)
class Circle:
    """Stroked circle: centre and diameter, m."""

    x: float
    y: float
    diameter: float

    def moved(self, x: float, y: float) -> Circle:
        """Circle moved by (x, y), m."""
        return Circle(self.x + x, self.y + y, self.diameter)


class Anchor(Enum):
    """Which part of a text stands at its position."""

    START = "start"
    MIDDLE = "middle"
    END = "end"


@dataclass(frozen=True)
class Text:
    """One line of text.

    Attributes
    ----------
    x, y : float
        Point of the baseline that the anchor names, m.
    text : str
    height : float
        Of the letters' body (em), m.
    anchor : Anchor
    upright : bool
        False where it reads upwards, turned a quarter counter-clockwise.
    """

    x: float
    y: float
    text: str
    height: float
    anchor: Anchor = Anchor.START
    upright: bool = True

    def moved(self, x: float, y: float) -> Text:
        """Text moved by (x, y), m."""
        return replace(self, x=self.x + x, y=self.y + y)


Item = Area | Line | Circle | Text


@dataclass(frozen=True)
class Box:
    """Upright rectangle, m."""

    left: float
    bottom: float
    right: float
    top: float

    @property
    def width(self) -> float:
        """Along x, m."""
        return self.right - self.left

    @property
    def length(self) -> float:
        """Along y, m."""
        return self.top - self.bottom

    def moved(self, x: float, y: float) -> Box:
        """Box moved by (x, y), m."""
        return Box(self.left + x, self.bottom + y, self.right + x, self.top + y)


@dataclass(frozen=True)
class Ink:
    """One item and what it is for."""

    purpose: Purpose
    item: Item

    def moved(self, x: float, y: float) -> Ink:
        """The same, moved by (x, y), m."""
        return Ink(self.purpose, self.item.moved(x, y))


@dataclass(frozen=True)
class Group:
    """Items of one purpose, shown only inside `clip` where there is one."""

    purpose: Purpose
    items: tuple[Item, ...]
    clip: Box | None = None


@dataclass(frozen=True)
class Sheet:
    """One page or one file.

    Attributes
    ----------
    title : str
    box : Box
        Paper, or the bounds of the drawing, m.
    groups : tuple of Group
        In the order of drawing.
    """

    title: str
    box: Box
    groups: tuple[Group, ...]


def grouped(inks: Iterable[Ink], clip: Box | None = None) -> tuple[Group, ...]:
    """Sort items into groups, in the order of `Purpose`.

    Parameters
    ----------
    inks : iterable of Ink
    clip : Box, optional
        Shown part, m.

    Returns
    -------
    tuple of Group
        Without empty ones.
    """
    sorted_items: dict[Purpose, list[Item]] = {purpose: [] for purpose in Purpose}
    for ink in inks:
        sorted_items[ink.purpose].append(ink.item)
    return tuple(
        Group(purpose, tuple(items), clip) for purpose, items in sorted_items.items() if items
    )
