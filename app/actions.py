"""Every command of the window: one table, from which menus and shortcuts are made."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtGui import QAction, QKeySequence

if TYPE_CHECKING:
    from PySide6.QtGui import QUndoStack
    from PySide6.QtWidgets import QMenu, QWidget

_STANDARD = QKeySequence.StandardKey


@dataclass(frozen=True)
class Command:
    """One row: id, menu, text, keys and tip; `group` starts a new group in its menu."""

    id: str
    menu: str
    text: str
    keys: tuple[QKeySequence.StandardKey | str, ...] = ()
    tip: str = ""
    group: bool = False
    checkable: bool = False


COMMANDS = (
    Command("new", "&File", "&New", (_STANDARD.New,), "Start with the default design"),
    Command("open", "&File", "&Open…", (_STANDARD.Open,), "Open a project file"),
    Command("save", "&File", "&Save", (_STANDARD.Save,), "Save the project", group=True),
    Command("save-as", "&File", "Save &as…", ("Ctrl+Shift+S",), "Save under another name"),
    Command(
        "template", "&File", "&Template…", ("Ctrl+E",),
        "Preview and write the cutting template, artwork and cut list", group=True,
    ),
    Command("quit", "&File", "&Quit", ("Ctrl+Q",), "Close the window", group=True),
    Command("undo", "&Edit", "&Undo", (_STANDARD.Undo,), "Take the last edit back"),
    Command("redo", "&Edit", "&Redo", ("Ctrl+Shift+Z", "Ctrl+Y"), "Do it again"),
    Command(
        "size", "&Edit", "&Size to this brief", ("Ctrl+B",),
        "Find lengths that meet the brief", group=True,
    ),
    Command(
        "settle", "&Edit", "S&ettle by field check", ("Ctrl+Shift+B",),
        "Correct lengths by the field solver until what is solved meets the brief",
    ),
    Command(
        "field-check", "&Edit", "Field &check", ("Ctrl+K",),
        "Solve the very shape on the Mat whenever an edit rests", checkable=True,
    ),
    Command(
        "preferences", "&Edit", "&Preferences…", ("Ctrl+,",), "Appearance and such", group=True
    ),
    Command("zoom-in", "&View", "Zoom &in", ("Ctrl++", "Ctrl+="), "Look closer"),
    Command("zoom-out", "&View", "Zoom &out", ("Ctrl+-",), "Look from further away"),
    Command("fit", "&View", "&Fit the plate", ("Ctrl+0",), "Show the whole ground plate"),
    Command("fit-copper", "&View", "Fit the &copper", ("Ctrl+2",), "Show element and branches"),
    Command("true-size", "&View", "&True size", ("Ctrl+1",), "As large as it will be cut"),
    Command(
        "dimensions", "&View", "&Dimensions", ("Ctrl+D",), "Draw dimensions", group=True,
        checkable=True,
    ),
    Command(
        "show-copper", "&View", "Show co&pper", ("F5",), "The copper as it is cut", group=True,
        checkable=True,
    ),
    Command(
        "show-mesh", "&View", "Show &mesh", ("F6",), "Triangles that the field check solves on",
        checkable=True,
    ),
    Command(
        "show-current", "&View", "Show curr&ent", ("F7",), "Solved current, in one hue and ticks",
        checkable=True,
    ),
    Command(
        "show-ground", "&View", "Show &ground current", ("F8",),
        "Solved current on the ground plate", checkable=True,
    ),
    Command(
        "animate", "&View", "&Let the current move", ("F9",), "Two seconds a period",
        checkable=True,
    ),
    Command("full-screen", "&View", "F&ull screen", ("F11",), "All of the screen", checkable=True),
    Command("keys", "&Help", "&Keys and gestures", ("F1",), "What the hand can do on the Mat"),
    Command("about", "&Help", "&About Kerfwave", (), "Version and licence"),
)  # fmt: skip
MENUS = ("&File", "&Edit", "&View", "&Help")


def make_actions(owner: QWidget, stack: QUndoStack) -> dict[str, QAction]:
    """Actions of all commands, by id; the stack names what undo and redo would do."""
    makers = {"undo": stack.createUndoAction, "redo": stack.createRedoAction}
    actions = {}
    for row in COMMANDS:
        maker = makers.get(row.id)
        action = QAction(row.text, owner) if maker is None else maker(owner, row.text)
        action.setObjectName(row.id)
        action.setShortcuts([QKeySequence(key) for key in row.keys])
        action.setToolTip(row.tip)
        action.setStatusTip(row.tip)
        action.setCheckable(row.checkable)
        actions[row.id] = action
        owner.addAction(action)
    return actions


def fill_menus(menus: dict[str, QMenu], actions: dict[str, QAction]) -> None:
    """Put the actions into their menus, in the order of the table."""
    for row in COMMANDS:
        menu = menus[row.menu]
        if row.group:
            menu.addSeparator()
        menu.addAction(actions[row.id])
