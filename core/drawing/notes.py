"""Words on a template: title block, what it is made of, cautions, and how to check the print."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.design.polarisation import Polarisation
from core.design.record import short_code
from core.drawing.cells import Cell
from core.drawing.lettering import CAP_HEIGHT, fitting_height, wrapped
from core.drawing.measures import is_straight, label
from core.drawing.paper import MARGIN, TITLE_HEIGHT, Paper
from core.drawing.rules import SQUARE, check_square, inch_rule
from core.drawing.sheet import Anchor, Area, Box, Ink, Line, Purpose, Text
from core.findings import Severity
from core.materials.cautions import cautions_for
from core.materials.table import dielectrics
from core.shapes.outline import rectangle
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.model import Design
    from core.layout.model import Layout

NOT_CHECKED: Final = "NOT FIELD-CHECKED"

_WIDTH: Final = 176e-3  # of the notes: as wide as the narrowest paper's window allows
_COLUMN: Final = 58e-3  # where the text begins, right of the square
_SMALL: Final = 2.2e-3
_PITCH: Final = 3.1e-3
_BAND: Final = 5.5e-3  # of the title block, across its foot
_LOUD: Final = 3.6e-3
_SENSES: Final = {
    Polarisation.LINEAR: "linear polarisation",
    Polarisation.RHCP: "right-hand circular (RHCP)",
    Polarisation.LHCP: "left-hand circular (LHCP)",
}


def title_block(
    design: Design, paper: Paper, place: str, *, field_check: str, mirrored: bool
) -> list[Ink]:
    """Title block along the foot of a page.

    Parameters
    ----------
    design : Design
    paper : Paper
    place : str
        Which page this is.
    field_check : str
        How the field solver has checked this very layout; empty where it has not.
    mirrored : bool

    Returns
    -------
    list of Ink
    """
    left, right = MARGIN, paper.width - MARGIN
    bottom, top = MARGIN, MARGIN + TITLE_HEIGHT
    room, other_room = 0.58 * (right - left), 0.4 * (right - left) - 4e-3
    side = "MIRRORED, seen from behind" if mirrored else "Seen from the front"
    identity = (
        f"Revision {design.revision}, code {short_code(design)}: "
        f"{format_quantity(design.brief.frequency, Quantity.FREQUENCY)}, "
        f"{_SENSES[design.brief.polarisation]}, {design.making.process}"
    )
    middle = ((left + right) / 2, bottom + TITLE_HEIGHT / 2)
    inks = [
        Ink(Purpose.FRAME, Area((rectangle(right - left, TITLE_HEIGHT, middle),))),
        Ink(Purpose.FRAME, Line(((left, bottom + _BAND), (right, bottom + _BAND)))),
        _fitted(left + 2e-3, top - 4.2e-3, design.name, 3.4e-3, room),
        _fitted(left + 2e-3, top - 8.1e-3, identity, 2.3e-3, room),
        _fitted(right - 2e-3, top - 4.2e-3, place, 2.3e-3, other_room, Anchor.END),
        _fitted(
            right - 2e-3,
            top - 8.1e-3,
            f"{side}. Print at 100 %, actual size.",
            2.3e-3,
            other_room,
            Anchor.END,
        ),
    ]
    words = [*(["MIRRORED"] if mirrored else []), field_check or NOT_CHECKED]
    baseline = bottom + (_BAND - CAP_HEIGHT * _LOUD) / 2
    purpose = Purpose.NOTES if field_check and not mirrored else Purpose.WARNING
    text = Text(middle[0], baseline, ", ".join(words), _LOUD, Anchor.MIDDLE)
    return [*inks, Ink(purpose, text)]


def notes_cell(design: Design, layout: Layout, mirrored: bool) -> Cell:
    """Square to check the printer, materials, cautions.

    Parameters
    ----------
    design : Design
    layout : Layout
    mirrored : bool

    Returns
    -------
    Cell
        Never spread over several sheets.
    """
    inks: list[Ink] = []
    y = 0.0
    for purpose, text in _texts(design, layout, mirrored):
        for line in wrapped(text, _SMALL, _WIDTH - _COLUMN):
            y -= _PITCH
            inks.append(Ink(purpose, Text(_COLUMN, y, line, _SMALL)))
        y -= 0.8e-3
    y -= 2e-3
    inks += inch_rule(_COLUMN, y)
    inks += check_square(0.0, -SQUARE)
    for i, line in enumerate(("measured: across ____________ mm", "along ____________ mm")):
        at = -SQUARE - 4.5e-3 - 4.6e-3 * i
        inks.append(Ink(Purpose.NOTES, Text(SQUARE, at, line, _SMALL, Anchor.END)))
    bottom = min(y - 6e-3, -SQUARE - 10.5e-3)
    return Cell("notes", tuple(inks), Box(0.0, bottom, _WIDTH, 0.0), whole=True)


def _texts(design: Design, layout: Layout, mirrored: bool) -> list[tuple[Purpose, str]]:
    """Paragraphs of the notes."""
    texts = [
        "Before cutting, check the print: the rules along two edges must measure 100 mm, "
        "the square 50 mm each way.",
        f"{_facing(mirrored)} {_stack(design)}",
        f"Process: {design.making.process}, edges true to "
        f"{_length(design.making.tolerance)}. Connector "
        f"{format_quantity(design.brief.impedance, Quantity.RESISTANCE)}.",
    ]
    along = [label(one) for one in layout.dimensions if not is_straight(one) and one.value != 0.0]
    if along:
        texts.append(f"Along the centre line: {', '.join(along)}.")
    warnings = [one.message for one in layout.findings if one.severity is Severity.WARNING]
    cautions = [f"{one.topic}: {one.text}" for one in cautions_for(_occasions(design))]
    return [
        *((Purpose.NOTES, text) for text in texts),
        *((Purpose.WARNING, text) for text in warnings),
        *((Purpose.NOTES, text) for text in cautions),
    ]


def _facing(mirrored: bool) -> str:
    if mirrored:
        return (
            "MIRRORED: every part is seen from behind and the F reads backwards, for backing "
            "paper or a transfer put face down on the front; a transfer for the back of a board "
            "is printed without mirroring."
        )
    return "Every part is seen from the front, the radiating side, and the F reads right."


def _stack(design: Design) -> str:
    """Materials from the front to the back."""
    stock = design.stock
    layers = ", ".join(
        f"{layer.material} {_length(layer.thickness)}" for layer in reversed(stock.spacer)
    )
    foil = f"{stock.foil.name} {_length(stock.foil.thickness)}"
    return f"From front to back: {foil}, {layers}, ground plate of {foil}."


def _occasions(design: Design) -> set[str]:
    """What calls for a caution."""
    occasions = {design.making.process}
    for layer in design.stock.spacer:
        material = dielectrics().get(layer.material)
        if material is not None and material.melts:
            occasions.add("heat")
        if material is not None and material.drinks_water:
            occasions.add("water")
    return occasions


def _fitted(
    x: float, y: float, text: str, height: float, room: float, anchor: Anchor = Anchor.START
) -> Ink:
    """Line of text made smaller where it would not fit."""
    return Ink(Purpose.NOTES, Text(x, y, text, fitting_height(text, height, room), anchor))


def _length(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH)
