"""Time of one step of a drag: from the mouse event to painted pixels, Readings and curve included.

Run with the project's Python: python tests/bench/drag_step.py [WIDTHxHEIGHT] [alone]. Without
DISPLAY it paints offscreen. Budget: median 16 ms, 99th percentile 33 ms, while coarse field
checks follow the hand (aim: 3 a second); "alone" switches them off.
"""

import gc
import os
import sys
import tempfile
import time
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

STEPS = 300
HANDLES = ("element.width", "feed.first.landing", "feed.second.gap", "stock.ground.diameter")


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


def drag(window, app, name):
    """Seconds of each step of a drag on a handle: on the clock, and at work."""
    view = window.mat.edge if name.endswith("thickness") else window.mat.plan
    handle = next(one for one in view.state.handles if one.name == name)
    start = QPointF(*view.pixels(handle))
    left, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
    paints = [Paints(view), Paints(window.curves.match)]
    send(view, QEvent.Type.MouseButtonPress, start, left, left)
    app.processEvents()
    seconds = []
    for i in range(STEPS):
        place = start + QPointF(9 * np.sin((i + 1) / 9), 7 * np.sin((i + 1) / 7))
        before = [one.count for one in paints]
        begin, worked = time.perf_counter(), time.thread_time()
        send(view, QEvent.Type.MouseMove, place, none, left)
        # Qt paints some milliseconds after it is asked to; that wait counts.
        while not all(one.count > old for one, old in zip(paints, before, strict=True)):
            app.processEvents()
            assert time.perf_counter() - begin < 1.0, "not painted"
        seconds.append((time.perf_counter() - begin, time.thread_time() - worked))
    send(view, QEvent.Type.MouseButtonRelease, place, left, none)
    app.processEvents()
    return seconds


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
        while window.field.is_on and window.field.current is None:
            app.processEvents()
        answers = Answers(window.field)
        gc.collect()
        gc.freeze()  # as the workbench does when it has started
        for name in (*HANDLES, "stock.spacer.1.thickness"):
            answers.count = 0
            begin = time.perf_counter()
            seconds = drag(window, app, name)
            rate = answers.count / (time.perf_counter() - begin)
            whole, work = np.array(seconds).T * 1e3
            middle, high = np.percentile(whole, [50, 99])
            verdict = "within" if middle <= 16.0 and high <= 33.0 else "OVER"
            print(
                f"{app.platformName()} {width}x{height} {name:<26} "
                f"median {middle:5.1f} ms, 99 % {high:5.1f} ms, {verdict} the budget; "
                f"of it work {np.median(work):5.1f} ms, 99 % {np.percentile(work, 99):5.1f} ms; "
                f"{rate:.1f} field checks a second"
            )
        window.document.stack.setClean()
        window.close()


if __name__ == "__main__":
    main()
