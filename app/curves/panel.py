"""The curves: one with a chooser where room is short, all of them where there is room."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeGuard

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFrame, QGridLayout, QHBoxLayout, QLabel, QVBoxLayout

from app.curves.line_plot import LinePlot
from app.curves.pattern import PatternPlot
from app.curves.smith import SmithChart
from app.views.fields import Chooser

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QResizeEvent

    from app.presenters.curves import CurvesState

_CHOICES = (
    ("match", "Match"),
    ("axial_ratio", "Axial ratio"),
    ("smith", "Smith chart"),
    ("pattern", "Pattern"),
)
_ROOMY = 34  # lines of text from which on all charts fit
_WIDE = 26


class CurvesPanel(QFrame):
    """Match, axial ratio, Smith chart and pattern."""

    chosen = Signal(str)
    match_as_chosen = Signal(str)

    def __init__(self, first: str, match_as: str) -> None:
        super().__init__()
        self.setObjectName("panel")
        self.match = LinePlot("Match curve")
        self.ratio = LinePlot("Axial ratio curve")
        self.smith = SmithChart("Smith chart")
        self.pattern = PatternPlot("Pattern")
        self._charts = {
            "match": self.match,
            "axial_ratio": self.ratio,
            "smith": self.smith,
            "pattern": self.pattern,
        }
        self._state: CurvesState | None = None
        self._is_roomy: bool | None = None
        self._which = _chooser("Curve shown", _CHOICES, first, self._on_chosen)
        self._as = _chooser(
            "Match curve as",
            (("S11", "S11"), ("VSWR", "VSWR")),
            match_as,
            self.match_as_chosen.emit,
        )
        title = QLabel("Curves")
        title.setObjectName("title")
        head = QHBoxLayout()
        head.addWidget(title, 1)
        head.addWidget(self._as)
        head.addWidget(self._which)
        self._grid = QGridLayout()
        self._grid.setSpacing(4)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(8, 6, 8, 8)
        layout.setSpacing(5)
        layout.addLayout(head)
        layout.addLayout(self._grid, 1)
        self._arrange()

    def show_state(self, state: CurvesState | None) -> None:
        before, self._state = self._state, state
        if _has_ratio(before) != _has_ratio(state):
            self._arrange()
        # Only what is seen is told: hidden charts catch up when they are shown.
        for name, chart in self._charts.items():
            if not chart.isHidden():
                self._show_chart(name)

    def choose(self, name: str) -> None:
        """Show another curve in a small window."""
        self._which.setCurrentIndex(self._which.findData(name))
        self._on_chosen(name)

    def show_match_as(self, name: str) -> None:
        self._as.setCurrentIndex(max(self._as.findData(name), 0))

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        em = self.fontMetrics().height()
        is_roomy = self.height() >= em * _ROOMY and self.width() >= em * _WIDE
        if is_roomy != self._is_roomy:
            self._is_roomy = is_roomy
            self._arrange()

    def _show_chart(self, name: str) -> None:
        state = self._state
        if name == "match":
            self.match.show_plot(state.match if state else None)
        elif name == "axial_ratio":
            self.ratio.show_plot(state.axial_ratio if _has_ratio(state) else None)
        elif name == "smith":
            self.smith.show_smith(state.smith if state else None)
        else:
            self.pattern.show_pattern(state.pattern if state else None)

    def _arrange(self) -> None:
        for chart in self._charts.values():
            self._grid.removeWidget(chart)
            chart.hide()
        roomy = bool(self._is_roomy)
        self._which.setVisible(not roomy)
        if roomy:
            shown = ["match", "smith", "pattern"]
            self._grid.addWidget(self.match, 0, 0, 1, 2)
            if _has_ratio(self._state):
                shown.insert(1, "axial_ratio")
                self._grid.addWidget(self.ratio, 1, 0, 1, 2)
            self._grid.addWidget(self.smith, 2, 0)
            self._grid.addWidget(self.pattern, 2, 1)
            for row, stretch in ((0, 5), (1, 5 if "axial_ratio" in shown else 0), (2, 6)):
                self._grid.setRowStretch(row, stretch)
        else:
            shown = [str(self._which.currentData())]
            self._grid.addWidget(self._charts[shown[0]], 0, 0, 1, 2)
            for row, stretch in ((0, 1), (1, 0), (2, 0)):
                self._grid.setRowStretch(row, stretch)
        self._as.setVisible("match" in shown)
        for name in shown:
            self._charts[name].show()
            self._show_chart(name)

    def _on_chosen(self, name: str) -> None:
        self._arrange()
        self.chosen.emit(name)


def _has_ratio(state: CurvesState | None) -> TypeGuard[CurvesState]:
    return state is not None and state.has_axial_ratio


def _chooser(
    name: str,
    options: tuple[tuple[str, str], ...],
    first: str,
    chosen: Callable[[str], object],
) -> Chooser:
    box = Chooser(typed=False)
    box.setAccessibleName(name)
    for value, words in options:
        box.addItem(words, value)
    box.setCurrentIndex(max(box.findData(first), 0))
    box.activated.connect(lambda index: chosen(box.itemData(index)))
    return box
