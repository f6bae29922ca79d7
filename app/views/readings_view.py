"""The Readings: sentences, what stands in the way, cautions, and the offer to size."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QFrame,
    QGraphicsOpacityEffect,
    QHBoxLayout,
    QLabel,
    QToolButton,
    QVBoxLayout,
)

from app.views.check_line import CheckLine
from app.views.drawer import Drawer
from app.views.lines import LineList
from app.views.offer import Changes, Offer

if TYPE_CHECKING:
    from app.presenters.readings import ReadingsState

_FEW = 3  # findings shown before the rest is asked for


class ReadingsView(QFrame):
    """The sentences never scroll away; findings and cautions may, where room is short."""

    field_asked = Signal(str)
    size_asked = Signal()
    settle_asked = Signal()
    accepted = Signal()
    discarded = Signal()
    stopped = Signal()
    check_asked = Signal(str)

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("panel")
        self.setAccessibleName("Readings panel")
        title = QLabel("Readings")
        title.setObjectName("title")
        self._engine = QLabel()
        self._engine.setObjectName("muted")
        self._engine.setAccessibleName("Engine of the readings")
        head = QHBoxLayout()
        head.addWidget(title)
        head.addWidget(self._engine, 1, Qt.AlignmentFlag.AlignRight)
        self.lines = LineList("Readings")
        self.findings = LineList("What stands in the way")
        self.cautions = LineList("Cautions")
        self.findings.asked.connect(self.field_asked)
        self._more = _fold("More findings")
        self._more.toggled.connect(lambda _open: self._show_findings())
        self._caution_fold = _fold("Cautions")
        self._caution_fold.toggled.connect(self.cautions.setVisible)
        self.pieces = LineList("Pieces")
        self._piece_fold = _fold("Pieces")
        self._piece_fold.toggled.connect(self.pieces.setVisible)
        self.cautions.hide()
        self.pieces.hide()
        self.offer = Offer()
        self.offer.size_asked.connect(self.size_asked)
        self.offer.settle_asked.connect(self.settle_asked)
        self.offer.accepted.connect(self.accepted)
        self.offer.discarded.connect(self.discarded)
        self.offer.stopped.connect(self.stopped)
        self.check = CheckLine()
        self.check.pressed.connect(self.check_asked)
        self._state: ReadingsState | None = None
        self._faded = False
        layout = QVBoxLayout(self)
        layout.setContentsMargins(10, 7, 10, 8)
        layout.setSpacing(6)
        layout.addLayout(head)
        below = Drawer("Findings and cautions")
        folds = (self._caution_fold, self.cautions, self._piece_fold, self.pieces)
        self.changes = Changes()
        for widget in (self.changes, self.findings, self._more, *folds):
            below.add(widget)
        for part in (self.lines, self.check, self.offer, below):
            layout.addWidget(part)
        layout.addStretch(1)
        # Room for the usual sentences, so that the curves below stay in their place.
        self.setMinimumHeight(self.fontMetrics().height() * 21)

    def show_state(self, state: ReadingsState) -> None:
        before, self._state = self._state, state
        engine = "of the last layout that could be drawn" if state.is_stale else state.engine
        if self._engine.text() != engine:
            self._engine.setText(engine)
        self.lines.show_lines(state.lines)
        self._fade(state.is_stale)
        self.check.show_state(state.check)
        self.offer.show_state(state)
        if before is None or before.offer.changes != state.offer.changes:
            self.changes.show_changes(state.offer.changes)
        if before is None or before.findings != state.findings:
            self._show_findings()
        if before is None or before.cautions != state.cautions:
            self._caution_fold.setText(f"Cautions for this build ({len(state.cautions)})")
            self.cautions.show_lines(state.cautions)
        if before is None or before.pieces != state.pieces:
            self._piece_fold.setText(f"Pieces ({len(state.pieces)})")
            self.pieces.show_lines(state.pieces)

    def _show_findings(self) -> None:
        if self._state is None:
            return
        found = self._state.findings
        is_open = self._more.isChecked()
        self.findings.show_lines(found if is_open else found[:_FEW])
        self._more.setVisible(len(found) > _FEW)
        rest = len(found) - _FEW
        self._more.setText("Fewer" if is_open else f"{rest} more")

    def _fade(self, is_stale: bool) -> None:
        if is_stale == self._faded:
            return
        self._faded = is_stale
        effect = None
        if is_stale:
            effect = QGraphicsOpacityEffect(self.lines)
            effect.setOpacity(0.4)
        self.lines.setGraphicsEffect(effect)  # type: ignore[arg-type]


def _fold(name: str) -> QToolButton:
    button = QToolButton()
    button.setCheckable(True)
    button.setText(name)
    button.setAccessibleName(name)
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button
