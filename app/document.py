"""The design on the bench: its undo steps, its file and whether it is saved."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

if TYPE_CHECKING:
    from collections.abc import Callable, Hashable
    from pathlib import Path

    from core.design.model import Design


class ReplaceDesign(QUndoCommand):
    """One edit: the design before and after it.

    Edits with the same merge key, such as the steps of one drag, are one undo step; one that
    ends where it began is none.
    """

    def __init__(
        self,
        before: Design,
        after: Design,
        text: str,
        merge_key: Hashable | None,
        show: Callable[[Design], None],
    ) -> None:
        super().__init__(text)
        self.before, self.after = before, after
        self._merge_key = merge_key
        self._show = show

    def redo(self) -> None:
        self._show(self.after)

    def undo(self) -> None:
        self._show(self.before)

    def id(self) -> int:
        return -1 if self._merge_key is None else 1

    def mergeWith(self, other: QUndoCommand) -> bool:
        if not isinstance(other, ReplaceDesign) or other._merge_key != self._merge_key:
            return False
        self.after = other.after
        self.setObsolete(self.before == self.after)
        return True


class Document(QObject):
    """Holds the current design; the only holder of state in the window."""

    design_changed = Signal(object)
    started = Signal()
    path_changed = Signal(object)

    def __init__(self, design: Design, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.stack = QUndoStack(self)
        self._design = design
        self._path: Path | None = None
        self._gesture = 0

    @property
    def design(self) -> Design:
        return self._design

    @property
    def path(self) -> Path | None:
        return self._path

    @property
    def is_modified(self) -> bool:
        return not self.stack.isClean()

    def change(self, after: Design, text: str, merge_key: Hashable | None = None) -> None:
        """Put another design on the bench, as one undo step or a part of one."""
        if after == self._design:
            return
        self.stack.push(ReplaceDesign(self._design, after, text, merge_key, self._show))

    def next_gesture(self) -> int:
        """Return a number that no other drag or held key has: part of its merge key."""
        self._gesture += 1
        return self._gesture

    def start(self, design: Design, path: Path | None) -> None:
        """Begin with another file's design, or a new one."""
        self.started.emit()
        self.stack.clear()
        self._set_path(path)
        self._show(design)

    def mark_saved(self, path: Path) -> None:
        self.stack.setClean()
        self._set_path(path)

    def mark_unsaved(self) -> None:
        """Say that no file holds this design, such as one that was recovered."""
        self.stack.resetClean()

    def _set_path(self, path: Path | None) -> None:
        self._path = path
        self.path_changed.emit(path)

    def _show(self, design: Design) -> None:
        self._design = design
        self.design_changed.emit(design)
