"""Small buttons with an icon, and boxes to tick."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QCheckBox, QToolButton

from app import theme

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent


class IconButton(QToolButton):
    """Small button with a name for those who cannot see its icon."""

    def __init__(self, name: str, words: str, size: int) -> None:
        super().__init__()
        self._icon = name
        self.setIconSize(QSize(size, size))
        self.setAccessibleName(words)
        self.setToolTip(words)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self._colour()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self._colour()

    def _colour(self) -> None:
        self.setIcon(theme.icon(self._icon, theme.theme_of(self).text))


class CheckBox(QCheckBox):
    """Box to tick whose edge can be seen on every ground."""

    def __init__(self, words: str) -> None:
        super().__init__(words)
        self.setAccessibleName(words)

    def paintEvent(self, _event: QPaintEvent) -> None:
        shades = theme.theme_of(self)
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        size = self.fontMetrics().height()
        box = QRectF(1.0, (self.height() - size) / 2.0, size, size)
        painter.setPen(QPen(theme.colour(shades.focus if self.hasFocus() else shades.muted), 1.4))
        painter.setBrush(theme.colour(shades.field))
        painter.drawRoundedRect(box.adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
        if self.isChecked():
            ratio = self.devicePixelRatioF()
            picture = theme.pixmap("tick", shades.accent, round(size * ratio))
            painter.drawPixmap(box.toRect(), picture)
        painter.setPen(theme.colour(shades.text))
        rest = self.rect().adjusted(round(size * 1.5), 0, 0, 0)
        painter.drawText(rest, Qt.AlignmentFlag.AlignVCenter, self.text())
