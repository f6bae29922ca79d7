"""A line of words behind an icon, wrapped, and a list of such lines."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QRect, QSize, Qt, Signal
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QAbstractButton, QSizePolicy, QVBoxLayout, QWidget

from app import theme

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent, QResizeEvent

    from app.presenters.readings import Line

_WRAP = int(Qt.TextFlag.TextWordWrap.value) | int(Qt.AlignmentFlag.AlignTop.value)
_TINTS = {
    "met": "good",
    "likely": "good",
    "missed": "bad",
    "unknown": "unknown",
    "noted": "muted",
    "refusal": "bad",
    "warning": "warn",
    "note": "muted",
}


class IconLine(QAbstractButton):
    """One line; it can be pressed where it leads to a field."""

    def __init__(self) -> None:
        super().__init__()
        self._line: Line | None = None
        self._heights: dict[tuple[str, int], int] = {}
        policy = QSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Preferred)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)

    @property
    def line(self) -> Line | None:
        return self._line

    def show_line(self, line: Line) -> None:
        if line == self._line:
            return
        width = self.width()
        before, old = self.heightForWidth(width), self._line
        self._line = line
        self.setAccessibleName(f"{line.icon}: {line.words}")
        if old is None or (old.tip, old.field) != (line.tip, line.field):
            self._follow(line)
        if self.heightForWidth(width) != before:
            self._claim_height()
        self.update()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._claim_height()

    def _follow(self, line: Line) -> None:
        """Take on what a line tells when it is pointed at, and whether it can be pressed."""
        self.setAccessibleDescription(line.tip)
        self.setToolTip(line.tip)
        leads = bool(line.field)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus if leads else Qt.FocusPolicy.NoFocus)
        shape = Qt.CursorShape.PointingHandCursor if leads else Qt.CursorShape.ArrowCursor
        self.setCursor(shape)

    def _claim_height(self) -> None:
        """Ask for all the height that the words need, so that none of them is cut off."""
        needed = self.heightForWidth(self.width())
        if needed != self.minimumHeight():
            self.setMinimumHeight(needed)

    def hasHeightForWidth(self) -> bool:
        return True

    def heightForWidth(self, width: int) -> int:
        words = self._line.words if self._line else ""
        key = (words, width)
        if key not in self._heights:
            if len(self._heights) > 200:
                self._heights.clear()
            room = QRect(0, 0, max(width - self._indent, 10), 10_000)
            needed = self.fontMetrics().boundingRect(room, _WRAP, words).height()
            self._heights[key] = max(needed, self.fontMetrics().height()) + 2
        return self._heights[key]

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 18, self.heightForWidth(max(self.width(), em * 10)))

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 8, em)

    def paintEvent(self, _event: QPaintEvent) -> None:
        if self._line is None:
            return
        painter = QPainter(self)
        shades = theme.theme_of(self)
        em = self.fontMetrics().height()
        tint = getattr(shades, _TINTS[self._line.icon])
        size = round(em * self.devicePixelRatioF())
        top = max((self.height() - self.heightForWidth(self.width())) // 2, 0)
        painter.drawPixmap(QRect(0, top + 1, em, em), theme.pixmap(self._line.icon, tint, size))
        loud = self._line.icon not in ("noted", "note")
        painter.setPen(theme.colour(shades.text if loud else shades.muted))
        room = self.rect().adjusted(self._indent, top, 0, 0)
        if self._line.field and self.underMouse():
            font = painter.font()
            font.setUnderline(True)
            painter.setFont(font)
        painter.drawText(room, _WRAP, self._line.words)
        if self.hasFocus():
            painter.setPen(QPen(theme.colour(shades.focus), 1.5))
            painter.drawRoundedRect(self.rect().adjusted(1, 0, -1, -1), 3, 3)

    @property
    def _indent(self) -> int:
        return round(self.fontMetrics().height() * 1.4)


class LineList(QWidget):
    """Lines under each other; their widgets are used again."""

    asked = Signal(str)

    def __init__(self, name: str, most: int = 50) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self._most = most
        self._lines: list[IconLine] = []
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(3)

    def show_lines(self, lines: tuple[Line, ...]) -> None:
        lines = lines[: self._most]
        while len(self._lines) < len(lines):
            self._add()
        for i, widget in enumerate(self._lines):
            if i < len(lines):
                widget.show_line(lines[i])
            widget.setVisible(i < len(lines))

    @property
    def shown(self) -> tuple[IconLine, ...]:
        return tuple(one for one in self._lines if not one.isHidden())

    def _add(self) -> None:
        widget = IconLine()
        widget.clicked.connect(lambda: self._on_clicked(widget))
        self._lines.append(widget)
        self._layout.addWidget(widget)

    def _on_clicked(self, widget: IconLine) -> None:
        if widget.line is not None and widget.line.field:
            self.asked.emit(widget.line.field)
