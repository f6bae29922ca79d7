"""What all charts share: a still background, a title, and words for what is uncertain."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPen, QPolygonF
from PySide6.QtWidgets import QWidget
from shiboken6 import VoidPtr

from app import theme
from app.curves.state import ESTIMATE, OLD, ChartState
from app.views.kept import KeptPicture

if TYPE_CHECKING:
    from numpy.typing import NDArray
    from PySide6.QtGui import QPaintEvent

    from app.theme import Theme

_DASH = [5.0, 3.0]


class Chart(QWidget):
    """A picture of some values; the still part is kept between repaints."""

    def __init__(self, name: str) -> None:
        super().__init__()
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAccessibleName(name)
        self._state: ChartState | None = None
        self._still = KeptPicture()

    def show_state(self, state: ChartState | None) -> None:
        self._state = state
        words = state.spoken if state is not None else "nothing to show"
        if words != self.accessibleDescription():
            self.setAccessibleDescription(words)
        self.update()

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 20, em * 14)

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 11, em * 7)

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        shades = theme.theme_of(self)
        key = (self.size(), self.devicePixelRatioF(), shades.name, self.font(), self.still_key())
        painter.drawPixmap(0, 0, self._still.shown(self, key, self._paint_background))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self._state is not None:
            if self._state.is_stale:
                painter.setOpacity(0.35)
            self.paint_values(painter, shades)
            painter.setOpacity(1.0)
            self._paint_doubt(painter, shades)
        if self.hasFocus():
            painter.setPen(QPen(theme.colour(shades.focus), 1.5))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(1, 1, -1, -1), 4, 4)

    def _paint_background(self, painter: QPainter) -> None:
        shades = theme.theme_of(self)
        painter.fillRect(self.rect(), theme.colour(shades.plot))
        self.paint_still(painter, shades)

    def still_key(self) -> object:
        """What the background depends on, besides the size and the colours."""
        return None

    def paint_still(self, painter: QPainter, shades: Theme) -> None:
        """Paint the background: axes, grid, names."""

    def paint_values(self, painter: QPainter, shades: Theme) -> None:
        """Paint what moves."""

    def paint_title(self, painter: QPainter, shades: Theme, title: str) -> None:
        metrics = self.fontMetrics()
        painter.setPen(theme.colour(shades.muted))
        painter.drawText(QPointF(metrics.height() * 0.5, metrics.ascent() + 4), title)

    def curve_pen(self, name: str, width: float = 2.0) -> QPen:
        """Pen of a curve: whole where it is vouched for, dashed where it is an estimate."""
        pen = QPen(theme.colour(name), width)
        pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
        if self._state is not None and self._state.is_estimate:
            pen.setDashPattern(_DASH)
        return pen

    def _paint_doubt(self, painter: QPainter, shades: Theme) -> None:
        state = self._state
        assert state is not None
        words = OLD if state.is_stale else ESTIMATE if state.is_estimate else ""
        if not words:
            return
        metrics = self.fontMetrics()
        wide = metrics.horizontalAdvance(words) + 12
        box = QRectF(self.width() - wide - 8, 3, wide, metrics.height() + 3)
        painter.setPen(QPen(theme.colour(shades.unknown), 1.0))
        painter.setBrush(theme.colour(shades.plot, 235))
        painter.drawRoundedRect(box, 4, 4)
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter, words)


def polygon(across: NDArray[Any], down: NDArray[Any]) -> QPolygonF:
    """Points in pixels as a Qt polygon, written straight into its memory.

    A point object for each of them would take forty times as long, at every step of a drag.
    """
    points = QPolygonF()
    points.resize(len(across))
    view: Any = VoidPtr  # its stub knows addresses only
    memory = np.frombuffer(view(points.data(), 16 * len(across), True), dtype=float)
    memory[0::2], memory[1::2] = across, down
    return points
