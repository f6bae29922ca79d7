"""The bar that tells what went wrong, what was done or what is waiting, within the window."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QPushButton

from app.notices import NOTICES
from app.presenters.readings import Line
from app.views.buttons import IconButton
from app.views.lines import IconLine


class NoticeBar(QFrame):
    """One notice at a time; closing it is the user's."""

    pressed = Signal(str, str)  # notice, button
    closed = Signal(str)

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("card")
        self.setAccessibleName("Notice")
        self.id = ""
        self._line = IconLine()
        self._layout = QHBoxLayout(self)
        self._layout.setContentsMargins(10, 4, 6, 4)
        self._layout.addWidget(self._line, 1)
        self._buttons: list[QPushButton] = []
        self._close = IconButton("close", "Close this notice", self.fontMetrics().height())
        self._close.clicked.connect(self._on_closed)
        self._layout.addWidget(self._close)
        self.hide()

    @property
    def words(self) -> str:
        return self._line.line.words if self._line.line else ""

    def tell(self, notice: str, **words: str) -> None:
        """Show a notice of the table with its places filled."""
        row = NOTICES[notice]
        self.id = notice
        self._line.show_line(Line(row.icon, row.text.format(**words)))
        for old in self._buttons:
            self._layout.removeWidget(old)
            old.deleteLater()
        self._buttons = [QPushButton(text) for text in row.buttons]
        for i, (text, button) in enumerate(zip(row.buttons, self._buttons, strict=True)):
            button.setAccessibleName(text)
            button.clicked.connect(lambda _=False, word=text: self._on_pressed(notice, word))
            self._layout.insertWidget(1 + i, button)
        self.show()

    def clear(self, *notices: str) -> None:
        """Take the bar away, where it shows one of these or none is named."""
        if not notices or self.id in notices:
            self.hide()
            self.id = ""

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._line.updateGeometry()

    def _on_pressed(self, notice: str, text: str) -> None:
        self.clear()
        self.pressed.emit(notice, text)

    def _on_closed(self) -> None:
        notice = self.id
        self.clear()
        self.closed.emit(notice)
