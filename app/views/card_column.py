"""The column of cards: one open where room is short, more where there is room."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSize, Qt, QTimer, Signal
from PySide6.QtWidgets import QScrollArea, QVBoxLayout, QWidget

from app.views.card import Card

if TYPE_CHECKING:
    from PySide6.QtGui import QResizeEvent

    from app.presenters.rows import CardState

_TALL = 62  # lines of text from which on several cards fit open
_LEFT_CLOSED = "making"  # in a tall column


class CardColumn(QScrollArea):
    """Cards in the order of the job."""

    edited = Signal(str, str)
    stepped = Signal(str, float, bool)
    acted = Signal(str)
    opened = Signal(str)

    def __init__(self, first_open: str) -> None:
        super().__init__()
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setAccessibleName("Cards of the design")
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # its cards take the focus, not the frame
        self._first_open = first_open
        self.setMaximumWidth(self.fontMetrics().height() * 30)
        self._cards: dict[str, Card] = {}
        self._is_tall: bool | None = None
        inside = QWidget()
        inside.setObjectName("clear")
        self._layout = QVBoxLayout(inside)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(self.fontMetrics().height() // 2)
        self._layout.addStretch(1)
        self.setWidget(inside)
        self.viewport().setAutoFillBackground(False)

    def show_state(self, states: tuple[CardState, ...]) -> None:
        for state in states:
            if state.id in self._cards:
                self._cards[state.id].show_state(state)
            else:
                self._add(state)

    def show_refusal(self, key: str, message: str) -> None:
        for card in self._cards.values():
            field = card.form.field(key)
            if field is not None:
                field.show_refusal(message)

    def focus_field(self, key: str) -> None:
        """Go to the field of a dotted name, or to the nearest one where there is none."""
        for near in _nearest(key):
            for card in self._cards.values():
                found = next((one for one in card.form.keys if one.startswith(near)), None)
                if found is not None:
                    card.focus_field(found)
                    QTimer.singleShot(0, self, self._show_focus)
                    return

    @property
    def all_cards(self) -> tuple[Card, ...]:
        return tuple(self._cards.values())

    def card(self, name: str) -> Card:
        return self._cards[name]

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 20, em * 40)

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 18, em * 12)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._fit()

    def _fit(self) -> None:
        """Open more cards when the column has become tall, one when it no longer is."""
        is_tall = self.height() >= self.fontMetrics().height() * _TALL
        if is_tall == self._is_tall:
            return
        self._is_tall = is_tall
        for name, card in self._cards.items():
            card.open(name != _LEFT_CLOSED if is_tall else name == self._first_open)

    def _add(self, state: CardState) -> None:
        card = self._cards[state.id] = Card(state)
        card.edited.connect(self.edited)
        card.stepped.connect(self.stepped)
        card.acted.connect(self.acted)
        card.opened.connect(lambda is_open, name=state.id: self._on_opened(name, is_open))
        self._layout.insertWidget(self._layout.count() - 1, card)

    def _on_opened(self, name: str, is_open: bool) -> None:
        if is_open and not self._is_tall:
            self._first_open = name
            for other, card in self._cards.items():
                card.open(other == name)
            self.opened.emit(name)

    def _show_focus(self) -> None:
        inside = self.focusWidget()
        if inside is not None:
            self.ensureWidgetVisible(inside, 0, self.fontMetrics().height() * 3)


def _nearest(key: str) -> list[str]:
    """The dotted name itself, then its beginnings, longest first."""
    parts = key.split(".")
    return [".".join(parts[:n]) for n in range(len(parts), 0, -1)]
