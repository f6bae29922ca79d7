"""The line under the sentences that tells what the field check is at."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QGridLayout, QLabel, QPushButton, QWidget

if TYPE_CHECKING:
    from app.presenters.check_words import CheckState


class CheckLine(QWidget):
    """Words about the field check, what it said before the last edit, and one button.

    Under them what a cable would change, where that was asked.
    """

    pressed = Signal(str)

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Field check")
        self._words, self._before = _label("Field check at work"), _label("Solved before")
        self._cable = _label("With a cable")
        self.button = QPushButton()
        self.button.setAccessibleName("Field check")
        self.button.clicked.connect(lambda: self.pressed.emit(self.button.text()))
        layout = QGridLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setVerticalSpacing(2)
        layout.addWidget(self._words, 0, 0)
        layout.addWidget(self._before, 1, 0, 1, 2)
        layout.addWidget(self._cable, 2, 0, 1, 2)
        layout.addWidget(self.button, 0, 1, Qt.AlignmentFlag.AlignTop)
        layout.setColumnStretch(0, 1)

    @property
    def words(self) -> str:
        return self._words.text()

    @property
    def before(self) -> str:
        return self._before.text()

    @property
    def cable(self) -> str:
        return self._cable.text()

    def show_state(self, state: CheckState) -> None:
        _say(self._words, state.words)
        _say(self._before, state.before)
        _say(self._cable, state.cable)
        self._cable.setToolTip(state.cable_tip)
        self._cable.setAccessibleDescription(state.cable_tip)
        if self.button.text() != state.button:
            self.button.setText(state.button)
            self.button.setAccessibleName(f"{state.button}: field check".removeprefix(": "))
        self.button.setVisible(bool(state.button))
        self.setVisible(bool(state.words))


def _label(name: str) -> QLabel:
    label = QLabel()
    label.setObjectName("muted")
    label.setWordWrap(True)
    label.setAccessibleName(name)
    return label


def _say(label: QLabel, words: str) -> None:
    if label.text() != words:
        label.setText(words)
    label.setVisible(bool(words))
