"""DXF R2000 in millimetres: closed polylines per ring, circles for drills, plain layers."""

from __future__ import annotations

import unicodedata
from io import StringIO
from typing import TYPE_CHECKING, Any, Final, cast

import ezdxf
from ezdxf.enums import TextEntityAlignment
from ezdxf.filemanagement import new

from core.drawing.sheet import Anchor, Area, Circle, Item, Purpose, Sheet, Text
from core.shapes.outline import facets

if TYPE_CHECKING:
    from ezdxf.layouts.layout import Modelspace

    from core.shapes.outline import Outline

_MM: Final = 1000.0

# Name and colour index of the layer that each purpose goes to; what is not here is left out.
_LAYERS: Final = {
    Purpose.COPPER: ("COPPER_TOP", 30),
    Purpose.GROUND_COPPER: ("COPPER_BOTTOM", 140),
    Purpose.CUT_OUTSIDE: ("OUTLINE", 7),
    Purpose.CUT_INSIDE: ("OUTLINE", 7),
    Purpose.DRILL: ("DRILL", 3),
    Purpose.SCORE: ("SCORE", 4),
    Purpose.FOLD: ("SCORE", 4),
    Purpose.NOTES: ("NOTES", 8),
}
_ALIGNMENTS: Final = {
    Anchor.START: TextEntityAlignment.LEFT,
    Anchor.MIDDLE: TextEntityAlignment.CENTER,
    Anchor.END: TextEntityAlignment.RIGHT,
}

# Otherwise the library writes the time of day and random identifiers into every file.
cast("Any", ezdxf).options.write_fixed_meta_data_for_testing = True


def dxf_bytes(sheet: Sheet, *, true_arcs: bool = False) -> bytes:
    """Write artwork as DXF.

    Parameters
    ----------
    sheet : Sheet
    true_arcs : bool
        Arcs as bulges; else facets that keep each ring's area, within 5 µm of the arc.

    Returns
    -------
    bytes
        The same for the same sheet: no date and no identifier by chance is written.
    """
    drawing = new("R2000", setup=False)
    drawing.header["$INSUNITS"] = 4  # millimetres
    drawing.header["$MEASUREMENT"] = 1  # metric
    drawing.header["$LUNITS"] = 2  # decimal
    for name, colour in dict.fromkeys(_LAYERS.values()):
        drawing.layers.add(name, color=colour)
    space = drawing.modelspace()
    for group in sheet.groups:
        name, _ = _LAYERS[group.purpose]
        for item in group.items:
            _add(space, item, name, true_arcs)
    stream = StringIO(newline="")
    drawing.write(stream)
    return stream.getvalue().encode(drawing.output_encoding)


def _add(space: Modelspace, item: Item, layer: str, true_arcs: bool) -> None:
    attributes = {"layer": layer}
    if isinstance(item, Area):
        for ring in item.rings:
            space.add_lwpolyline(
                _ring(ring, true_arcs), format="xyb", close=True, dxfattribs=attributes
            )
    elif isinstance(item, Circle):
        space.add_circle(_xy(item.x, item.y), item.diameter / 2 * _MM, dxfattribs=attributes)
    elif isinstance(item, Text):
        text = space.add_text(
            _plain(item.text),
            height=item.height * _MM,
            rotation=0.0 if item.upright else 90.0,
            dxfattribs=attributes,
        )
        text.set_placement(_xy(item.x, item.y), align=_ALIGNMENTS[item.anchor])
    else:
        points = [_xy(x, y) for x, y in item.points]
        space.add_lwpolyline(points, dxfattribs=attributes)


def _ring(ring: Outline, true_arcs: bool) -> list[tuple[float, float, float]]:
    """Corners of a closed polyline: x, y in mm, bulge."""
    if true_arcs:
        return [(*_xy(vertex.x, vertex.y), vertex.bulge) for vertex in ring.vertices]
    return [(*_xy(x, y), 0.0) for x, y in facets(ring)]


def _xy(x: float, y: float) -> tuple[float, float]:
    """Metres to millimetres, rounded to a nanometre."""
    return round(x * _MM, 6), round(y * _MM, 6)


def _plain(text: str) -> str:
    """Text in ASCII: readers differ in what they do with other letters."""
    return unicodedata.normalize("NFKD", text).encode("ascii", "ignore").decode()
