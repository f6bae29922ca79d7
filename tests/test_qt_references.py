"""Qt binding that keeps its reference counts.

PySide6 6.12.0 loses a reference to `True` with every emitted signal and one to `None`
with every method that returns nothing, until Python before 3.12 ends itself.
"""

import sys
import tomllib
from importlib.metadata import version
from pathlib import Path

import pytest
from packaging.requirements import Requirement
from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QWidget

CALLS = 200
ROOT = Path(__file__).resolve().parents[1]


class Bell(QObject):
    rung = Signal()


@pytest.fixture(scope="module")
def pin():
    settings = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
    requirements = map(Requirement, settings["project"]["dependencies"])
    return next(r.specifier for r in requirements if r.name == "PySide6-Essentials")


def test_the_installed_binding_is_one_of_those_tried(pin):
    assert version("PySide6-Essentials") in pin


@pytest.mark.parametrize("broken", ["6.10.1", "6.12.0"])
def test_the_pin_keeps_out_versions_known_to_crash(pin, broken):
    assert broken not in pin


@pytest.mark.parametrize("singleton", [True, None])
def test_emitting_a_signal_keeps_references(qapp, singleton):
    bell = Bell()
    before = sys.getrefcount(singleton)
    for _ in range(CALLS):
        bell.rung.emit()
    assert abs(sys.getrefcount(singleton) - before) < CALLS // 2


@pytest.mark.parametrize("singleton", [True, None])
def test_a_void_call_keeps_references(qtbot, singleton):
    widget = QWidget()
    qtbot.addWidget(widget)
    before = sys.getrefcount(singleton)
    for _ in range(CALLS):
        widget.setToolTip("copper")
    assert abs(sys.getrefcount(singleton) - before) < CALLS // 2
