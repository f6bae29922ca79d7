"""Small buttons that carry an icon and a name."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import QToolButton

from app import theme


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
