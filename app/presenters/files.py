"""Project files: new, open, save, and what happens to unsaved work."""

from __future__ import annotations

from enum import Enum
from pathlib import Path
from typing import TYPE_CHECKING, Protocol

from core.design.defaults import default_design
from core.errors import CoreError, FileError
from core.storage.project import read_project, write_project

if TYPE_CHECKING:
    from app.document import Document
    from app.settings import Settings

SUFFIX = ".kerf"


class Unsaved(Enum):
    """What to do with changes that no file holds."""

    SAVE = "save"
    DISCARD = "discard"
    CANCEL = "cancel"


class Asker(Protocol):
    """Asks the user for what only they can tell; all its windows are modal."""

    def ask_open(self, folder: str) -> Path | None: ...
    def ask_save(self, start: Path) -> Path | None: ...
    def ask_unsaved(self, name: str) -> Unsaved: ...


class Bar(Protocol):
    """Where failures are told."""

    def tell(self, notice: str, **words: str) -> None: ...
    def clear(self, *notices: str) -> None: ...


class FilesPresenter:
    """Opens and saves the document."""

    def __init__(self, document: Document, settings: Settings, asker: Asker, bar: Bar) -> None:
        self._document, self._settings = document, settings
        self._asker, self._bar = asker, bar

    @property
    def name(self) -> str:
        """What the title calls the design: its file, or its own name."""
        path = self._document.path
        return path.stem if path is not None else self._document.design.name or "Untitled"

    def new(self) -> None:
        if self.may_leave():
            self._document.start(default_design(), None)

    def ask_open(self) -> None:
        path = self._asker.ask_open(self._settings.value("project_folder"))
        if path is not None:
            self.open(path)

    def open(self, path: Path) -> None:
        """Open a project file; what is on the bench stays where it cannot be read."""
        if path.suffix.lower() != SUFFIX:
            self._bar.tell("not-ours", name=path.name)
            return
        try:
            design = read_project(path)
        except FileError as error:
            self._bar.tell("open-failed", reason=str(error))
            return
        if not self.may_leave():
            return
        self._document.start(design, path)
        self._bar.clear("open-failed", "not-ours", "hints")
        self._remember(path)

    def open_example(self, path: Path) -> None:
        """Begin with an example as a new design, so that saving asks for a name."""
        try:
            design = read_project(path)
        except FileError as error:
            self._bar.tell("open-failed", reason=str(error))
            return
        if self.may_leave():
            self._document.start(design, None)

    def save(self) -> bool:
        path = self._document.path
        return self.save_as() if path is None else self._write(path)

    def save_as(self) -> bool:
        folder = Path(self._settings.value("project_folder") or Path.home())
        start = self._document.path or folder / f"{_file_name(self._document.design.name)}{SUFFIX}"
        path = self._asker.ask_save(start)
        if path is None:
            return False
        return self._write(
            path if path.suffix.lower() == SUFFIX else path.with_name(path.name + SUFFIX)
        )

    def may_leave(self) -> bool:
        """Ask what to do with unsaved changes; False where the user stays."""
        if not self._document.is_modified:
            return True
        answer = self._asker.ask_unsaved(self.name)
        if answer is Unsaved.SAVE:
            return self.save()
        return answer is Unsaved.DISCARD

    def _write(self, path: Path) -> bool:
        try:
            write_project(path, self._document.design, replace=True)
        except CoreError as error:
            self._bar.tell("save-failed", reason=str(error))
            return False
        self._document.mark_saved(path)
        self._bar.clear("save-failed")
        self._remember(path)
        return True

    def _remember(self, path: Path) -> None:
        self._settings.set("project_folder", str(path.absolute().parent))
        self._settings.add_recent(str(path.absolute()))


def _file_name(name: str) -> str:
    kept = "".join(letter if letter.isalnum() else "-" for letter in name.lower())
    return "-".join(filter(None, kept.split("-"))) or "antenna"
