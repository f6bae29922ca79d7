"""PDF at true scale: one page per sheet, no print scaling asked for, embedded typeface."""

from __future__ import annotations

from io import BytesIO
from math import atan, cos, sin, tan
from typing import TYPE_CHECKING, Any, Final, cast

from reportlab.pdfbase.pdfmetrics import getRegisteredFontNames, registerFont
from reportlab.pdfbase.ttfonts import TTFont
from reportlab.pdfgen.canvas import Canvas

from core.drawing.sheet import Anchor, Area, Circle, Group, Item, Line, Look, Sheet, Text, look
from core.formats.glyphs import font_bytes
from core.shapes.outline import Vertex, arc_centre

if TYPE_CHECKING:
    from collections.abc import Sequence

    from reportlab.pdfgen.pathobject import PDFPathObject


_POINT: Final = 72 / 25.4e-3  # PDF units in a metre
_FONT: Final = "DejaVuSans"
_LARGEST_TURN: Final = 0.55  # rad: a cubic strays from its arc by less than 1e-8 of the radius
_CIRCLE: Final = (Vertex(-0.5, 0.0, 1.0), Vertex(0.5, 0.0, 1.0))


def pdf_bytes(sheets: Sequence[Sheet]) -> bytes:
    """Write sheets as the pages of one PDF.

    Parameters
    ----------
    sheets : sequence of Sheet
        At least one.

    Returns
    -------
    bytes
        The same for the same sheets: no date is written.
    """
    if _FONT not in getRegisteredFontNames():
        registerFont(TTFont(_FONT, BytesIO(font_bytes())))
    buffer = BytesIO()
    # Without an initial font of ours the file would name one that it never uses.
    initial = cast("Any", _FONT)  # the library's types have a number here
    canvas = Canvas(buffer, pdfVersion=(1, 6), invariant=True, initialFontName=initial)
    canvas.setViewerPreference("PrintScaling", "None")
    canvas.setTitle(sheets[0].title)
    canvas.setCreator("Kerfwave")
    canvas.setAuthor("")
    for sheet in sheets:
        canvas.setPageSize((sheet.box.width * _POINT, sheet.box.length * _POINT))
        for group in sheet.groups:
            _draw_group(canvas, group, sheet)
        canvas.showPage()
    canvas.save()
    return buffer.getvalue()


def _draw_group(canvas: Canvas, group: Group, sheet: Sheet) -> None:
    style = look(group.purpose)
    canvas.saveState()
    canvas.translate(-sheet.box.left * _POINT, -sheet.box.bottom * _POINT)
    if group.clip is not None:
        clip = canvas.beginPath()
        box = group.clip
        clip.rect(*_points(box.left, box.bottom), *_points(box.width, box.length))
        canvas.clipPath(clip, stroke=0, fill=0)
    canvas.setLineWidth(style.width * _POINT)
    canvas.setLineJoin(1)
    canvas.setStrokeColor(style.ink or "#000000")
    canvas.setFillColor(style.fill or style.ink)
    if style.dash:
        canvas.setDash(style.dash * _POINT, style.dash * _POINT)
    for item in group.items:
        _draw(canvas, item, style)
    canvas.restoreState()


def _draw(canvas: Canvas, item: Item, style: Look) -> None:
    if isinstance(item, Text):
        _draw_text(canvas, item)
        return
    path = canvas.beginPath()
    filled = False
    if isinstance(item, Area):
        filled = bool(style.fill)
        for ring in item.rings:
            _add_ring(path, ring.vertices)
    elif isinstance(item, Circle):
        corners = [
            Vertex(item.x + v.x * item.diameter, item.y + v.y * item.diameter, v.bulge)
            for v in _CIRCLE
        ]
        _add_ring(path, corners)
    else:
        _add_line(path, item)
    canvas.drawPath(path, stroke=int(bool(style.ink)), fill=int(filled), fillMode=0)


def _draw_text(canvas: Canvas, item: Text) -> None:
    canvas.setFont(_FONT, item.height * _POINT)
    canvas.saveState()
    canvas.translate(*_points(item.x, item.y))
    if not item.upright:
        canvas.rotate(90)
    draw = {
        Anchor.START: canvas.drawString,
        Anchor.MIDDLE: canvas.drawCentredString,
        Anchor.END: canvas.drawRightString,
    }[item.anchor]
    draw(0, 0, item.text)
    canvas.restoreState()


def _add_line(path: PDFPathObject, line: Line) -> None:
    path.moveTo(*_points(*line.points[0]))
    for x, y in line.points[1:]:
        path.lineTo(*_points(x, y))


def _add_ring(path: PDFPathObject, vertices: Sequence[Vertex]) -> None:
    path.moveTo(*_points(vertices[0].x, vertices[0].y))
    for start, end in zip(vertices, (*vertices[1:], vertices[0]), strict=True):
        if start.bulge:
            _add_arc(path, start, end)
        elif end is not vertices[0]:
            path.lineTo(*_points(end.x, end.y))
    path.close()


def _add_arc(path: PDFPathObject, start: Vertex, end: Vertex) -> None:
    """Arc as cubics, each touching the circle at its ends."""
    x, y, _ = arc_centre(start, end)
    turn = 4.0 * atan(start.bulge)
    count = max(1, int(abs(turn) / _LARGEST_TURN) + 1)
    step = turn / count
    pull = 4.0 / 3.0 * tan(step / 4.0)
    c, s = cos(step), sin(step)
    ax, ay = start.x - x, start.y - y
    for i in range(count):
        bx, by = ax * c - ay * s, ax * s + ay * c
        if i == count - 1:
            bx, by = end.x - x, end.y - y
        path.curveTo(
            *_points(x + ax - pull * ay, y + ay + pull * ax),
            *_points(x + bx + pull * by, y + by - pull * bx),
            *_points(x + bx, y + by),
        )
        ax, ay = bx, by


def _points(x: float, y: float) -> tuple[float, float]:
    """Metres to PDF units."""
    return x * _POINT, y * _POINT
