"""The real window, with settings of its own and nobody to ask."""

import pytest
from PySide6.QtCore import QEvent, QPointF, QSettings, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QApplication

from app.jobs.runner import InlineRunner
from app.main_window import MainWindow
from app.presenters.files import Unsaved
from app.settings import Settings
from app.window import dress


class FakeAsker:
    """Answers at once what a test has told it to."""

    def __init__(self):
        self.open_path = self.save_path = self.folder = None
        self.unsaved = Unsaved.CANCEL
        self.asked = []

    def ask_open(self, folder):
        self.asked.append("open")
        return self.open_path

    def ask_save(self, start):
        self.asked.append("save")
        return self.save_path

    def ask_folder(self, start):
        self.asked.append("folder")
        return self.folder

    def ask_unsaved(self, name):
        self.asked.append("unsaved")
        return self.unsaved

    def tell(self, title, text):
        self.asked.append(title)


class HeldRunner(InlineRunner):
    """Keeps requests until it is told to run them."""

    def __init__(self):
        self.waiting = {}

    def start(self, request):
        self.waiting[request.kind] = request

    def stop(self, kind):
        self.waiting.pop(kind, None)

    def run(self):
        for kind in list(self.waiting):
            super().start(self.waiting.pop(kind))


@pytest.fixture
def runner():
    return HeldRunner()


@pytest.fixture
def settings(tmp_path):
    path = str(tmp_path / "settings.ini")
    found = Settings(QSettings(path, QSettings.Format.IniFormat))
    found.set("hints_seen", True)
    found.set("field_check", False)  # a test that wants it switches it on
    return found


@pytest.fixture
def asker():
    return FakeAsker()


@pytest.fixture
def make_window(qtbot, qapp, settings, asker, tmp_path):
    """Opens windows of a size; each is closed without a question."""
    windows = []

    def make(width=1280, height=720):
        dress(qapp, settings)
        window = MainWindow(settings, InlineRunner(), tmp_path / "state", asker)
        windows.append(window)
        window.resize(width, height)
        with qtbot.waitExposed(window):
            window.show()
        return window

    yield make
    for window in windows:
        window.document.stack.setClean()
        window.close()
        window.deleteLater()


@pytest.fixture
def window(make_window):
    return make_window()


class Mouse:
    """A hand on a view: real mouse events at given pixels."""

    def __init__(self, view):
        self.view = view
        self.place = QPointF()

    def press(self, handle_name):
        handle = next(one for one in self.view.state.handles if one.name == handle_name)
        self.place = QPointF(*self.view.pixels(handle))
        self._send(QEvent.Type.MouseButtonPress, Qt.MouseButton.LeftButton)
        return self

    def move(self, across, down):
        self.place += QPointF(across, down)
        self._send(QEvent.Type.MouseMove, Qt.MouseButton.NoButton)
        return self

    def release(self):
        self._send(QEvent.Type.MouseButtonRelease, Qt.MouseButton.LeftButton)
        return self

    def _send(self, kind, button):
        held = Qt.MouseButton.LeftButton
        if kind is QEvent.Type.MouseButtonRelease:
            held = Qt.MouseButton.NoButton
        where = self.view.mapToGlobal(self.place)
        plain = Qt.KeyboardModifier.NoModifier
        event = QMouseEvent(kind, self.place, where, button, held, plain)
        QApplication.sendEvent(self.view, event)


@pytest.fixture
def hand():
    return Mouse
