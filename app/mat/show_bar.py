"""What is drawn on the Mat: a small chooser in the plan view's corner, and the pause button."""

from __future__ import annotations

from typing import Final

from PySide6.QtCore import QEvent, QObject, Qt, Signal
from PySide6.QtWidgets import QBoxLayout, QComboBox, QFrame, QHBoxLayout, QWidget

from app.mat.current import CurrentState, Shows
from app.mat.legend import Legend
from app.views.buttons import IconButton
from app.views.fields import Chooser

CHOICES: Final = {
    Shows.COPPER: "Copper",
    Shows.MESH: "Mesh",
    Shows.CURRENT: "Current",
    Shows.GROUND: "Ground current",
}
_MARGIN = 6  # pixels from the corner
_ROW = 0.72  # of the view's breadth that one row may take: the rest has words of its own


class ShowBar(QFrame):
    """Lies over the lower right corner of a view, and beside it for the keyboard."""

    chosen = Signal(str)
    animated = Signal(bool)

    def __init__(self, view: QWidget, parent: QWidget) -> None:
        super().__init__(parent)
        self.setObjectName("shown")
        self.setAccessibleName("What the Mat shows")
        self._view = view
        self.chooser = Chooser(typed=False)
        self.chooser.setAccessibleName("Show on the Mat")
        self.chooser.setToolTip("Plain copper, the solver's mesh or the solved current")
        self.chooser.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        for value, words in CHOICES.items():
            self.chooser.addItem(words, value)
        self.chooser.activated.connect(
            lambda place: self.chosen.emit(str(self.chooser.itemData(place)))
        )
        size = self.fontMetrics().height()
        self.pause = IconButton("pause", "Stop the current at this instant", size)
        self.play = IconButton("play", "Let the current move", size)
        self.pause.clicked.connect(lambda: self.animated.emit(False))
        self.play.clicked.connect(lambda: self.animated.emit(True))
        self.legend = Legend()
        right, low = Qt.AlignmentFlag.AlignRight, Qt.AlignmentFlag.AlignBottom
        row = QHBoxLayout()
        row.setSpacing(4)
        for widget in (self.pause, self.play, self.chooser):
            row.addWidget(widget)
        self._box = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._box.setContentsMargins(0, 0, 0, 0)
        self._box.setSpacing(6)
        self._box.addWidget(self.legend, 0, right | low)
        self._box.addLayout(row)
        self._box.setAlignment(row, right | low)
        view.installEventFilter(self)
        self.show_state(CurrentState())

    def show_state(self, state: CurrentState) -> None:
        self.chooser.setCurrentIndex(self.chooser.findData(state.shows))
        is_drawn, had_focus = state.sheet is not None, self.pause.hasFocus() or self.play.hasFocus()
        self.pause.setVisible(is_drawn and state.moves)
        self.play.setVisible(is_drawn and not state.moves)
        if had_focus and is_drawn:
            (self.pause if state.moves else self.play).setFocus()
        self.legend.show_state(state)
        self._place()

    def eventFilter(self, _watched: QObject, event: QEvent) -> bool:
        if event.type() in (QEvent.Type.Resize, QEvent.Type.Move, QEvent.Type.Show):
            self._place()
        return False

    def _place(self) -> None:
        """Keep to the corner; the legend goes above where the row would be too long."""
        corner, beside = self._view.geometry(), QBoxLayout.Direction.LeftToRight
        self._box.setDirection(beside)
        if self._box.sizeHint().width() > corner.width() * _ROW:
            self._box.setDirection(QBoxLayout.Direction.TopToBottom)
        self._box.activate()
        size = self._box.sizeHint()
        self.setGeometry(
            corner.right() - size.width() - _MARGIN,
            corner.bottom() - size.height() - _MARGIN,
            size.width(),
            size.height(),
        )
