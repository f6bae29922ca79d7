"""Menus that are filled when they are opened: recent files and examples."""

from __future__ import annotations

from importlib.resources import files
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QMenu

from app.presenters.files import SUFFIX

if TYPE_CHECKING:
    from app.presenters.files import FilesPresenter
    from app.settings import Settings


def add_file_menus(menu: QMenu, settings: Settings, presenter: FilesPresenter) -> None:
    """Put "Open recent" and "Examples" after "Open…"."""
    recent, examples = QMenu("Open &recent", menu), QMenu("&Examples", menu)
    recent.setToolTipsVisible(True)
    recent.aboutToShow.connect(lambda: _fill_recent(recent, settings, presenter))
    examples.aboutToShow.connect(lambda: _fill_examples(examples, presenter))
    after = menu.actions()[2]
    for one in (recent, examples):
        one.setAccessibleName(one.title().replace("&", ""))
        menu.insertMenu(after, one)


def example_paths() -> list[Path]:
    """Example designs that come with the program."""
    folder = Path(str(files("assets").joinpath("examples")))
    return sorted(folder.glob(f"*{SUFFIX}")) if folder.is_dir() else []


def _fill_recent(menu: QMenu, settings: Settings, presenter: FilesPresenter) -> None:
    menu.clear()
    for name in settings.value("recent"):
        path = Path(name)
        action = menu.addAction(path.stem.replace("&", "&&"))
        action.setToolTip(name)
        action.setEnabled(path.exists())
        action.triggered.connect(lambda _=False, one=path: presenter.open(one))
    if menu.isEmpty():
        menu.addAction("none yet").setEnabled(False)
        return
    menu.addSeparator()
    menu.addAction("&Clear list").triggered.connect(lambda: settings.set("recent", []))


def _fill_examples(menu: QMenu, presenter: FilesPresenter) -> None:
    menu.clear()
    for path in example_paths():
        words = path.stem.replace("-", " ").capitalize()
        action = menu.addAction(words)
        action.triggered.connect(lambda _=False, one=path: presenter.open_example(one))
    if menu.isEmpty():
        menu.addAction("none installed").setEnabled(False)
