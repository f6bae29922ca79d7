"""Time of one step of a drag: from the mouse event to painted pixels, Readings and curve included.

Run with the project's Python: python tests/bench/drag_step.py [WIDTHxHEIGHT] [alone]. Without
DISPLAY it paints offscreen. The default design and the shipped examples are dragged at 60
events a second. Budget: median 16 ms, 99th percentile 33 ms, while quick field checks follow
the hand, at least 3 a second; "alone" switches them off.
"""

import gc
import multiprocessing
import os
import sys
import tempfile
import time
from importlib.resources import files
from pathlib import Path

import numpy as np

if not (os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY")):
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QEvent, QObject, QPointF, QSettings, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QApplication

from app.jobs.runner import JobRunner
from app.main_window import MainWindow
from app.settings import Settings
from app.window import dress
from core.storage.project import read_project

STEPS = 300
EVERY = 1 / 60  # s from one event to the next
HANDLES = (
    "element.width",
    "feed.first.landing",
    "feed.second.gap",
    "feed.x",
    "stock.ground.diameter",
    "stock.spacer.1.thickness",
)
LEAST_CHECKS, LONGEST_STEP, LONGEST_RARE_STEP = 3.0, 16.0, 33.0  # a second, ms, ms


class Paints(QObject):
    """Counts the paint events of a widget."""

    def __init__(self, widget):
        super().__init__(widget)
        self.count = 0
        widget.installEventFilter(self)

    def eventFilter(self, _widget, event):
        self.count += event.type() == QEvent.Type.Paint
        return False


class Answers(QObject):
    """Counts the answers of the field check."""

    def __init__(self, field):
        super().__init__(field)
        self.count, self._field, self._last = 0, field, field.last
        field.changed.connect(self._look)

    def _look(self):
        self.count += self._field.last is not self._last
        self._last = self._field.last


def send(widget, kind, place, button, buttons):
    event = QMouseEvent(
        kind, place, widget.mapToGlobal(place), button, buttons, Qt.KeyboardModifier.NoModifier
    )
    QApplication.sendEvent(widget, event)


def found(window, name):
    """View that has a handle, and the handle; None where there is none."""
    view = window.mat.edge if name.endswith("thickness") else window.mat.plan
    return view, next((one for one in view.state.handles if one.name == name), None)


def drag(window, app, name):
    """Seconds of each step of a drag on a handle: on the clock, and at work."""
    view, handle = found(window, name)
    start = QPointF(*view.pixels(handle))
    button, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
    paints = [Paints(view), Paints(window.curves.match)]
    send(view, QEvent.Type.MouseButtonPress, start, button, button)
    app.processEvents()
    seconds = []
    for i in range(STEPS):
        place = start + QPointF(9 * np.sin((i + 1) / 9), 7 * np.sin((i + 1) / 7))
        before, design = [one.count for one in paints], window.document.design
        begin, worked = time.perf_counter(), time.thread_time()
        send(view, QEvent.Type.MouseMove, place, none, button)
        if window.document.design is design:  # at a limit nothing moves
            continue
        # Qt paints some milliseconds after it is asked to; that wait counts.
        while not all(one.count > old for one, old in zip(paints, before, strict=True)):
            app.processEvents()
            assert time.perf_counter() - begin < 1.0, "not painted"
        seconds.append((time.perf_counter() - begin, time.thread_time() - worked))
        while (left := begin + EVERY - time.perf_counter()) > 0.0:
            app.processEvents()
            time.sleep(min(left, 1e-3))
    send(view, QEvent.Type.MouseButtonRelease, place, button, none)
    app.processEvents()
    return seconds


def settle(window, app):
    """Wait until the design at rest has been solved."""
    while window.field.is_on and (window.field.current is None or window.field.busy):
        app.processEvents()
        time.sleep(1e-3)


def solver_seconds():
    """Processor time of the solver's process so far; nan where the system does not tell."""
    try:
        (process,) = multiprocessing.active_children()
        stat = Path(f"/proc/{process.pid}/stat").read_text()
        user, system = stat.rpartition(")")[2].split()[11:13]
        return (int(user) + int(system)) / os.sysconf("SC_CLK_TCK")
    except (OSError, ValueError):
        return float("nan")


def measured(window, app, name):
    """Drag a handle and print how it went."""
    settle(window, app)
    answers = Answers(window.field)
    begin, spent = time.perf_counter(), solver_seconds()
    seconds = drag(window, app, name)
    rate = answers.count / (time.perf_counter() - begin)
    each = 1e3 * (solver_seconds() - spent) / max(answers.count, 1)
    whole, work = np.array(seconds).T * 1e3
    middle, high = np.percentile(whole, [50, 99])
    within = middle <= LONGEST_STEP and high <= LONGEST_RARE_STEP
    checks = f"; {rate:.1f} checks a second{'' if rate >= LEAST_CHECKS else ', TOO FEW'}"
    checks += f" ({each:.0f} ms of a processor each)"
    print(
        f"  {name:<26} median {middle:5.1f} ms, 99 % {high:5.1f} ms, "
        f"{'within' if within else 'OVER'} the budget (work {np.median(work):4.1f}, "
        f"{np.percentile(work, 99):4.1f} ms){checks if window.field.is_on else ''}"
    )


def main():
    size = next((one for one in sys.argv[1:] if one[0].isdigit()), "1280x720")
    width, _, height = size.partition("x")
    app = QApplication([])
    with tempfile.TemporaryDirectory() as folder:
        store = QSettings(str(Path(folder) / "settings.ini"), QSettings.Format.IniFormat)
        settings = Settings(store)
        settings.set("field_check", "alone" not in sys.argv)
        dress(app, settings)
        window = MainWindow(settings, JobRunner(), Path(folder))
        window.resize(int(width), int(height))
        window.show()
        settle(window, app)
        gc.collect()
        gc.freeze()  # as the workbench does when it has started
        examples = sorted(Path(str(files("assets").joinpath("examples"))).glob("*.kerf"))
        for path in (None, *examples):
            if path is not None:
                window.document.start(read_project(path), None)
            load = os.getloadavg()[0] if hasattr(os, "getloadavg") else float("nan")
            print(
                f"{window.document.design.name}, {app.platformName()} {size}, load {load:.1f}",
                flush=True,
            )
            names = HANDLES if path is None else HANDLES[:2] + HANDLES[-1:]
            for name in names:
                if found(window, name)[1] is not None:
                    measured(window, app, name)
                    window.document.stack.undo()
        window.document.stack.setClean()
        window.close()


if __name__ == "__main__":
    main()
