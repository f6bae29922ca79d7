"""Legend of what the Mat shows: a few words, and the scale of the current with its ticks."""

from __future__ import annotations

from functools import lru_cache
from math import cos, radians, sin
from typing import TYPE_CHECKING

from PySide6.QtCore import QLineF, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QFontMetrics, QLinearGradient, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import QSizePolicy, QWidget

from app import theme
from app.mat.stamps import blank
from core.design.polarisation import Polarisation

if TYPE_CHECKING:
    from PySide6.QtGui import QFont, QPaintEvent, QPixmap

    from app.mat.current import CurrentState, Scale
    from app.theme import Theme


class Legend(QWidget):
    """Words on a plate like those of the Mat; with a current, its colours over their values."""

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Legend of the Mat")
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self._words = ""
        self._scale: Scale | None = None
        self.hide()

    @property
    def words(self) -> str:
        return self._words

    def show_state(self, state: CurrentState) -> None:
        self._words = state.words
        self._scale = state.scale
        marks = "" if self._scale is None else ", ".join(words for _, words in self._scale.marks)
        self.setAccessibleDescription(f"{state.words}: {marks}" if marks else state.words)
        self.setToolTip(state.details)
        self.setVisible(bool(state.words))
        self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:
        metrics = self.fontMetrics()
        wide = metrics.horizontalAdvance(self._words)
        if self._scale is None:
            return QSize(wide + metrics.height(), metrics.height() + 4)
        bar = metrics.horizontalAdvance("≤ 0.03 " * 5)
        return QSize(max(wide, bar) + metrics.height(), round(metrics.height() * 2.7) + 4)

    def paintEvent(self, _event: QPaintEvent) -> None:
        shades, metrics = theme.theme_of(self), self.fontMetrics()
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(theme.colour(shades.mat_halo, 235))
        painter.drawRoundedRect(self.rect(), 4, 4)
        side = metrics.height() / 2
        painter.setPen(theme.colour(shades.mat_ink))
        painter.drawText(QPointF(side, 2 + metrics.ascent()), self._words)
        if self._scale is not None:
            top = metrics.height() + 4.0
            box = QRectF(side, top, self.width() - 2 * side, self.height() - top - 2)
            _paint_scale(painter, box, self._scale, shades)


def _paint_scale(painter: QPainter, box: QRectF, scale: Scale, shades: Theme) -> None:
    """Bar of all colours over its ticks."""
    metrics = painter.fontMetrics()
    half = max(metrics.horizontalAdvance(words) for _, words in scale.marks) / 2
    high = box.height() - metrics.height() - 3
    bar = QRectF(box.left() + half, box.top(), box.width() - 2 * half, high)
    hue = QLinearGradient(bar.topLeft(), bar.topRight())
    hue.setStops(theme.current_stops(shades))
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(hue)
    painter.drawRect(bar)
    painter.setPen(QPen(theme.colour(shades.mat_ink), 1.0))
    for share, words in scale.marks:
        across = bar.left() + share * bar.width()
        painter.drawLine(QLineF(across, bar.top(), across, bar.bottom() + 3))
        left = across - metrics.horizontalAdvance(words) / 2
        painter.drawText(QPointF(left, bar.bottom() + 3 + metrics.ascent()), words)


@lru_cache(8)
def turn_picture(
    words: str, sense: Polarisation | None, shades: Theme, font: QFont, ratio: float
) -> QPixmap:
    """Words on a plate, with an arrow that goes round as the wave does, seen from the front."""
    metrics = QFontMetrics(font)
    line = metrics.height()
    turn = line if sense in (Polarisation.RHCP, Polarisation.LHCP) else 0
    wide = metrics.horizontalAdvance(words) + 8 + turn
    picture, painter = blank(wide, line + 1, ratio)
    painter.setFont(font)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.colour(shades.mat_halo, 225))
    painter.drawRoundedRect(QRectF(0, 0, wide, line + 1), 3, 3)
    painter.setPen(theme.colour(shades.mat_ink))
    painter.drawText(QPointF(4 + turn, metrics.ascent()), words)
    if turn:
        _paint_turn(painter, QPointF(4 + line * 0.4, line / 2), line * 0.33, sense, shades)
    painter.end()
    return picture


def _paint_turn(
    painter: QPainter, middle: QPointF, radius: float, sense: Polarisation | None, shades: Theme
) -> None:
    """Most of a circle with a head: anticlockwise for right-hand (IEEE Std 145)."""
    way = 1.0 if sense is Polarisation.RHCP else -1.0
    box = QRectF(middle.x() - radius, middle.y() - radius, 2 * radius, 2 * radius)
    start, sweep = 90.0 + way * 50.0, way * 265.0
    arc = QPainterPath()
    arc.arcMoveTo(box, start)
    arc.arcTo(box, start, sweep)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(theme.colour(shades.mat_ink), 1.5))
    painter.drawPath(arc)
    end, tip = radians(start + sweep), arc.currentPosition()
    ahead = QPointF(-sin(end) * way, -cos(end) * way) * radius * 0.95
    aside = QPointF(-ahead.y(), ahead.x()) * 0.6
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.colour(shades.mat_ink))
    painter.drawPolygon([tip + ahead, tip + aside, tip - aside])
