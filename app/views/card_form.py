"""The form on a card: rows of fields, the rarely needed ones folded away."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFormLayout, QHBoxLayout, QLabel, QToolButton, QWidget

from app.presenters.rows import Choice, Deeds, Field, Heading
from app.views.buttons import IconButton
from app.views.fields import ChoiceField, LineField

if TYPE_CHECKING:
    from app.presenters.rows import CardState, Row


class CardForm(QWidget):
    """Rows of one card; made anew when other rows are wanted."""

    edited = Signal(str, str)
    stepped = Signal(str, float, bool)
    acted = Signal(str)

    def __init__(self, state: CardState) -> None:
        super().__init__()
        self._form = QFormLayout(self)
        em = self.fontMetrics().height()
        self._form.setContentsMargins(em, 0, em, em * 2 // 3)
        self._form.setVerticalSpacing(em // 3)
        self._form.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.AllNonFixedFieldsGrow)
        self._lines: dict[str, LineField] = {}
        self._choices: dict[str, ChoiceField] = {}
        self._buttons: dict[str, QToolButton] = {}
        self._more = QToolButton()
        self._more.setCheckable(True)
        self._more.setText("More")
        self._more.setAccessibleName(f"More of {state.title}")
        self._more.toggled.connect(self.show_more)
        rows = sorted(state.rows, key=lambda row: row.more if hasattr(row, "more") else False)
        self._more_rows: list[QWidget] = []
        group = state.title
        for row in rows:
            group = row.label if isinstance(row, Heading | Deeds) else group
            if row.more and not self._more_rows:
                self._form.addRow(self._more)
            widget = self._add(row, group)
            if row.more:
                self._more_rows.append(widget)
        self.show_more(False)

    @property
    def keys(self) -> tuple[str, ...]:
        """Dotted names of the fields, in the order of the form."""
        return (*self._lines, *self._choices)

    @property
    def shows_more(self) -> bool:
        return self._more.isChecked()

    def show_rows(self, state: CardState) -> None:
        for row in state.rows:
            if isinstance(row, Field):
                self._lines[row.key].show_row(row)
            elif isinstance(row, Choice):
                self._choices[row.key].show_row(row)
            elif isinstance(row, Deeds):
                for deed in row.deeds:
                    self._buttons[deed.key].setEnabled(deed.enabled)

    def field(self, key: str) -> LineField | ChoiceField | None:
        return self._lines.get(key) or self._choices.get(key)

    @property
    def key_in_use(self) -> str:
        """Field or button that has the focus; empty where none of them has."""
        for key in self.keys:
            field = self.field(key)
            if field is not None and field.is_in_use:
                return key
        return next((key for key, one in self._buttons.items() if one.hasFocus()), "")

    def focus_field(self, key: str) -> None:
        """Put the focus into a field, or on a button; on none where there is no such."""
        button, field = self._buttons.get(key), self.field(key)
        if button is not None:
            button.setFocus(Qt.FocusReason.OtherFocusReason)
        if field is not None:
            if field in self._more_rows:
                self._more.setChecked(True)
            field.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def show_more(self, is_open: bool) -> None:
        self._more.setChecked(is_open)
        self._more.setText("Less" if is_open else "More")
        for widget in self._more_rows:
            self._form.setRowVisible(widget, is_open)

    def _add(self, row: Row, group: str) -> QWidget:
        if isinstance(row, Heading):
            label = QLabel(row.label)
            label.setObjectName("group")
            self._form.addRow(label)
            return label
        if isinstance(row, Deeds):
            line = self._buttons_row(row)
            self._form.addRow(line)
            return line
        name = f"{group}: {row.label}"
        field: LineField | ChoiceField
        if isinstance(row, Field):
            field = self._lines[row.key] = LineField(row, name)
        else:
            field = self._choices[row.key] = ChoiceField(row, name)
        field.edited.connect(self.edited)
        field.stepped.connect(self.stepped)
        self._form.addRow(row.label, field)
        return field

    def _buttons_row(self, row: Deeds) -> QWidget:
        line = QWidget()
        layout = QHBoxLayout(line)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(1)
        label = QLabel(row.label)
        label.setObjectName("group")
        layout.addWidget(label, 1)
        em = self.fontMetrics().height()
        for deed in row.deeds:
            button = IconButton(deed.icon, f"{deed.label}: {row.label}", em)
            button.setToolTip(deed.label)
            button.clicked.connect(lambda _=False, key=deed.key: self.acted.emit(key))
            self._buttons[deed.key] = button
            layout.addWidget(button)
        return line


def shape_of(state: CardState) -> tuple[object, ...]:
    """What of a card decides which widgets it needs."""
    return tuple(
        (
            type(row),
            getattr(row, "key", ""),
            row.label,
            row.more,
            tuple(deed.key for deed in row.deeds) if isinstance(row, Deeds) else (),
        )
        for row in state.rows
    )
