"""The choice of what the Mat shows: menu, chooser and setting say the same."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

from PySide6.QtGui import QActionGroup

from app.mat.current import Shows
from app.presenters.current_presenter import ANIMATE, SHOWS

if TYPE_CHECKING:
    from PySide6.QtCore import QObject
    from PySide6.QtGui import QAction

    from app.mat.mat import Mat
    from app.settings import Settings


class Window(Protocol):
    """What there is to connect."""

    settings: Settings
    window_actions: dict[str, QAction]
    mat: Mat


def connect_shown(window: Window, owner: QObject) -> None:
    """Let every way of choosing set the setting, and every one follow it."""
    settings, actions, bar = window.settings, window.window_actions, window.mat.shown
    group = QActionGroup(owner)
    for one in Shows:
        action = group.addAction(actions[f"show-{one}"])
        action.triggered.connect(lambda _=False, value=str(one): settings.set(SHOWS, value))
    moving = actions[ANIMATE]
    moving.triggered.connect(lambda: settings.set(ANIMATE, moving.isChecked()))
    bar.chosen.connect(lambda name: settings.set(SHOWS, name))
    bar.animated.connect(lambda moves: settings.set(ANIMATE, moves))

    def follow(key: str = "", _value: object = None) -> None:
        if key in ("", SHOWS, ANIMATE):
            actions[f"show-{settings.value(SHOWS)}"].setChecked(True)
            moving.setChecked(settings.value(ANIMATE))

    settings.changed.connect(follow)
    follow()
