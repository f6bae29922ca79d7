"""Dimensions and handles on the Mat."""

from __future__ import annotations

from math import atan2, copysign, degrees, hypot
from typing import TYPE_CHECKING

from PySide6.QtCore import QLineF, QPointF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen, QPolygonF

from app import theme
from app.mat.reach import REACH
from app.mat.stamps import handle_stamp, paint_stamp, paint_tag
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from app.mat.hand import Hand
    from app.theme import Theme
    from core.layout.model import Dimension


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


def paint_handles(painter: QPainter, hand: Hand, shades: Theme) -> None:
    """Handles that are not crowded out, and the words of the one in use."""
    view, shown = hand.view, hand.shown_handle
    ratio = painter.device().devicePixelRatioF()
    for handle in hand.visible_handles():
        is_shown = shown is not None and handle.name == shown.name
        is_round = bool(handle.rail) or len(handle.pulls) > 1
        centre = QPointF(*view.pixels(handle))
        if is_shown and hand.has_key_focus:
            _paint_focus(painter, centre, shades)
        paint_stamp(painter, centre, handle_stamp(is_round, is_shown, shades, ratio))
    if shown is not None:
        across, down = view.pixels(shown)
        words = view.state.words(shown)
        metrics = painter.fontMetrics()
        half = metrics.horizontalAdvance(words) / 2 + 6
        room = painter.clipBoundingRect()
        across = min(max(across, room.left() + half), room.right() - half)
        paint_tag(painter, QPointF(across, down + metrics.height() * 1.7), words, shades)


def _paint_focus(painter: QPainter, centre: QPointF, shades: Theme) -> None:
    """Ring round the handle that the keys move."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for name, width in ((shades.mat_halo, 4.0), (shades.ghost, 2.0)):
        painter.setPen(QPen(theme.colour(name), width))
        painter.drawEllipse(centre, REACH - 2, REACH - 2)


def _arrow(tip: QPointF, way: QPointF) -> QPolygonF:
    side = QPointF(-way.y(), way.x())
    return QPolygonF([tip, tip + way * 6.0 + side * 2.2, tip + way * 6.0 - side * 2.2])


def _readable(angle: float) -> float:
    """Angle of text that is never upside down."""
    if angle > 90.0 + 1e-6:
        return angle - 180.0
    return angle + 180.0 if angle < -90.0 + 1e-6 else angle
