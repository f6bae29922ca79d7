"""A part of a panel that shows all of itself where there is room, and scrolls elsewhere."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QSizePolicy, QVBoxLayout, QWidget


class Drawer(QScrollArea):
    """Widgets under each other, as high as they need to be and no higher."""

    def __init__(self, name: str) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # what is in it takes the focus
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Maximum)
        inside = QWidget()
        inside.setObjectName("clear")
        self._layout = QVBoxLayout(inside)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(6)
        self.setWidget(inside)
        self.viewport().setAutoFillBackground(False)
        inside.installEventFilter(self)

    def add(self, widget: QWidget) -> None:
        self._layout.addWidget(widget)

    def sizeHint(self) -> QSize:
        return QSize(self.fontMetrics().height() * 18, self._needed())

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 8, min(self._needed(), em * 3))

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.LayoutRequest:
            self.updateGeometry()
        return super().eventFilter(watched, event)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self.updateGeometry()

    def _needed(self) -> int:
        if not self._layout.hasHeightForWidth():
            return self._layout.sizeHint().height()
        return self._layout.totalHeightForWidth(max(self.width(), self.minimumSize().width(), 50))
