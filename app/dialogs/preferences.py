"""Preferences, made from the table of settings; each takes effect at once."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QDialog, QFormLayout, QPushButton

from app.settings import SETTINGS
from app.views.buttons import CheckBox
from app.views.fields import Chooser

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.settings import Setting, Settings


class PreferencesDialog(QDialog):
    """One row for each setting that is shown."""

    def __init__(self, settings: Settings, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle("Preferences")
        self._settings = settings
        form = QFormLayout(self)
        self.editors: dict[str, QWidget] = {}
        for row in SETTINGS:
            if row.shown:
                self.editors[row.key] = self._editor(row)
                label = "" if isinstance(row.default, bool) else row.label  # a box bears its own
                form.addRow(label, self.editors[row.key])
        close = QPushButton("Close")
        close.setAccessibleName("Close")
        close.clicked.connect(self.reject)
        form.addRow(close)

    def _editor(self, row: Setting) -> QWidget:
        value = self._settings.value(row.key)
        if isinstance(row.default, bool):
            box = CheckBox(row.label)
            box.setChecked(value)
            box.toggled.connect(lambda on: self._settings.set(row.key, on))
            editor: QWidget = box
        else:
            choice = Chooser(typed=False)
            choice.addItems([str(one) for one in row.allowed])
            choice.setCurrentText(value)
            choice.textActivated.connect(lambda text: self._settings.set(row.key, text))
            editor = choice
        editor.setAccessibleName(row.label)
        editor.setToolTip(row.help)
        return editor
