"""Time of one picture of the moving current on the Mat, and of the first after a zoom.

Run with the project's Python: python tests/bench/current_frame.py [WIDTHxHEIGHT]. Without
DISPLAY it paints offscreen. Budget: 8 ms a picture; one comes every 40 ms. Times are those at
work, not on the clock; other work of a busy machine stretches even those, so that the best of
many is told beside the median, and the load beside both.
"""

import gc
import os
import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

if not (os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY")):
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QApplication

from app.evaluation import evaluate
from app.field_check import Checked
from app.jobs.runner import InlineRunner
from app.main_window import MainWindow
from app.settings import Settings
from app.window import dress
from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.progress import SILENT

PICTURES = 200
ZOOMS = 10
SHOWN = ("copper", "mesh", "current", "ground")


def solved(design, level):
    """The design as the field check would have it, on few frequencies."""
    evaluation = evaluate(design)
    frequency = design.brief.frequency
    response = respond(evaluation.layout, frequency * np.array([0.99, 1.01]), SILENT, level)
    return Checked(replace(evaluation, response=response), level.value, 6, True)


def timed(act, count):
    seconds = []
    for _ in range(count):
        begin = time.thread_time()
        act()
        seconds.append(time.thread_time() - begin)
    return 1e3 * np.array(seconds)


def measure(view):
    """Milliseconds of pictures, and of the first picture after a zoom."""

    def picture():
        view.current.step()
        view.repaint()

    def zoomed(factor):
        view.zoom(factor)
        view.repaint()

    picture()
    pictures = timed(picture, PICTURES)
    factors = iter([1.02, 1 / 1.02] * ZOOMS)
    return pictures, timed(lambda: zoomed(next(factors)), 2 * ZOOMS)


def main():
    width, _, height = (sys.argv[1] if len(sys.argv) > 1 else "1280x720").partition("x")
    app = QApplication([])
    with tempfile.TemporaryDirectory() as folder:
        store = QSettings(str(Path(folder) / "settings.ini"), QSettings.Format.IniFormat)
        settings = Settings(store)
        settings.set("field_check", False)
        dress(app, settings)
        window = MainWindow(settings, InlineRunner(), Path(folder))
        window.resize(int(width), int(height))
        window.show()
        window.window_actions["fit-copper"].trigger()
        app.processEvents()
        gc.collect()
        gc.freeze()  # as the workbench does when it has started
        view = window.mat.plan
        for level in (Level.NORMAL, Level.FINE):
            window.field.last = solved(window.document.design, level)
            window.field.changed.emit()
            for name in SHOWN:
                settings.set("mat_shows", name)
                app.processEvents()
                pictures, zooms = measure(view)
                best, middle = pictures.min(), np.median(pictures)
                print(
                    f"{app.platformName()} {width}x{height} {level.value:<6} {name:<7} "
                    f"a picture {best:5.1f} ms at best, median {middle:5.1f} ms, "
                    f"{'within' if middle <= 8.0 else 'OVER'} the budget; "
                    f"after a zoom {zooms.min():5.1f} to {np.median(zooms):5.1f} ms; "
                    f"load {os.getloadavg()[0]:.1f}"
                )
        window.document.stack.setClean()
        window.close()


if __name__ == "__main__":
    main()
