"""What the pieces of a layout span."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.mat.paths import MM, region_path
from core.layout.model import Role

if TYPE_CHECKING:
    from core.layout.model import Layout

Bounds = tuple[float, float, float, float]
"""x and y from, x and y to, m."""


def copper_bounds(layout: Layout | None) -> Bounds:
    """What the top copper spans, with a little room round it, m."""
    low_x, low_y, high_x, high_y = bounds(layout, Role.TOP_COPPER)
    spare = 0.15 * max(high_x - low_x, high_y - low_y)
    return low_x - spare, low_y - spare, high_x + spare, high_y + spare


def bounds(layout: Layout | None, role: Role | None = None) -> Bounds:
    """What the pieces span, m; only those of a role where one is named."""
    pieces = layout.pieces if layout is not None else ()
    boxes = [
        region_path(piece.region).boundingRect() for piece in pieces if role in (None, piece.role)
    ]
    if not boxes:
        return (-0.1, -0.1, 0.1, 0.1)
    whole = boxes[0]
    for box in boxes[1:]:
        whole = whole.united(box)
    return whole.left() / MM, whole.top() / MM, whole.right() / MM, whole.bottom() / MM
