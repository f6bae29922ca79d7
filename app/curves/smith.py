"""Smith chart: the plane of the reflection coefficient, from its closed forms."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen

from app import theme
from app.curves.chart import Chart, polygon
from app.curves.state import ChartState, SmithState

if TYPE_CHECKING:
    from app.theme import Theme

_RESISTANCES = (0.2, 0.5, 1.0, 2.0, 5.0)
_REACTANCES = (0.2, 0.5, 1.0, 2.0, 5.0)


class SmithChart(Chart):
    """Trace of the reflection, with the circle that it should stay inside."""

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.state: SmithState | None = None

    def show_smith(self, state: SmithState | None) -> None:
        self.state = state
        self.show_state(state)

    def still_key(self) -> object:
        return self.state.target if self.state is not None else None

    def paint_still(self, painter: QPainter, shades: Theme) -> None:
        centre, radius = self.circle
        self.paint_title(painter, shades, "Smith chart")
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        rim = QPainterPath()
        rim.addEllipse(centre, radius, radius)
        painter.setPen(QPen(theme.colour(shades.plot_grid), 1.0))
        painter.save()
        painter.setClipPath(rim)
        for r in _RESISTANCES:
            size = radius / (1.0 + r)
            painter.drawEllipse(QPointF(centre.x() + radius - size, centre.y()), size, size)
        for x in _REACTANCES:
            size = radius / x
            for side in (-1.0, 1.0):
                middle = QPointF(centre.x() + radius, centre.y() + side * size)
                painter.drawEllipse(middle, size, size)
        painter.drawLine(centre - QPointF(radius, 0), centre + QPointF(radius, 0))
        painter.restore()
        painter.setPen(QPen(theme.colour(shades.muted), 1.2))
        painter.drawPath(rim)
        self._paint_numbers(painter, shades, centre, radius)
        if self.state is not None:
            pen = QPen(theme.colour(shades.target), 1.0)
            pen.setDashPattern([2.0, 3.0])
            painter.setPen(pen)
            painter.setBrush(theme.colour(shades.good, 26))
            size = self.state.target * radius
            painter.drawEllipse(centre, size, size)

    def paint_curve(self, painter: QPainter, shades: Theme, state: ChartState) -> None:
        assert isinstance(state, SmithState)
        centre, radius = self.circle
        across = centre.x() + state.s11.real * radius
        down = centre.y() - state.s11.imag * radius
        painter.setPen(self.curve_pen(state, shades.curve))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPolyline(polygon(across, down))
        painter.setPen(QPen(theme.colour(shades.plot), 1.5))
        painter.setBrush(theme.colour(shades.curve))
        painter.drawRect(QRectF(float(across[0]) - 3, float(down[0]) - 3, 6, 6))

    def paint_marks(self, painter: QPainter, shades: Theme) -> None:
        state = self.state
        if state is None:
            return
        centre, radius = self.circle
        painter.setPen(QPen(theme.colour(shades.plot), 1.5))
        painter.setBrush(theme.colour(shades.accent))
        spot = QPointF(centre.x() + state.spot.real * radius, centre.y() - state.spot.imag * radius)
        painter.drawEllipse(spot, 4.5, 4.5)

    @property
    def circle(self) -> tuple[QPointF, float]:
        """Middle and radius of the rim, pixels."""
        metrics = self.fontMetrics()
        top, spare = metrics.height() + 8, 8
        room = min(self.width() - 2 * spare, self.height() - top - spare)
        radius = max(room / 2.0, 1.0)
        return QPointF(self.width() / 2.0, top + (self.height() - top - spare) / 2.0), radius

    def _paint_numbers(
        self, painter: QPainter, shades: Theme, centre: QPointF, radius: float
    ) -> None:
        """Resistances along the middle line, as parts of the reference."""
        painter.setPen(theme.colour(shades.muted))
        small = painter.font()
        small.setPointSizeF(max(small.pointSizeF() * 0.85, 6.0))
        painter.setFont(small)
        for r in _RESISTANCES:
            place = float(np.real((r - 1.0) / (r + 1.0)))
            painter.drawText(QPointF(centre.x() + place * radius + 2, centre.y() - 2), f"{r:g}")
