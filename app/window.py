"""Starts Qt and opens the window."""

from __future__ import annotations

import gc
import sys
from importlib.resources import files
from pathlib import Path

from PySide6.QtCore import QSettings, QStandardPaths
from PySide6.QtGui import QIcon
from PySide6.QtWidgets import QApplication

from app import theme
from app.crash import CrashGuard
from app.jobs.runner import JobRunner
from app.main_window import MainWindow
from app.settings import Settings

_STATE = QStandardPaths.StandardLocation.GenericStateLocation


def run(path: Path | None) -> int:
    """Open the workbench, with a project if one is named, and return the exit status."""
    app = QApplication(sys.argv[:1])
    app.setApplicationName("kerfwave")
    app.setApplicationDisplayName("Kerfwave")
    app.setWindowIcon(QIcon(str(files("assets").joinpath("icons", "kerfwave.svg"))))
    settings = Settings(
        QSettings(QSettings.Format.IniFormat, QSettings.Scope.UserScope, "kerfwave", "kerfwave")
    )
    dress(app, settings)
    folder = Path(QStandardPaths.writableLocation(_STATE)) / "kerfwave"
    window = MainWindow(settings, JobRunner(), folder)
    CrashGuard(window.recovery, window.notices, folder / "errors.log").install()
    if path is not None:
        window.files.open(path)
    window.take_room()
    window.show()
    # What was loaded so far stays; without it, sweeps for garbage are too short to be felt.
    gc.collect()
    gc.freeze()
    return app.exec()


def dress(app: QApplication, settings: Settings) -> None:
    """Put on the chosen appearance, and follow the setting and the desktop."""

    def follow(*_: object) -> None:
        chosen = theme.chosen_theme(theme.Appearance(settings.value("appearance")))
        theme.apply(app, chosen)

    settings.changed.connect(lambda key, _: follow() if key == "appearance" else None)
    app.styleHints().colorSchemeChanged.connect(follow)
    follow()
