"""Cuts of the pattern round boresight, which points up."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from app import theme
from app.curves.chart import Chart, polygon
from app.curves.legend import THIN
from app.curves.state import ChartState, PatternState

if TYPE_CHECKING:
    from app.theme import Theme

_TOP, _BOTTOM, _STEP = 15.0, -20.0, 10.0  # dBi


class PatternPlot(Chart):
    """Gain over the angle from boresight, in two planes."""

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.state: PatternState | None = None

    def show_pattern(self, state: PatternState | None) -> None:
        self.state = state
        self.show_state(state)

    def paint_still(self, painter: QPainter, shades: Theme) -> None:
        centre, radius = self._circle()
        self.paint_title(painter, shades, "Pattern, dBi")
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(theme.colour(shades.plot_grid), 1.0))
        for level in np.arange(_BOTTOM + _STEP, _TOP, _STEP):
            size = radius * (level - _BOTTOM) / (_TOP - _BOTTOM)
            painter.drawEllipse(centre, size, size)
        for turn in range(0, 360, 30):
            way = QPointF(np.sin(np.radians(turn)), -np.cos(np.radians(turn)))
            painter.drawLine(centre, centre + way * radius)
        painter.setPen(theme.colour(shades.muted))
        for level in np.arange(_BOTTOM + _STEP, _TOP, _STEP):
            size = radius * (level - _BOTTOM) / (_TOP - _BOTTOM)
            words = f"{level:g}".replace("-", "−")
            painter.drawText(QPointF(centre.x() + 3, centre.y() - size + 11), words)

    def paint_curve(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
        assert isinstance(state, PatternState)
        centre, radius = self._circle()
        painter.setBrush(Qt.BrushStyle.NoBrush)
        for i, (_, theta, gain) in enumerate(state.cuts):
            part = (np.clip(gain, _BOTTOM, _TOP) - _BOTTOM) / (_TOP - _BOTTOM) * radius
            across = centre.x() + part * np.sin(theta)
            down = centre.y() - part * np.cos(theta)
            painter.setPen(self._pen(state, i, shades))
            painter.drawPolyline(polygon(across, down))

    def _pen(self, state: ChartState, i: int, shades: Theme) -> QPen:
        if i == 0:
            return self.curve_pen(state, shades.curve)
        pen = self.curve_pen(state, shades.curve_second, 1.6)
        # Dots for the second plane; dots and dashes where it is drawn thinly as well.
        pen.setDashPattern([5.0, 3.0, 1.0, 3.0] if pen.widthF() == THIN else [1.2, 2.2])
        return pen

    def paint_marks(self, painter: QPainter, shades: Theme) -> None:
        """Paint the names of the planes."""
        state = self.state
        if state is None:
            return
        metrics = self.fontMetrics()
        down = self.height() - metrics.height() * len(state.cuts)
        for i, (name, _, _) in enumerate(state.cuts):
            y = down + i * metrics.height()
            painter.setPen(self._pen(state, i, shades))
            painter.drawLine(QPointF(8, y), QPointF(8 + metrics.height() * 1.6, y))
            painter.setPen(theme.colour(shades.text))
            painter.drawText(
                QPointF(12 + metrics.height() * 1.6, y + metrics.ascent() / 2 - 1), name
            )

    def _circle(self) -> tuple[QPointF, float]:
        metrics = self.fontMetrics()
        box = QRectF(self.rect()).adjusted(8, metrics.height() + 8, -8, -8)
        return box.center(), max(min(box.width(), box.height()) / 2.0, 1.0)
