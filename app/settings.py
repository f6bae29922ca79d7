"""What the window remembers between sessions: one table, and the store behind it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QObject, Signal

from app.theme import Appearance

if TYPE_CHECKING:
    from PySide6.QtCore import QSettings

VERSION = 1
MOST_RECENT = 10


@dataclass(frozen=True)
class Setting:
    """One row: key, default, the values it may take (empty for any), label and help."""

    key: str
    default: Any
    allowed: tuple[Any, ...]
    label: str
    help: str
    shown: bool = True  # among the preferences

    def taken(self, value: object) -> Any:  # noqa: ANN401
        """Value as stored text or number, or the default where it is none of ours."""
        if isinstance(self.default, bool) and isinstance(value, str):
            value = {"true": True, "false": False}.get(value)
        if isinstance(self.default, list):
            value = [value] if isinstance(value, str) else value
            if not isinstance(value, list) or not all(isinstance(one, str) for one in value):
                return self.default
        if type(value) is not type(self.default):
            return self.default
        return value if not self.allowed or value in self.allowed else self.default


SETTINGS = (
    Setting(
        "appearance",
        Appearance.SYSTEM.value,
        tuple(one.value for one in Appearance),
        "Appearance",
        "Light or dark bench.",
    ),
    Setting(
        "match_as", "S11", ("S11", "VSWR"), "Match curve", "How the match curve shows reflection."
    ),
    Setting("paper", "a4", ("a4", "a3", "letter", "tabloid"), "Paper", "Sheet size of templates."),
    Setting(
        "field_check", True, (True, False), "Field check", "Solve the layout when an edit rests."
    ),
    Setting(
        "mesh_level",
        "normal",
        ("coarse", "normal", "fine"),
        "Field check mesh",
        "Finer meshes tell more and take longer.",
    ),
    Setting(
        "dimensions", True, (True, False), "Dimensions on the Mat", "Draw dimensions on the Mat."
    ),
    Setting(
        "animate",
        True,
        (True, False),
        "Current moves",
        "On the Mat, the solved current is seen going through its period.",
    ),
    Setting(
        "mat_shows",
        "copper",
        ("copper", "mesh", "current", "ground"),
        "Show on the Mat",
        "Plain copper, or what was solved on it.",
        shown=False,
    ),
    Setting("curve", "match", (), "Curve", "The one curve of a small window.", shown=False),
    Setting("open_card", "brief", (), "Open card", "The card left open.", shown=False),
    Setting("export_folder", "", (), "Export folder", "Where exports went last.", shown=False),
    Setting("project_folder", "", (), "Project folder", "Where projects lie.", shown=False),
    Setting("recent", [], (), "Recent files", "Newest first.", shown=False),
    Setting("geometry", "", (), "Window", "Size and place of the window.", shown=False),
    Setting("hints_seen", False, (True, False), "Hints", "First hints dismissed.", shown=False),
)
_ROWS = {row.key: row for row in SETTINGS}


class Settings(QObject):
    """Checked access to the stored values; an unreadable one is its default."""

    changed = Signal(str, object)

    def __init__(self, store: QSettings) -> None:
        super().__init__()
        self._store = store
        if self._store.value("version") is None:
            self._store.setValue("version", VERSION)

    def value(self, key: str) -> Any:  # noqa: ANN401
        row = _ROWS[key]
        stored = self._store.value(key)
        return row.default if stored is None else row.taken(stored)

    def set(self, key: str, value: object) -> None:
        row = _ROWS[key]
        if row.taken(value) != value:
            raise ValueError(f"{key}: {value!r} is not taken")
        if value != self.value(key):
            self._store.setValue(key, value)
            self.changed.emit(key, value)

    def add_recent(self, path: str) -> None:
        rest = [one for one in self.value("recent") if one != path]
        self.set("recent", [path, *rest][:MOST_RECENT])
