"""What all charts share: a still background, a title, and words for what is uncertain."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPen, QPolygonF
from PySide6.QtWidgets import QWidget
from shiboken6 import VoidPtr

from app import theme
from app.curves.legend import DASH, engine_pen, engine_words, paint_legend
from app.curves.state import ESTIMATE, OLD, ChartState
from app.views.kept import KeptPicture

if TYPE_CHECKING:
    from numpy.typing import NDArray
    from PySide6.QtGui import QPaintEvent

    from app.theme import Theme

_FADED = 0.35  # opacity of what belongs to an older design


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
        words = _spoken(state) if state is not None else "nothing to show"
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
            self._paint_state(painter, shades, self._state)
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

    def paint_curve(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
        """Paint the curve of one engine."""

    def paint_marks(self, painter: QPainter, shades: Theme) -> None:
        """Paint what stands on the curve of the design on the bench."""

    def _paint_state(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
        """Paint what moves."""
        for one in (state,) if state.beside is None else (state.beside, state):
            painter.setOpacity(_FADED if one.is_stale else 1.0)
            self.paint_curve(painter, shades, one)
        self.paint_marks(painter, shades)
        painter.setOpacity(1.0)
        if state.beside is None:
            self._paint_doubt(painter, shades, state)
        else:
            paint_legend(painter, self, shades, state)

    def paint_title(self, painter: QPainter, shades: Theme, title: str) -> None:
        metrics = self.fontMetrics()
        painter.setPen(theme.colour(shades.muted))
        painter.drawText(QPointF(metrics.height() * 0.5, metrics.ascent() + 4), title)

    def curve_pen(self, state: ChartState, colour: str, width: float = 2.0) -> QPen:
        """Pen of a curve: beside another by its engine, alone whole where it is vouched for."""
        if self._state is not None and self._state.beside is not None:
            pen = engine_pen(state, colour)
        else:
            pen = QPen(theme.colour(colour), width)
            if state.is_estimate:
                pen.setDashPattern(DASH)
        pen.setJoinStyle(Qt.PenJoinStyle.BevelJoin)  # of points so close that none is seen
        return pen

    def _paint_doubt(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
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


def _spoken(state: ChartState) -> str:
    """What the chart says, that of the other engine after it."""
    if state.beside is None:
        return state.spoken
    return "; ".join(f"{engine_words(one)}: {one.spoken}" for one in (state, state.beside))


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
