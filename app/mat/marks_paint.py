"""Dimensions, handles and words on the Mat."""

from __future__ import annotations

from math import atan2, copysign, degrees, hypot
from typing import TYPE_CHECKING

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen, QPolygonF

from app import theme
from app.mat.reach import REACH
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from app.mat.hand import Hand
    from app.mat.handles import Handle
    from app.theme import Theme
    from core.layout.model import Dimension

_DRAWN = 8.0  # pixels of a handle as drawn


def paint_dimension(
    painter: QPainter, one: Dimension, camera: Camera, shades: Theme, *, always: bool
) -> None:
    """Dimension line with its value, left out where it would not fit."""
    start, end = QPointF(*camera.to_screen(*one.start)), QPointF(*camera.to_screen(*one.end))
    along = end - start
    span = hypot(along.x(), along.y())
    words = format_quantity(one.value, Quantity.LENGTH, digits=4)
    room = painter.fontMetrics().horizontalAdvance(words) + 10
    if span < 2.0 or (span < room and not always):
        return
    way = along / span
    # Left of the direction in the Mat's frame, where y points up, is this way on the screen.
    side = QPointF(way.y(), -way.x())
    off = one.offset * camera.scale
    if abs(off) < span / 2:  # beside its object: near enough to be read with it, not on it
        off = copysign(min(max(abs(off), 16.0), 46.0), off)
    shift, reach = side * off, side * copysign(5.0, off)
    back = side * copysign(min(abs(off), 20.0), off)
    line = QLineF(start + shift, end + shift)
    lines = QPainterPath()
    for a, b in (
        (line.p1(), line.p2()),
        (start + shift - back, start + shift + reach),
        (end + shift - back, end + shift + reach),
    ):
        lines.moveTo(a)
        lines.lineTo(b)
    arrows = QPainterPath()
    arrows.addPolygon(_arrow(line.p1(), way))
    arrows.addPolygon(_arrow(line.p2(), way * -1.0))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.strokePath(lines, QPen(theme.colour(shades.mat_halo, 190), 3.0))
    painter.strokePath(lines, QPen(theme.colour(shades.mat_ink, 220), 1.0))
    painter.fillPath(arrows, theme.colour(shades.mat_ink))
    paint_tag(painter, line.center(), words, shades, _readable(degrees(atan2(way.y(), way.x()))))


def paint_tag(
    painter: QPainter, centre: QPointF, words: str, shades: Theme, angle: float = 0.0
) -> None:
    """Words on a small plate, readable on whatever lies below."""
    metrics = painter.fontMetrics()
    size = QRectF(0, 0, metrics.horizontalAdvance(words) + 8, metrics.height() + 1)
    size.moveCenter(QPointF(0, 0))
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.translate(centre)
    painter.rotate(angle)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.colour(shades.mat_halo, 225))
    painter.drawRoundedRect(size, 3, 3)
    painter.setPen(theme.colour(shades.mat_ink))
    painter.drawText(size, Qt.AlignmentFlag.AlignCenter, words)
    painter.restore()


def _paint_handle(
    painter: QPainter, handle: Handle, centre: QPointF, shades: Theme, *, active: bool, focus: bool
) -> None:
    """Handle, 8 pixels across; the one in use is larger, the one with the focus ringed."""
    half = _DRAWN / 2 + (1.5 if active else 0.0)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    if focus:
        painter.setPen(QPen(theme.colour(shades.mat_halo), 4.0))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawEllipse(centre, REACH - 2, REACH - 2)
        painter.setPen(QPen(theme.colour(shades.ghost), 2.0))
        painter.drawEllipse(centre, REACH - 2, REACH - 2)
    painter.setPen(QPen(theme.colour(shades.handle_edge), 1.3))
    painter.setBrush(theme.colour(shades.ghost if active else shades.handle))
    box = QRectF(centre.x() - half, centre.y() - half, 2 * half, 2 * half)
    if handle.rail or len(handle.pulls) > 1:
        painter.drawEllipse(box)
    else:
        painter.drawRoundedRect(box, 1.5, 1.5)


def paint_handles(painter: QPainter, hand: Hand, shades: Theme) -> None:
    """Handles that are not crowded out, and the words of the one in use."""
    view, shown = hand.view, hand.shown_handle
    for handle in hand.visible_handles():
        is_shown = shown is not None and handle.name == shown.name
        centre = QPointF(*view.pixels(handle))
        focus = is_shown and hand.has_key_focus
        _paint_handle(painter, handle, centre, shades, active=is_shown, focus=focus)
    if shown is not None:
        across, down = view.pixels(shown)
        words = view.state.words(shown)
        metrics = painter.fontMetrics()
        half = metrics.horizontalAdvance(words) / 2 + 6
        room = painter.clipBoundingRect()
        across = min(max(across, room.left() + half), room.right() - half)
        paint_tag(painter, QPointF(across, down + metrics.height() * 1.7), words, shades)


def _arrow(tip: QPointF, way: QPointF) -> QPolygonF:
    side = QPointF(-way.y(), way.x())
    return QPolygonF([tip, tip + way * 6.0 + side * 2.2, tip + way * 6.0 - side * 2.2])


def _readable(angle: float) -> float:
    """Angle of text that is never upside down."""
    if angle > 90.0 + 1e-6:
        return angle - 180.0
    return angle + 180.0 if angle < -90.0 + 1e-6 else angle
