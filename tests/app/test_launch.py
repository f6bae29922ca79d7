"""What keeps the workbench from starting is told before Qt ends the process."""

import ctypes
import importlib
import socket
import sys
from types import SimpleNamespace

import pytest

from app import launch
from app.launch import StartError, open_workbench

GONE = "libxcb-cursor.so.0: cannot open shared object file: No such file or directory"


@pytest.fixture
def window(monkeypatch):
    """Paths that a stand-in for the window was opened with; nothing else is replaced."""
    opened = []
    stand_in = SimpleNamespace(run=lambda path: opened.append(path) or 0)
    monkeypatch.setitem(sys.modules, "app.window", stand_in)
    monkeypatch.setattr(sys, "platform", "linux")
    return opened


@pytest.fixture
def display(monkeypatch):
    """Sets the variables that name a display, and only these."""

    def name(**variables):
        for key in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM", "XDG_RUNTIME_DIR"):
            monkeypatch.delenv(key, raising=False)
        for key, value in variables.items():
            monkeypatch.setenv(key, value)

    return name


def refusing(monkeypatch, owner, name, when, error):
    """Make one function fail for some arguments."""
    original = getattr(owner, name)

    def call(argument, *others, **options):
        if when in str(argument):
            raise error
        return original(argument, *others, **options)

    monkeypatch.setattr(owner, name, call)


@pytest.mark.parametrize("platform", ["offscreen", "minimal", "vnc:size=800x600", "offscreen;xcb"])
def test_qt_told_to_do_without_a_display_starts(window, display, platform):
    display(QT_QPA_PLATFORM=platform)
    assert open_workbench(None) == 0
    assert window == [None]


def test_other_systems_are_not_asked_for_a_display(window, display, monkeypatch):
    display()
    monkeypatch.setattr(sys, "platform", "win32")
    assert open_workbench(None) == 0


def test_without_a_display_it_does_not_start(window, display):
    display()
    with pytest.raises(StartError, match=r"there is no display .*; accepted: a desktop session"):
        open_workbench(None)
    assert window == []


@pytest.mark.parametrize(
    ("variables", "said"),
    [
        ({"DISPLAY": ":4711"}, "the display ':4711' does not answer; accepted: DISPLAY of"),
        ({"DISPLAY": "nonsense"}, "the display 'nonsense' does not answer"),
        ({"QT_QPA_PLATFORM": "xcb"}, "the display '' does not answer"),
        ({"WAYLAND_DISPLAY": "none-7"}, "the display 'none-7' does not answer; accepted: WAYL"),
    ],
)
def test_a_display_that_does_not_answer_is_told(window, display, variables, said):
    display(**variables)
    with pytest.raises(StartError, match=said):
        open_workbench(None)
    assert window == []


def test_one_display_that_answers_is_enough(window, display, monkeypatch):
    display(DISPLAY=":0", WAYLAND_DISPLAY="none-7")
    monkeypatch.setitem(launch._REACHES, "xcb", lambda: True)
    assert open_workbench(None) == 0


def test_a_wayland_display_answers_at_its_socket(window, display, tmp_path):
    display(WAYLAND_DISPLAY="bench-0", XDG_RUNTIME_DIR=str(tmp_path))
    with socket.socket(socket.AF_UNIX) as server:
        server.bind(str(tmp_path / "bench-0"))
        server.listen()
        assert open_workbench(None) == 0


def test_a_library_that_the_plugin_needs_is_named_with_its_cure(window, display, monkeypatch):
    display(DISPLAY=":0")
    refusing(monkeypatch, ctypes, "CDLL", "libqxcb", OSError(GONE))
    with pytest.raises(StartError) as refusal:
        open_workbench(None)
    assert str(refusal.value).startswith(
        "the system library libxcb-cursor.so.0 is missing; on Debian or Ubuntu: apt-get install "
    )
    assert "libxcb-cursor0" in str(refusal.value)


def test_a_library_that_qt_itself_needs_is_named_with_its_cure(window, display, monkeypatch):
    display(QT_QPA_PLATFORM="offscreen")
    gone = ImportError(GONE.replace("libxcb-cursor.so.0", "libGL.so.1"))
    refusing(monkeypatch, importlib, "import_module", "PySide6.QtGui", gone)
    with pytest.raises(StartError, match=r"library libGL\.so\.1 is missing; .* libgl1 libegl1"):
        open_workbench(None)


def test_qt_left_out_is_told(window, display, monkeypatch):
    display(QT_QPA_PLATFORM="offscreen")
    gone = ModuleNotFoundError("No module named 'PySide6'", name="PySide6")
    refusing(monkeypatch, importlib, "import_module", "PySide6.QtCore", gone)
    with pytest.raises(StartError, match="PySide6 is not installed; install it with: pip"):
        open_workbench(None)


def test_the_cure_is_the_line_of_the_readme():
    readme = (launch.Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
    assert launch._PACKAGES.removeprefix("apt-get install ") in readme
