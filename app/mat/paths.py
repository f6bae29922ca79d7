"""Outlines of the layout as painter paths, in millimetres, y up."""

from __future__ import annotations

from math import atan, atan2, degrees
from typing import TYPE_CHECKING

from PySide6.QtCore import QRectF
from PySide6.QtGui import QPainterPath, QTransform

from core.shapes.outline import arc_centre

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from core.shapes.outline import Outline, Region

MM = 1e3  # Qt rounds small coordinates: metres would be too coarse for it


def region_path(region: Region) -> QPainterPath:
    """Path of a region with its holes, arcs true."""
    path = QPainterPath()
    for outline in (region.exterior, *region.holes):
        add_outline(path, outline)
    return path


def on_screen(region: Region, camera: Camera) -> QPainterPath:
    """Path of a region in pixels."""
    return view_transform(camera).map(region_path(region))


def view_transform(camera: Camera) -> QTransform:
    """Millimetres of the Mat to pixels."""
    scale = camera.scale / MM
    return QTransform(scale, 0.0, 0.0, -scale, camera.left, camera.top)


def add_outline(path: QPainterPath, outline: Outline) -> None:
    """Add a closed outline to a path, in millimetres."""
    ring = outline.vertices
    path.moveTo(ring[0].x * MM, ring[0].y * MM)
    for start, end in zip(ring, (*ring[1:], ring[0]), strict=True):
        if start.bulge == 0.0:
            path.lineTo(end.x * MM, end.y * MM)
            continue
        x, y, radius = arc_centre(start, end)
        box = QRectF((x - radius) * MM, (y - radius) * MM, 2 * radius * MM, 2 * radius * MM)
        # Qt counts angles the other way round from an axis that points down; here it points up.
        begin = -degrees(atan2(start.y - y, start.x - x))
        path.arcTo(box, begin, -degrees(4.0 * atan(start.bulge)))
    path.closeSubpath()
