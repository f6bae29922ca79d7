"""Starts the workbench, after a look at what would make Qt end the process by itself.

Without a display, or without a library that its platform plugin needs, Qt aborts with a
page of text. Each cause is told here in one line before Qt is asked.
"""

from __future__ import annotations

import ctypes
import importlib
import os
import socket
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Final

from app.verbs.arguments import load

if TYPE_CHECKING:
    from collections.abc import Callable

_PACKAGES: Final = (
    "apt-get install libgl1 libegl1 libglib2.0-0 libxkbcommon0 libdbus-1-3 libfontconfig1 "
    "libxcb-cursor0 libxcb-icccm4 libxcb-keysyms1 libxkbcommon-x11-0 libxcb-shape0"
)
_QT_MODULES: Final = ("PySide6.QtCore", "PySide6.QtGui", "PySide6.QtWidgets")


class StartError(Exception):
    """The workbench cannot start on this machine as it is."""


def open_workbench(path: Path | None) -> int:
    """Open the window, with a project if one is named, and return its exit status."""
    if path is not None:
        load(path)  # a bad file is told here, not in a window
    platforms = _wanted_platforms() if sys.platform.startswith("linux") else []
    _require_qt()
    problems = [_problem(platform) for platform in platforms]
    if problems and all(problems):
        raise StartError(problems[0])
    from app.window import run  # noqa: PLC0415 - verbs and refusals never wait for Qt

    return run(path)


def _wanted_platforms() -> list[str]:
    """Display systems that Qt would try; none where it is told to do without."""
    told = os.environ.get("QT_QPA_PLATFORM", "")
    names = [name.partition(":")[0] for name in told.split(";") if name]
    if names:
        known = [name for name in names if name in _REACHES]
        return known if len(known) == len(names) else []
    variables = {"wayland": "WAYLAND_DISPLAY", "xcb": "DISPLAY"}
    found = [name for name, variable in variables.items() if os.environ.get(variable)]
    if not found:
        raise StartError(
            "there is no display to open the workbench on (DISPLAY and WAYLAND_DISPLAY are not "
            "set); accepted: a desktop session, or one of the verbs, which need none"
        )
    return found


def _require_qt() -> None:
    """Load the parts of Qt that the window is made of."""
    for module in _QT_MODULES:
        try:
            importlib.import_module(module)
        except ModuleNotFoundError as error:
            raise StartError(
                f"{error.name} is not installed; install it with: pip install PySide6-Essentials"
            ) from error
        except ImportError as error:
            raise StartError(_missing(str(error))) from error


def _problem(platform: str) -> str:
    """Why Qt could not start on this display system; empty where it can."""
    paths = importlib.import_module("PySide6.QtCore").QLibraryInfo
    folder = paths.path(paths.LibraryPath.PluginsPath)
    try:
        # Loading the plugin is the one way to know all that it needs.
        ctypes.CDLL(str(Path(folder) / "platforms" / f"libq{platform}.so"))
        reached = _REACHES[platform]()
    except OSError as error:
        return _missing(str(error))
    if reached:
        return ""
    variable = "DISPLAY" if platform == "xcb" else "WAYLAND_DISPLAY"
    named = os.environ.get(variable, "")
    return f"the display {named!r} does not answer; accepted: {variable} of a running desktop"


def _missing(reason: str) -> str:
    """Message for a library that the system lacks, from what its loader said."""
    library = reason.partition(":")[0]
    return f"the system library {library} is missing; on Debian or Ubuntu: {_PACKAGES}"


def _reaches_x11() -> bool:
    xcb = ctypes.CDLL("libxcb.so.1")
    xcb.xcb_connect.restype = ctypes.c_void_p
    connection = ctypes.c_void_p(xcb.xcb_connect(None, None))
    failed = xcb.xcb_connection_has_error(connection)
    xcb.xcb_disconnect(connection)
    return not failed


def _reaches_wayland() -> bool:
    name = os.environ.get("WAYLAND_DISPLAY", "wayland-0")
    with socket.socket(socket.AF_UNIX) as connection:
        try:
            connection.connect(str(Path(os.environ.get("XDG_RUNTIME_DIR", "")) / name))
        except OSError:
            return False
    return True


_REACHES: Final[dict[str, Callable[[], bool]]] = {
    "xcb": _reaches_x11,
    "wayland": _reaches_wayland,
}
