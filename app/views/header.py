"""The strip along the top: menus, undo and redo, and the one button always in sight."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLabel,
    QMenuBar,
    QPushButton,
    QSizePolicy,
    QToolButton,
)

from app import theme
from app.actions import MENUS, fill_menus

if TYPE_CHECKING:
    from PySide6.QtGui import QAction, QResizeEvent
    from PySide6.QtWidgets import QMenu

_BUTTONS = ("undo", "redo", "fit", "fit-copper")


class Header(QFrame):
    """Menus at the left, the name of the work in the middle, buttons at the right."""

    def __init__(self, actions: dict[str, QAction]) -> None:
        super().__init__()
        self.setObjectName("header")
        self.setAccessibleName("Header")
        self._actions = actions
        bar = QMenuBar()
        bar.setAccessibleName("Menus")
        self.menus: dict[str, QMenu] = {name: bar.addMenu(name) for name in MENUS}
        for name, menu in self.menus.items():
            menu.setAccessibleName(name.replace("&", ""))
        fill_menus(self.menus, actions)
        self._name = QLabel()
        self._name.setObjectName("muted")
        self._name.setAccessibleName("What is on the bench")
        self._name.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self._name.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self._whole_name = ""
        self.template_button = QPushButton("Template…")
        self.template_button.setObjectName("primary")
        self.template_button.setAccessibleName("Template")
        self.template_button.setToolTip(actions["template"].toolTip())
        self.template_button.clicked.connect(actions["template"].trigger)
        em = self.fontMetrics().height()
        layout = QHBoxLayout(self)
        layout.setContentsMargins(em // 3, em // 4, em // 2, em // 4)
        layout.setSpacing(em // 4)
        layout.addWidget(bar)
        layout.addWidget(self._name, 1)
        for name in _BUTTONS:
            layout.addWidget(self._button(name, em))
        layout.addSpacing(em // 2)
        layout.addWidget(self.template_button)
        self._colour()

    def show_name(self, name: str) -> None:
        if name != self._whole_name:
            self._whole_name = name
            self._fit_name()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit_name()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self._colour()

    def _button(self, name: str, em: int) -> QToolButton:
        button = QToolButton()
        button.setDefaultAction(self._actions[name])
        button.setIconSize(QSize(em * 5 // 4, em * 5 // 4))
        button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        button.setAccessibleName(self._actions[name].text().replace("&", ""))
        return button

    def _fit_name(self) -> None:
        """A long name gives way; it never makes the window wider."""
        middle = Qt.TextElideMode.ElideMiddle
        words = self._name.fontMetrics().elidedText(self._whole_name, middle, self._name.width())
        if words != self._name.text():
            self._name.setText(words)
            self._name.setToolTip(self._whole_name)

    def _colour(self) -> None:
        tint = theme.theme_of(self).text
        for name in _BUTTONS:
            self._actions[name].setIcon(theme.icon(name, tint))
