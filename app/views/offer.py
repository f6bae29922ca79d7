"""The offer to size or settle: what it is at, and what it proposes, to take or leave."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QToolButton, QVBoxLayout, QWidget

from app.presenters.readings import Line
from app.views.lines import IconLine

if TYPE_CHECKING:
    from app.presenters.readings import ReadingsState


class Offer(QWidget):
    """Words, and buttons for what can be done."""

    size_asked = Signal()
    settle_asked = Signal()
    accepted = Signal()
    discarded = Signal()
    stopped = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Sizing")
        self._line = IconLine()
        self.size_button = QPushButton("Size to this brief")
        self.size_button.setToolTip("Find lengths that meet the brief; shown first, one undo step")
        self.settle_button = QPushButton("Settle by field check")
        self.settle_button.setToolTip(
            "Correct lengths by the field solver; takes some seconds, shown first, one undo step"
        )
        self.accept_button, self.discard_button = QPushButton("Accept"), QPushButton("Discard")
        self.stop_button = QPushButton("Stop")
        self._lay_out()

    @property
    def words(self) -> str:
        """What is told about a sizing; empty where nothing is."""
        return self._line.line.words if self._line.line is not None else ""

    def show_state(self, state: ReadingsState) -> None:
        offer = state.offer
        self._line.show_line(Line(offer.icon, offer.words))
        had_focus = any(button.hasFocus() for button in self._buttons)
        is_open = state.can_size and not (offer.is_busy or offer.is_proposal)
        self.setVisible(bool(offer.words) or is_open)
        self._line.setVisible(bool(offer.words))
        self.size_button.setVisible(is_open)
        self.settle_button.setVisible(is_open or offer.can_settle)
        self.accept_button.setVisible(offer.is_proposal)
        self.discard_button.setVisible(offer.is_proposal)
        self.stop_button.setVisible(offer.is_busy)
        if had_focus:
            self._keep_focus()

    @property
    def _buttons(self) -> tuple[QPushButton, ...]:
        """Buttons, the harmless ones first."""
        ours = (self.stop_button, self.discard_button, self.settle_button)
        return (*ours, self.size_button, self.accept_button)

    def _keep_focus(self) -> None:
        """Keep the focus here when the button that had it goes."""
        shown = [button for button in self._buttons if not button.isHidden()]
        if shown and not any(button.hasFocus() for button in shown):
            shown[0].setFocus()

    def _lay_out(self) -> None:
        buttons = QHBoxLayout()
        buttons.setContentsMargins(0, 0, 0, 0)
        for button, signal in (
            (self.size_button, self.size_asked),
            (self.accept_button, self.accepted),
            (self.discard_button, self.discarded),
            (self.settle_button, self.settle_asked),
            (self.stop_button, self.stopped),
        ):
            button.setAccessibleName(button.text())
            button.clicked.connect(signal)
            buttons.addWidget(button)
        buttons.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        layout.addWidget(self._line)
        layout.addLayout(buttons)


class Changes(QWidget):
    """Lengths that a proposal would change, a line each, under a button that folds them."""

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("What would change")
        self.fold = QToolButton()
        self.fold.setCheckable(True)
        self.fold.setChecked(True)
        self.fold.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self._lines = QLabel()
        self._lines.setAccessibleName("Lengths that would change")
        self.fold.toggled.connect(self._lines.setVisible)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addWidget(self.fold)
        layout.addWidget(self._lines)
        self.show_changes(())

    @property
    def words(self) -> str:
        """The lines."""
        return self._lines.text()

    def show_changes(self, changes: tuple[str, ...]) -> None:
        self.fold.setText(f"What would change ({len(changes)})")
        self.fold.setAccessibleName(self.fold.text())
        self._lines.setText("\n".join(changes))
        self.setVisible(bool(changes))
