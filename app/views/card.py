"""A folded card: a header that opens it, and its form."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QRect, QSize, Qt, Signal
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QAbstractButton, QFrame, QVBoxLayout

from app import theme
from app.views.card_form import CardForm, shape_of

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent

    from app.presenters.rows import CardState


class CardHeader(QAbstractButton):
    """Title, what the card says in a line while it is closed, and a sign of its state."""

    def __init__(self) -> None:
        super().__init__()
        self.setCheckable(True)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self._summary = ""

    def show_words(self, title: str, summary: str) -> None:
        if (title, summary) != (self.text(), self._summary):
            self.setText(title)
            self._summary = summary
            self.setAccessibleName(title)
            self.setAccessibleDescription(summary)
            self.update()

    def sizeHint(self) -> QSize:
        height = self.fontMetrics().height()
        return QSize(height * 16, round(height * 2.1))

    def minimumSizeHint(self) -> QSize:
        return QSize(self.fontMetrics().height() * 8, self.sizeHint().height())

    def paintEvent(self, _event: QPaintEvent) -> None:
        shades = theme.theme_of(self)
        painter = QPainter(self)
        em = self.fontMetrics().height()
        arrow = QRect(em * 2 // 3, (self.height() - em) // 2, em, em)
        name = "fold-open" if self.isChecked() else "fold-closed"
        size = round(em * self.devicePixelRatioF())
        painter.drawPixmap(arrow, theme.pixmap(name, shades.muted, size))
        font = self.font()
        font.setBold(True)
        painter.setFont(font)
        painter.setPen(theme.colour(shades.text))
        middle = Qt.AlignmentFlag.AlignVCenter
        place = QRect(em * 2, 0, self.width() - em * 2, self.height())
        used = painter.boundingRect(place, middle, self.text())
        painter.drawText(place, middle, self.text())
        if not self.isChecked():
            self._paint_summary(painter, used.right() + em)
        if self.hasFocus():
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QPen(theme.colour(shades.focus), 1.5))
            painter.drawRoundedRect(self.rect().adjusted(2, 2, -2, -2), 5, 5)

    def _paint_summary(self, painter: QPainter, left: int) -> None:
        painter.setFont(self.font())
        painter.setPen(theme.colour(theme.theme_of(self).muted))
        width = self.width() - left - self.fontMetrics().height() * 2 // 3
        place = QRect(left, 0, width, self.height())
        words = self.fontMetrics().elidedText(self._summary, Qt.TextElideMode.ElideRight, width)
        align = Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignRight
        painter.drawText(place, align, words)


class Card(QFrame):
    """One card of the column."""

    edited = Signal(str, str)
    stepped = Signal(str, float, bool)
    acted = Signal(str)
    opened = Signal(bool)

    def __init__(self, state: CardState) -> None:
        super().__init__()
        self.setObjectName("card")
        self.setAccessibleName(f"{state.title} card")
        self.header = CardHeader()
        self.header.toggled.connect(self._on_toggled)
        layout = self._column = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.header)
        self._shape: tuple[object, ...] = ()
        self._form: CardForm | None = None
        self._state: CardState
        self.show_state(state)

    @property
    def form(self) -> CardForm:
        """The form of the state shown, also while the card is closed."""
        self._catch_up()
        assert self._form is not None
        return self._form

    @property
    def is_open(self) -> bool:
        return self.header.isChecked()

    def open(self, is_open: bool) -> None:
        self.header.setChecked(is_open)

    def show_state(self, state: CardState) -> None:
        if self._is_settled and self._state.is_like(state):
            return
        self._state, self._is_behind = state, True
        self.header.show_words(state.title, state.summary)
        if self.is_open:  # a closed form catches up when it is looked at
            self._catch_up()

    @property
    def _is_settled(self) -> bool:
        """Whether the form shows its state, and nobody is typing in it."""
        return self._form is not None and not self._is_behind and not self._form.key_in_use

    def focus_field(self, key: str) -> None:
        """Open the card at a field."""
        self.open(True)
        self.form.focus_field(key)

    def _catch_up(self) -> None:
        if self._is_behind:
            self._is_behind = False
            if self._form is None or shape_of(self._state) != self._shape:
                self._form = self._built(self._state, self._form)
            self._form.show_rows(self._state)

    def _built(self, state: CardState, old: CardForm | None) -> CardForm:
        """Make the form; what was folded out, and the field in use, stay so."""
        self._shape = shape_of(state)
        form = CardForm(state)
        form.edited.connect(self.edited)
        form.stepped.connect(self.stepped)
        form.acted.connect(self.acted)
        form.setVisible(self.is_open)
        self._column.addWidget(form)
        if old is not None:
            form.show_more(old.shows_more)
            form.focus_field(old.key_in_use)
            old.hide()
            old.setParent(None)
            old.deleteLater()
        return form

    def _on_toggled(self, is_open: bool) -> None:
        self.form.setVisible(is_open)
        self.opened.emit(is_open)
