"""Small pictures that are painted again and again: kept, because a drag paints dozens a step."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QFont, QFontMetrics, QPainter, QPen, QPixmap, QTransform

from app import theme

if TYPE_CHECKING:
    from app.theme import Theme

_DRAWN = 8.0  # pixels of a handle as drawn


def paint_stamp(painter: QPainter, centre: QPointF, stamp: QPixmap) -> None:
    """Paint a picture about a place, on whole pixels so that it stays sharp."""
    size = stamp.deviceIndependentSize()
    left, top = centre.x() - size.width() / 2, centre.y() - size.height() / 2
    painter.drawPixmap(QPointF(round(left), round(top)), stamp)


def paint_tag(
    painter: QPainter, centre: QPointF, words: str, shades: Theme, angle: float = 0.0
) -> None:
    """Words on a small plate, readable on whatever lies below."""
    ratio = painter.device().devicePixelRatioF()
    quarters = round(angle / 90.0)
    if abs(angle - 90.0 * quarters) < 1e-6:
        paint_stamp(painter, centre, _tag(words, painter.font(), shades, ratio, quarters))
        return
    painter.save()
    painter.translate(centre)
    painter.rotate(angle)
    paint_stamp(painter, QPointF(0.0, 0.0), _tag(words, painter.font(), shades, ratio, 0))
    painter.restore()


@lru_cache(32)
def handle_stamp(is_round: bool, is_active: bool, shades: Theme, ratio: float) -> QPixmap:
    """Handle, 8 pixels across; the one in use is larger."""
    half = _DRAWN / 2 + (1.5 if is_active else 0.0)
    picture, painter = blank(2 * half + 4, 2 * half + 4, ratio)
    painter.setPen(QPen(theme.colour(shades.handle_edge), 1.3))
    painter.setBrush(theme.colour(shades.ghost if is_active else shades.handle))
    box = QRectF(2.0, 2.0, 2 * half, 2 * half)
    if is_round:
        painter.drawEllipse(box)
    else:
        painter.drawRoundedRect(box, 1.5, 1.5)
    painter.end()
    return picture


@lru_cache(64)
def _tag(words: str, font: QFont, shades: Theme, ratio: float, quarters: int) -> QPixmap:
    metrics = QFontMetrics(font)
    wide, high = metrics.horizontalAdvance(words) + 8, metrics.height() + 1
    picture, painter = blank(wide, high, ratio)
    painter.setFont(font)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.colour(shades.mat_halo, 225))
    painter.drawRoundedRect(QRectF(0, 0, wide, high), 3, 3)
    painter.setPen(theme.colour(shades.mat_ink))
    painter.drawText(QRectF(0, 0, wide, high), Qt.AlignmentFlag.AlignCenter, words)
    painter.end()
    return picture.transformed(QTransform().rotate(90.0 * quarters)) if quarters else picture


def blank(wide: float, high: float, ratio: float) -> tuple[QPixmap, QPainter]:
    """Clear picture of so many pixels on the screen, and a painter on it."""
    picture = QPixmap(round(wide * ratio), round(high * ratio))
    picture.setDevicePixelRatio(ratio)
    picture.fill(Qt.GlobalColor.transparent)
    painter = QPainter(picture)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    return picture, painter
