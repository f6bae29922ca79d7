"""Which engine a curve is of: a line of its own look for each, and words that name it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from app import theme

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.curves.state import ChartState
    from app.theme import Theme

_NAMES = {"live": "live", "field": "field solver"}
THIN, WHOLE = 1.0, 2.2  # widths of what equations say and of what is solved, pixels
DASH = [5.0, 3.0]


def engine_pen(state: ChartState, colour: str) -> QPen:
    """Pen of one of two engines: whole and strong where it is solved, else thin and dashed."""
    is_solved = state.engine == "field"
    pen = QPen(theme.colour(colour), WHOLE if is_solved else THIN)
    if not is_solved:
        pen.setDashPattern(DASH)
    return pen


def engine_words(state: ChartState) -> str:
    """Name of the engine, and what is to be known about its curve."""
    words = _NAMES.get(state.engine, state.engine)
    if state.engine == "field" and state.is_stale:
        return "solved before"
    return f"{words}, estimate" if state.is_estimate else words


def paint_legend(painter: QPainter, widget: QWidget, shades: Theme, state: ChartState) -> None:
    """Line by line at the top right, beside the title where there is room."""
    assert state.beside is not None
    metrics = widget.fontMetrics()
    rows: list[ChartState] = sorted((state, state.beside), key=lambda one: one.engine)
    sample = metrics.height() * 1.5
    wides = [sample + 5 + metrics.horizontalAdvance(engine_words(one)) for one in rows]
    room = widget.width() - metrics.horizontalAdvance(state.title) - 2 * metrics.height()
    in_line = sum(wides) + 22 < room
    wide = sum(wides) + 10 if in_line else max(wides)
    high = metrics.height() * (1 if in_line else 2)
    box = QRectF(widget.width() - wide - 14, 4 if in_line else metrics.height() + 11, wide, high)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.colour(shades.plot, 225))
    painter.drawRect(box.adjusted(-4, -2, 4, 2))
    left, top = box.left(), box.top()
    for one, taken in zip(rows, wides, strict=True):
        middle = top + metrics.height() / 2
        painter.setPen(engine_pen(one, shades.curve))
        painter.drawLine(QLineF(left, middle, left + sample, middle))
        painter.setPen(theme.colour(shades.text))
        painter.drawText(QPointF(left + sample + 5, top + metrics.ascent()), engine_words(one))
        if in_line:
            left += taken + 10
        else:
            top += metrics.height()
