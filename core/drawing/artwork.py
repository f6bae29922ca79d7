"""Artwork for etching: copper of both sides, outline, drills and scores, seen from the front.

The frame is that of the layout: the origin is the element's centre. Copper is grown by the
stated undercut allowance; artwork is never mirrored.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from core.design.record import short_code
from core.drawing.notes import NOT_CHECKED
from core.drawing.parts import bounds, is_opening
from core.drawing.sheet import Area, Circle, Ink, Line, Purpose, Sheet, Text, grouped
from core.layout.build import top_copper
from core.layout.model import MarkKind, Role
from core.shapes.booleans import grown
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.model import Design
    from core.layout.model import Layout
    from core.shapes.outline import Region

_LETTERS = 2.5e-3
_PURPOSES = {MarkKind.SCORE: Purpose.SCORE, MarkKind.FOLD: Purpose.FOLD}


def artwork_sheet(design: Design, layout: Layout, *, field_check: str = "") -> Sheet:
    """Artwork of a layout.

    Parameters
    ----------
    design : Design
    layout : Layout
        Of that design.
    field_check : str
        How the field solver has checked this very layout; empty where it has not.

    Returns
    -------
    Sheet
        Copper areas (rings of a region together), cuts, drills, scores and notes; m.

    Raises
    ------
    LayoutError
        If the undercut allowance closes a gap.
    """
    undercut = design.making.undercut
    ground = [piece.region for piece in layout.pieces if piece.role is Role.GROUND_COPPER]
    top, bottom = grown(top_copper(layout), undercut), grown(ground, undercut)
    board = _board(layout)
    box = bounds([*top, *bottom, *board])
    inks = [
        *(Ink(Purpose.COPPER, Area((one.exterior, *one.holes))) for one in top),
        *(Ink(Purpose.GROUND_COPPER, Area((one.exterior, *one.holes))) for one in bottom),
        *(Ink(Purpose.CUT_OUTSIDE, Area((one.exterior,))) for one in board),
        *_drills(layout),
        *_scores(layout),
    ]
    identity = f"{design.name}, revision {design.revision}, code {short_code(design)}"
    lines = [
        identity,
        f"undercut allowance {format_quantity(undercut, Quantity.LENGTH, unit='mm')} a side",
        "unit mm; both sides seen from the front, not mirrored",
        field_check or NOT_CHECKED,
    ]
    for i, line in enumerate(lines, 1):
        text = Text(box.left, box.bottom - 2 * _LETTERS * i, line, _LETTERS)
        inks.append(Ink(Purpose.NOTES, text))
    return Sheet(identity, box, grouped(inks))


def _board(layout: Layout) -> tuple[Region, ...]:
    """Different outlines of the spacers that are cut; of the ground plate where none is."""
    pieces = [piece for piece in layout.pieces if piece.role is Role.SPACER and piece.cut]
    pieces = pieces or [piece for piece in layout.pieces if piece.role is Role.GROUND_COPPER]
    outlines = {piece.region.exterior: piece.region for piece in pieces}
    return tuple(outlines.values())


def _drills(layout: Layout) -> list[Ink]:
    """Holes that go through more than copper which leaves them open anyway."""
    inks = []
    for hole in layout.holes:
        pieces = [piece for piece in layout.pieces if piece.name in hole.through]
        etched = all(
            piece.role is not Role.SPACER and is_opening(hole, [piece.region]) for piece in pieces
        )
        if not etched:
            inks.append(Ink(Purpose.DRILL, Circle(hole.x, hole.y, hole.diameter)))
    return inks


def _scores(layout: Layout) -> list[Ink]:
    """Scores and folds, each line once."""
    lines = {
        (mark.kind, mark.points): None for mark in layout.marks if mark.kind is not MarkKind.PAD
    }
    return [Ink(_PURPOSES[kind], Line(points)) for kind, points in lines]
