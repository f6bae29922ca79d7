"""A curve over frequency against its target."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QKeyEvent, QMouseEvent, QPainter, QPen

from app import theme
from app.curves.chart import Chart, polygon
from app.curves.legend import engine_words
from app.curves.state import ChartState, PlotState
from app.mat.camera import nice_step
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from numpy.typing import NDArray
    from PySide6.QtCore import QEvent

    from app.theme import Theme


class LinePlot(Chart):
    """One curve; a marker follows the pointer or the arrow keys."""

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.state: PlotState | None = None
        self._marked: int | None = None

    def show_plot(self, state: PlotState | None) -> None:
        self.state = state
        self.show_state(state)

    @property
    def area(self) -> QRectF:
        """Where the curve is drawn, pixels."""
        metrics = self.fontMetrics()
        left = metrics.horizontalAdvance("−30 ") + 6
        top = metrics.height() + 9
        low = metrics.height() + 7
        return QRectF(left, top, self.width() - left - 12, max(self.height() - top - low, 1))

    def still_key(self) -> object:
        state = self.state
        if state is None:
            return None
        ends = (float(state.frequency[0]), float(state.frequency[-1]))
        axis = (state.title, state.low, state.high, state.step, state.unit, state.target)
        return ends, axis, state.brief

    def paint_still(self, painter: QPainter, shades: Theme) -> None:
        state, area = self.state, self.area
        if state is None:
            return
        self.paint_title(painter, shades, state.title)
        metrics = self.fontMetrics()
        count = round((state.high - state.low) / state.step)
        for n in range(count + 1):
            value = state.low + n * state.step
            down = round(self._down(value))
            painter.setPen(QPen(theme.colour(shades.plot_grid), 0))
            painter.drawLine(QLineF(area.left(), down, area.right(), down))
            painter.setPen(theme.colour(shades.muted))
            words = f"{value:g}".replace("-", "−")
            place = QPointF(
                area.left() - metrics.horizontalAdvance(words) - 4, down + metrics.ascent() / 2 - 1
            )
            painter.drawText(place, words)
        self._paint_frequencies(painter, shades, state)
        if state.target is not None:
            down = round(self._down(state.target))
            painter.fillRect(
                QRectF(area.left(), down, area.width(), area.bottom() - down),
                theme.colour(shades.good, 22),
            )
            pen = QPen(theme.colour(shades.target), 1.0)
            pen.setDashPattern([2.0, 3.0])
            painter.setPen(pen)
            painter.drawLine(QLineF(area.left(), down, area.right(), down))

    def paint_curve(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
        assert isinstance(state, PlotState)
        area = self.area
        painter.save()
        painter.setClipRect(area.adjusted(0, -2, 0, 2))
        painter.setPen(self.curve_pen(state, shades.curve))
        painter.drawPolyline(polygon(*_pixels(state, self.state or state, area)))
        painter.restore()

    def paint_marks(self, painter: QPainter, shades: Theme) -> None:
        state, area = self.state, self.area
        if state is None:
            return
        across, down = _pixels(state, state, area)
        x = self._across(state.brief)
        height = float(np.interp(x, across, down))
        painter.setPen(QPen(theme.colour(shades.plot), 1.5))
        painter.setBrush(theme.colour(shades.accent))
        painter.drawEllipse(QPointF(x, min(max(height, area.top()), area.bottom())), 4.5, 4.5)
        if self._marked is not None:
            self._paint_marker(painter, shades, across)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        state, area = self.state, self.area
        if state is not None:
            part = (event.position().x() - area.left()) / area.width()
            self._mark(round(part * (len(state.frequency) - 1)))

    def leaveEvent(self, event: QEvent) -> None:
        self._marked = None
        self.update()
        super().leaveEvent(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1}
        if event.key() in steps and self.state is not None:
            state = self.state
            start = self._marked
            if start is None:
                start = int(np.searchsorted(state.frequency, state.brief))
            self._mark(start + steps[Qt.Key(event.key())])
            self.setAccessibleDescription(_marker_words(state, self._marked or 0))
        else:
            super().keyPressEvent(event)

    def _mark(self, index: int) -> None:
        assert self.state is not None
        self._marked = min(max(index, 0), len(self.state.frequency) - 1)
        self.update()

    def _paint_marker(self, painter: QPainter, shades: Theme, across: NDArray[Any]) -> None:
        state, area = self.state, self.area
        assert state is not None
        index = min(self._marked or 0, len(across) - 1)
        x = float(across[index])
        painter.setPen(QPen(theme.colour(shades.muted), 1.0))
        painter.drawLine(QLineF(x, area.top(), x, area.bottom()))
        words = _marker_words(state, index)
        wide = self.fontMetrics().horizontalAdvance(words) + 10
        left = min(max(x - wide / 2, area.left()), area.right() - wide)
        box = QRectF(left, area.top() + 2, wide, self.fontMetrics().height() + 3)
        painter.setBrush(theme.colour(shades.card))
        painter.drawRoundedRect(box, 3, 3)
        painter.setPen(theme.colour(shades.text))
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter, words)

    def _paint_frequencies(self, painter: QPainter, shades: Theme, state: PlotState) -> None:
        metrics, area = self.fontMetrics(), self.area
        low, high = float(state.frequency[0]), float(state.frequency[-1])
        step = nice_step((high - low) / max(area.width() / (metrics.height() * 5.5), 1.0))
        n = int(np.ceil(low / step))
        while n * step <= high:
            line = round(self._across(n * step))
            painter.setPen(QPen(theme.colour(shades.plot_grid), 0))
            painter.drawLine(QLineF(line, area.top(), line, area.bottom()))
            words = format_quantity(n * step, Quantity.FREQUENCY, digits=4)
            wide = metrics.horizontalAdvance(words)
            left = min(line - wide / 2, self.width() - wide - 2)
            painter.setPen(theme.colour(shades.muted))
            painter.drawText(QPointF(left, self.height() - metrics.descent() - 3), words)
            n += 1
        x = self._across(state.brief)
        painter.setPen(QPen(theme.colour(shades.accent, 170), 1.2))
        painter.drawLine(QLineF(x, area.top(), x, area.bottom()))

    def _across(self, frequency: float) -> float:
        assert self.state is not None
        low, high = self.state.frequency[0], self.state.frequency[-1]
        return float(self.area.left() + (frequency - low) / (high - low) * self.area.width())

    def _down(self, value: float) -> float:
        assert self.state is not None
        part = (value - self.state.low) / (self.state.high - self.state.low)
        return self.area.bottom() - part * self.area.height()


def _marker_words(state: PlotState, index: int) -> str:
    where = format_quantity(float(state.frequency[index]), Quantity.FREQUENCY, digits=4)
    if state.is_estimate:
        return f"{where}: unknown"
    unit = f" {state.unit}" if state.unit else ""
    engine = f", {engine_words(state)}" if state.beside is not None else ""
    return f"{where}: {state.values[index]:.2f}{unit}".replace("-", "−") + engine


def _pixels(state: PlotState, axes: PlotState, area: QRectF) -> tuple[NDArray[Any], NDArray[Any]]:
    """Points of a curve on the axes of the one that is shown first."""
    values = np.clip(state.values, axes.low - 1e3, axes.high + 1e3)
    down = area.bottom() - (values - axes.low) / (axes.high - axes.low) * area.height()
    # Far outside nothing is seen, but long lines cost time.
    down = np.clip(down, area.top() - 50, area.bottom() + 50)
    span = axes.frequency[-1] - axes.frequency[0]
    across = area.left() + (state.frequency - axes.frequency[0]) / span * area.width()
    return across, down
