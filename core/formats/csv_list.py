"""Cut list as comma-separated text: one part or hole a line, millimetres."""

from __future__ import annotations

import csv
from io import StringIO
from typing import TYPE_CHECKING

from core.drawing.parts import Part, disc_diameter, parts
from core.layout.model import Role, Segment

if TYPE_CHECKING:
    from core.layout.model import Layout

_HEADER = (
    "piece",
    "material",
    "quantity",
    "shape",
    "width_mm",
    "length_mm",
    "thickness_mm",
    "area_mm2",
    "strip_length_mm",
    "holes_mm",
)


def cut_list_bytes(layout: Layout) -> bytes:
    """Write the cut list.

    Parameters
    ----------
    layout : Layout

    Returns
    -------
    bytes
        UTF-8; sizes and area of one piece, outer size of the stock it takes; strip length is
        that of all strips along their centre lines; holes by diameter.
    """
    stream = StringIO(newline="")
    writer = csv.writer(stream)
    writer.writerow(_HEADER)
    for part in parts(layout):
        writer.writerow(_row(part, layout))
    return stream.getvalue().encode()


def _row(part: Part, layout: Layout) -> tuple[str, ...]:
    box = part.box
    diameter = disc_diameter(part.regions[0]) if len(part.regions) == 1 else None
    corners = [vertex for region in part.regions for vertex in region.exterior.vertices]
    outline = "rectangle" if len(corners) == 4 else "outline"
    strips = _strip_length(layout) if part.role is Role.TOP_COPPER else 0.0
    return (
        part.name,
        part.material,
        str(part.quantity),
        outline if diameter is None else "disc",
        _text(box.width * 1e3),
        _text(box.length * 1e3),
        _text(part.thickness * 1e3),
        _text(part.area * 1e6),
        _text(strips * 1e3) if strips else "",
        "; ".join(_text(hole.diameter * 1e3) for hole in part.holes),
    )


def _strip_length(layout: Layout) -> float:
    """Length of all strips along their centre lines, m."""
    runs = (layout.feed.trunk, *layout.feed.arms)
    return sum(one.length for run in runs for one in run if isinstance(one, Segment))


def _text(number: float) -> str:
    """Number with a decimal point, to a tenth of a micrometre, without idle zeros."""
    return f"{number:.4f}".rstrip("0").rstrip(".")
