"""Cells: what stays together on a page, such as a part with its dimensions and its name."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.drawing.lettering import text_width, wrapped
from core.drawing.measures import dimension_lines
from core.drawing.parts import disc_diameter, is_opening
from core.drawing.sheet import Area, Box, Circle, Ink, Line, Purpose, Text
from core.layout.model import Hole, Mark, MarkKind, Point, Role
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.drawing.parts import Part
    from core.shapes.outline import Outline

_NAME: Final = 2.9e-3
_SMALL: Final = 2.3e-3
_NARROWEST: Final = 62e-3  # a caption may be so wide beside a small part
_LETTER: Final = 6e-3  # height of the F that tells front from back
_MARKS: Final = {MarkKind.SCORE: Purpose.SCORE, MarkKind.FOLD: Purpose.FOLD}


@dataclass(frozen=True)
class Cell:
    """What stays together.

    Attributes
    ----------
    name : str
    inks : tuple of Ink
    box : Box
        Bounds with everything, m.
    outlines : tuple of Outline
        For the assembly map, m.
    spared : tuple of Point
        Where no joint between sheets should run, m.
    whole : bool
        Never spread over several sheets.
    """

    name: str
    inks: tuple[Ink, ...]
    box: Box
    outlines: tuple[Outline, ...] = ()
    spared: tuple[Point, ...] = ()
    whole: bool = False


def part_cell(part: Part, mirrored: bool) -> Cell:
    """Draw a part in its own place, with dimensions and caption.

    Parameters
    ----------
    part : Part
    mirrored : bool
        As the part is; for the caption.

    Returns
    -------
    Cell
    """
    measures, box = dimension_lines(part.dimensions, part.box)
    inks = [*_outlines(part), *_marks(part), *measures]
    captions, box = _caption(part, box, mirrored)
    return Cell(
        part.name,
        (*inks, *captions),
        box,
        tuple(region.exterior for region in part.regions),
        tuple((hole.x, hole.y) for hole in part.holes),
    )


def _outlines(part: Part) -> list[Ink]:
    inks = []
    for region in part.regions:
        if part.role is Role.TOP_COPPER:
            inks.append(Ink(Purpose.COPPER, Area((region.exterior, *region.holes))))
        inks.append(Ink(Purpose.CUT_OUTSIDE, Area((region.exterior,))))
        inks += [Ink(Purpose.CUT_INSIDE, Area((ring,))) for ring in region.holes]
    return inks


def _marks(part: Part) -> list[Ink]:
    """Scores, pads, and drills with their centres."""
    inks = [ink for mark in part.marks for ink in _mark(mark)]
    for hole in part.holes:
        inks += _centre(hole)
        if not is_opening(hole, part.regions):
            inks.append(Ink(Purpose.DRILL, Circle(hole.x, hole.y, hole.diameter)))
    return inks


def _mark(mark: Mark) -> list[Ink]:
    if mark.kind is MarkKind.PAD:
        return [Ink(Purpose.PAD, Circle(x, y, mark.diameter)) for x, y in mark.points]
    return [Ink(_MARKS[mark.kind], Line(mark.points))]


def _centre(hole: Hole) -> list[Ink]:
    """Cross on the centre of a hole."""
    arm = max(1.2e-3, hole.diameter / 2 + 0.8e-3)
    x, y = hole.x, hole.y
    return [
        Ink(Purpose.DRILL, Line(((x - arm, y), (x + arm, y)))),
        Ink(Purpose.DRILL, Line(((x, y - arm), (x, y + arm)))),
    ]


def _caption(part: Part, box: Box, mirrored: bool) -> tuple[list[Ink], Box]:
    """Name and stock of a part above it, and the box grown by them."""
    facts = [
        f"{part.material}, {_length(part.thickness)} thick",
        _size(part),
        f"cut {part.quantity}",
        *(["mirrored"] if mirrored else []),
    ]
    left = box.left
    indent = _LETTER if part.role is Role.TOP_COPPER else 0.0
    width = max(box.width, _NARROWEST) - indent
    name, small = wrapped(part.name, _NAME, width), wrapped(", ".join(facts), _SMALL, width)
    y = box.top + 3e-3 + 3.2e-3 * len(small)
    top = y + 4e-3 * len(name)
    inks = []
    baseline = top - 3.2e-3
    for height, lines, pitch in ((_NAME, name, 4e-3), (_SMALL, small, 3.2e-3)):
        for line in lines:
            inks.append(Ink(Purpose.NOTES, Text(left + indent, baseline, line, height)))
            baseline -= pitch
    if indent:
        inks.append(_letter_f(left, top - _LETTER, mirrored))
    widest = max(
        *(text_width(line, _NAME) for line in name), *(text_width(line, _SMALL) for line in small)
    )
    return inks, Box(left, box.bottom, max(box.right, left + indent + widest), top)


def _letter_f(x: float, y: float, mirrored: bool) -> Ink:
    """An F drawn as one line, mirrored with the part: it tells which side is seen."""
    width, top, middle = 0.55 * _LETTER, y + _LETTER, y + 0.55 * _LETTER
    stem, tip = (x + width, x) if mirrored else (x, x + width)
    bar = stem + 0.75 * (tip - stem)
    points = ((stem, y), (stem, middle), (bar, middle), (stem, middle), (stem, top), (tip, top))
    return Ink(Purpose.NOTES, Line(points))


def _size(part: Part) -> str:
    """Size of the stock that a part takes."""
    diameter = disc_diameter(part.regions[0])
    if diameter is not None and len(part.regions) == 1:
        return f"diameter {_length(diameter)}"
    return f"{_length(part.box.width)} x {_length(part.box.length)}"


def _length(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH).replace(" ", "\u00a0")  # never broken
