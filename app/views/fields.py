"""Fields of a card: a line to type in and a choice, each with its refusal beneath."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QRect, Qt, Signal
from PySide6.QtGui import QPainter
from PySide6.QtWidgets import QComboBox, QLabel, QLineEdit, QSizePolicy, QVBoxLayout, QWidget

from app import theme

if TYPE_CHECKING:
    from PySide6.QtGui import QFocusEvent, QKeyEvent, QPaintEvent, QWheelEvent

    from app.presenters.rows import Choice, Field


class Line(QLineEdit):
    """Line that commits on Enter or when left, and takes its text back on Escape."""

    committed = Signal(str)
    stepped = Signal(float, bool)
    taken_back = Signal()

    def __init__(self, steps: bool) -> None:
        super().__init__()
        self._shown = ""
        self._steps = steps

    def show_text(self, text: str) -> None:
        self._shown = text
        self.setText(text)
        self.setCursorPosition(0)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key = event.key()
        if key in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self._commit()
            self.selectAll()
        elif key == Qt.Key.Key_Escape:
            self.show_text(self._shown)
            self.selectAll()
            self.taken_back.emit()
        elif self._steps and key in (Qt.Key.Key_Up, Qt.Key.Key_Down):
            self._commit()
            keys = event.modifiers()
            size = 10.0 if keys & Qt.KeyboardModifier.ShiftModifier else 1.0
            size = 0.1 if keys & Qt.KeyboardModifier.ControlModifier else size
            self.stepped.emit(size if key == Qt.Key.Key_Up else -size, event.isAutoRepeat())
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        if event.reason() in (Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason):
            self.selectAll()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if event.reason() is not Qt.FocusReason.PopupFocusReason:
            self._commit()

    def _commit(self) -> None:
        if self.text() != self._shown:
            self.committed.emit(self.text())


class Chooser(QComboBox):
    """Choice that the wheel changes only when it has the focus."""

    def __init__(self, typed: bool) -> None:
        super().__init__()
        self.setEditable(typed)
        self.setInsertPolicy(QComboBox.InsertPolicy.NoInsert)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(8)

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        size = self.fontMetrics().height() * 4 // 5
        ratio = self.devicePixelRatioF()
        picture = theme.pixmap("fold-open", theme.theme_of(self).muted, round(size * ratio))
        place = QRect(self.width() - size * 3 // 2, (self.height() - size) // 2, size, size)
        QPainter(self).drawPixmap(place, picture)

    def wheelEvent(self, event: QWheelEvent) -> None:
        if self.hasFocus():
            super().wheelEvent(event)
        else:
            event.ignore()


class FieldView(QWidget):
    """A field with the line beneath it that says why something was not taken."""

    edited = Signal(str, str)
    stepped = Signal(str, float, bool)

    def __init__(self, row: Field | Choice) -> None:
        super().__init__()
        self.key = row.key
        self._refusal = QLabel()
        self._refusal.setObjectName("refusal")
        self._refusal.setWordWrap(True)
        self._refusal.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self._refusal.hide()
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(2)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Minimum)

    def place(self, editor: QWidget, name: str) -> None:
        editor.setAccessibleName(name)
        self._refusal.setAccessibleName(f"{name}, why it was not taken")
        self._editor = editor
        self._layout.addWidget(editor)
        self._layout.addWidget(self._refusal)
        self.setFocusProxy(editor)
        self.setAccessibleName(f"{name}, field")

    @property
    def is_in_use(self) -> bool:
        """Whether the focus is in it."""
        return self._editor.hasFocus()

    def show_refusal(self, message: str) -> None:
        if message == self._refusal.text():
            return
        self._refusal.setText(message)
        self._refusal.setVisible(bool(message))
        self._editor.setAccessibleDescription(message)
        self._editor.setProperty("refused", bool(message))
        self._editor.style().unpolish(self._editor)
        self._editor.style().polish(self._editor)


class LineField(FieldView):
    """Field of a quantity or of words."""

    def __init__(self, row: Field, name: str) -> None:
        super().__init__(row)
        self._line = Line(row.steps)
        self._shown: Field | None = None
        self.place(self._line, name)
        self._line.committed.connect(self._on_committed)
        self._line.stepped.connect(lambda n, held: self.stepped.emit(self.key, n, held))
        self._line.taken_back.connect(lambda: self.show_refusal(""))

    def _on_committed(self, text: str) -> None:
        self.show_refusal("")  # told again where it is refused again
        self.edited.emit(self.key, text)

    def show_row(self, row: Field) -> None:
        if row == self._shown and self._line.property("refused"):
            return
        if row != self._shown or self._line.text() != row.text:
            self._shown = row
            self._line.show_text(row.text)
            self._line.setToolTip(row.tip)
        if self._line.property("refused"):
            self.show_refusal("")


class ChoiceField(FieldView):
    """Field that is one of several."""

    def __init__(self, row: Choice, name: str) -> None:
        super().__init__(row)
        self._box = Chooser(row.typed)
        self._shown: Choice | None = None
        self.place(self._box, name)
        self._box.activated.connect(self._on_chosen)
        line = self._box.lineEdit()
        if line is not None:
            line.setAccessibleName(name)
            line.editingFinished.connect(self._on_typed)

    def show_row(self, row: Choice) -> None:
        if row != self._shown:
            self._shown = row
            self._box.clear()
            for value, words in row.options:
                self._box.addItem(words, value)
            self._box.setToolTip(row.tip)
            self.show_refusal("")
        self._box.setCurrentIndex(self._box.findData(row.value))

    def show_refusal(self, message: str) -> None:
        super().show_refusal(message)
        if message and self._shown and not self._box.isEditable():
            self._box.setCurrentIndex(self._box.findData(self._shown.value))

    def _on_chosen(self, index: int) -> None:
        self.edited.emit(self.key, str(self._box.itemData(index)))

    def _on_typed(self) -> None:
        text = self._box.currentText()
        if self._shown and text != self._shown.value and self._box.findText(text) < 0:
            self.edited.emit(self.key, text)
