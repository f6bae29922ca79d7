"""SVG at true scale: millimetres, one layer per purpose, true arcs, no transforms."""

from __future__ import annotations

from math import atan, hypot, pi, sin
from typing import TYPE_CHECKING, Final

import svgwrite  # type: ignore[import-untyped]
from svgwrite.extensions import Inkscape  # type: ignore[import-untyped]

from core.drawing.sheet import Circle, Item, Line, Look, Sheet, Text, look
from core.errors import ExportError
from core.formats.glyphs import upward_text_path

if TYPE_CHECKING:
    from typing import Any

    from core.drawing.sheet import Box
    from core.shapes.outline import Outline, Vertex

_MM: Final = 1000.0
_FAMILY: Final = "DejaVu Sans, Verdana, sans-serif"


def svg_bytes(sheet: Sheet) -> bytes:
    """Write a sheet as SVG.

    Parameters
    ----------
    sheet : Sheet

    Returns
    -------
    bytes
        UTF-8; one user unit is one millimetre; lines of text that read upwards are outlines.

    Raises
    ------
    ExportError
        If the sheet shows only part of its drawing.
    """
    if any(group.clip is not None for group in sheet.groups):
        raise ExportError("one SVG file holds a whole drawing: a tile can be written as PDF only")
    width, length = _number(sheet.box.width), _number(sheet.box.length)
    drawing = svgwrite.Drawing(
        size=(f"{width}mm", f"{length}mm"), viewBox=f"0 0 {width} {length}", debug=False
    )
    drawing.set_desc(title=sheet.title)
    layers = Inkscape(drawing)
    for group in sheet.groups:
        label = group.purpose.value.replace("-", " ")
        layer = layers.layer(label=label, id=group.purpose.value)
        for item in group.items:
            layer.add(_element(drawing, item, look(group.purpose), sheet.box))
        drawing.add(layer)
    body: str = drawing.tostring()
    return f'<?xml version="1.0" encoding="utf-8"?>\n{body}\n'.encode()


def _element(drawing: Any, item: Item, style: Look, box: Box) -> Any:  # noqa: ANN401 - untyped library
    if isinstance(item, Text):
        return _text(drawing, item, style, box)
    if isinstance(item, Circle):
        centre = _xy(item.x, item.y, box)
        return drawing.circle(centre, _number(item.diameter / 2), **_stroke(style), fill="none")
    if isinstance(item, Line):
        points = [_xy(x, y, box) for x, y in item.points]
        return drawing.polyline(points, **_stroke(style), fill="none")
    data = " ".join(_ring(ring, box) for ring in item.rings)
    return drawing.path(data, **_stroke(style), **_fill(style))


def _text(drawing: Any, item: Text, style: Look, box: Box) -> Any:  # noqa: ANN401
    if not item.upright:
        x_mm, y_mm = (item.x - box.left) * _MM, (box.top - item.y) * _MM
        data = upward_text_path(item.text, x_mm, y_mm, item.height * _MM, item.anchor)
        path = drawing.path(data, fill=style.ink)
        path.set_desc(title=item.text)
        return path
    return drawing.text(
        item.text,
        insert=_xy(item.x, item.y, box),
        font_family=_FAMILY,
        font_size=_number(item.height),
        text_anchor=item.anchor.value,
        fill=style.ink,
    )


def _stroke(style: Look) -> dict[str, object]:
    if not style.ink:
        return {"stroke": "none"}
    stroke: dict[str, object] = {"stroke": style.ink, "stroke_width": _number(style.width)}
    if style.dash:
        stroke["stroke_dasharray"] = _number(style.dash)
    return stroke


def _fill(style: Look) -> dict[str, object]:
    return {"fill": style.fill, "fill_rule": "evenodd"} if style.fill else {"fill": "none"}


def _ring(ring: Outline, box: Box) -> str:
    """Closed path of an outline, arcs as arcs."""
    vertices = ring.vertices
    steps = [f"M {_pair(vertices[0].x, vertices[0].y, box)}"]
    for start, end in zip(vertices, (*vertices[1:], vertices[0]), strict=True):
        if start.bulge:
            steps.append(_arc(start, end, box))
        elif end is not vertices[0]:
            steps.append(f"L {_pair(end.x, end.y, box)}")
    return " ".join([*steps, "Z"])


def _arc(start: Vertex, end: Vertex, box: Box) -> str:
    turn = abs(4.0 * atan(start.bulge))
    radius = _number(hypot(end.x - start.x, end.y - start.y) / (2.0 * sin(turn / 2.0)))
    large = 1 if turn > pi else 0
    sweep = 0 if start.bulge > 0.0 else 1  # y points down here
    return f"A {radius} {radius} 0 {large} {sweep} {_pair(end.x, end.y, box)}"


def _pair(x: float, y: float, box: Box) -> str:
    across, down = _xy(x, y, box)
    return f"{across},{down}"


def _xy(x: float, y: float, box: Box) -> tuple[str, str]:
    """Position in millimetres from the upper left corner, y down."""
    return _number(x - box.left), _number(box.top - y)


def _number(metres: float) -> str:
    """Millimetres with four decimals, as short as they can be written."""
    text = f"{metres * _MM:.4f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
