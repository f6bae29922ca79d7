"""The only place that opens boxes and file dialogs."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QFileDialog, QMessageBox

from app.presenters.files import SUFFIX, Unsaved

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

_FILTER = f"Kerfwave projects (*{SUFFIX})"


class WindowAsker:
    """Asks in windows over the given one."""

    def __init__(self, parent: QWidget) -> None:
        self._parent = parent

    def ask_open(self, folder: str) -> Path | None:
        name, _ = QFileDialog.getOpenFileName(self._parent, "Open a project", folder, _FILTER)
        return Path(name) if name else None

    def ask_save(self, start: Path) -> Path | None:
        # The dialog itself asks before a file is replaced.
        name, _ = QFileDialog.getSaveFileName(self._parent, "Save the project", str(start), _FILTER)
        return Path(name) if name else None

    def ask_folder(self, start: str) -> Path | None:
        name = QFileDialog.getExistingDirectory(self._parent, "Folder to write to", start)
        return Path(name) if name else None

    def ask_unsaved(self, name: str) -> Unsaved:
        buttons = QMessageBox.StandardButton
        answer = QMessageBox.warning(
            self._parent,
            "Unsaved changes",
            f"Save the changes to “{name}” first?",
            buttons.Save | buttons.Discard | buttons.Cancel,
            buttons.Save,
        )
        answers = {buttons.Save: Unsaved.SAVE, buttons.Discard: Unsaved.DISCARD}
        return answers.get(answer, Unsaved.CANCEL)

    def tell(self, title: str, text: str) -> None:
        QMessageBox.information(self._parent, title, text)
