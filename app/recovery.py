"""A copy of unsaved work beside the settings, for the day that the program or the power ends."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QLockFile, QObject, QTimer, Signal

from core.errors import CoreError, FileError
from core.storage.project import read_project, write_project

if TYPE_CHECKING:
    from pathlib import Path

    from app.document import Document
    from core.design.model import Design

_PAUSE = 2000  # ms after the last change
_MOST_WINDOWS = 20


class Recovery(QObject):
    """Writes a copy soon after each change; finds what an earlier window left behind."""

    failed = Signal(str)

    def __init__(self, document: Document, folder: Path) -> None:
        super().__init__(document)
        self._document = document
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(_PAUSE)
        self._timer.timeout.connect(self.save)
        folder.mkdir(parents=True, exist_ok=True)
        self._lock, self.path = self._own_place(folder)
        self._left = self._read_left()
        document.design_changed.connect(lambda _design: self._timer.start())
        document.stack.cleanChanged.connect(self._on_clean_changed)

    @property
    def left(self) -> Design | None:
        """Work that was not saved when the window that had this place ended."""
        return self._left

    def save(self) -> bool:
        """Write the copy now, if there is anything unsaved."""
        self._timer.stop()
        if not self._document.is_modified:
            return False
        try:
            write_project(self.path, self._document.design, replace=True)
        except CoreError as error:
            self.failed.emit(str(error))
            return False
        return True

    def restore(self) -> None:
        """Put what was left behind on the bench, as unsaved work."""
        if self._left is not None:
            self._document.start(self._left, None)
            self._document.mark_unsaved()
            self._left = None

    def forget(self) -> None:
        """Delete the copy: its work is saved, or no longer wanted."""
        self._timer.stop()
        self._left = None
        self.path.unlink(missing_ok=True)

    def close(self) -> None:
        """The window ends in good order."""
        if self._left is None:
            self.forget()
        self._lock.unlock()

    def _own_place(self, folder: Path) -> tuple[QLockFile, Path]:
        """The first place that no other running window holds."""
        for n in range(_MOST_WINDOWS):
            lock = QLockFile(str(folder / f"unsaved-{n}.lock"))
            lock.setStaleLockTime(0)
            if lock.tryLock(0):
                break
        return lock, folder / f"unsaved-{n}.kerf"

    def _read_left(self) -> Design | None:
        if not self.path.exists():
            return None
        try:
            return read_project(self.path)
        except FileError:
            return None

    def _on_clean_changed(self, is_clean: bool) -> None:
        if is_clean and self._left is None:
            self.forget()
