"""New, open, save and what happens to unsaved work, in the real window."""

from dataclasses import replace

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDropEvent

from app.menus import example_paths
from app.presenters.files import Unsaved
from core.design import edit
from core.design.defaults import default_design
from core.storage.project import read_project, write_project


@pytest.fixture
def other():
    return replace(edit.with_text(default_design(), "element.width", "47.3 mm"), name="Other")


@pytest.fixture
def project(tmp_path, other):
    path = tmp_path / "other.kerf"
    write_project(path, other, replace=False)
    return path


def drop(window, path):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(path))])
    event = QDropEvent(
        QPointF(50, 50),
        Qt.DropAction.CopyAction,
        data,
        Qt.MouseButton.LeftButton,
        Qt.KeyboardModifier.NoModifier,
    )
    window.dropEvent(event)


def change(window):
    window.cards.edited.emit("element.length", "49 mm")


def test_the_window_opens_on_a_complete_design(window):
    assert window.pipeline.current.is_buildable
    assert window.pipeline.current.response is not None
    assert not window.isWindowModified()


def test_save_and_open_round_trip(window, asker, tmp_path):
    change(window)
    saved = window.document.design
    asker.save_path = tmp_path / "mine"
    window.window_actions["save"].trigger()
    path = tmp_path / "mine.kerf"
    assert read_project(path) == saved
    assert not window.isWindowModified()
    window.window_actions["new"].trigger()
    assert window.document.design == default_design()
    asker.open_path = path
    window.window_actions["open"].trigger()
    assert window.document.design == saved
    assert window.windowTitle() == "mine[*] — Kerfwave"
    assert window.settings.value("recent") == [str(path)]


def test_an_edit_marks_the_window_and_undo_unmarks_it(window):
    change(window)
    assert window.isWindowModified()
    window.window_actions["undo"].trigger()
    assert not window.isWindowModified()


def test_a_dropped_project_is_opened(window, project, other):
    drop(window, project)
    assert window.document.design == other
    assert window.document.path == project


def test_another_kind_of_file_is_refused_in_the_window(window, tmp_path):
    path = tmp_path / "notes.txt"
    path.write_text("x", encoding="utf-8")
    before = window.document.design
    drop(window, path)
    assert window.document.design == before
    assert ".kerf" in window.notices.words
    assert window.notices.isVisible()


@pytest.mark.parametrize("content", [b"", b"{", b'{"kerfwave": 99}'])
def test_a_bad_project_leaves_the_bench_as_it_was(window, tmp_path, content):
    path = tmp_path / "bad.kerf"
    path.write_bytes(content)
    change(window)
    before = window.document.design
    window.files.open(path)
    assert window.document.design == before
    assert window.document.is_modified
    assert "Not opened" in window.notices.words


@pytest.mark.parametrize(
    ("answer", "stays"), [(Unsaved.CANCEL, True), (Unsaved.DISCARD, False), (Unsaved.SAVE, False)]
)
def test_closing_asks_only_when_something_is_unsaved(window, asker, tmp_path, answer, stays):
    change(window)
    asker.unsaved, asker.save_path = answer, tmp_path / "kept.kerf"
    window.close()
    assert window.isVisible() is stays
    assert "unsaved" in asker.asked
    assert (tmp_path / "kept.kerf").exists() is (answer is Unsaved.SAVE)


def test_closing_without_changes_asks_nothing(window, asker):
    window.close()
    assert asker.asked == []
    assert not window.isVisible()


def test_a_save_that_is_called_off_keeps_the_window_open(window, asker):
    change(window)
    asker.unsaved = Unsaved.SAVE
    window.close()
    assert window.isVisible()


def test_a_failed_save_says_so_and_keeps_the_mark(window, asker, tmp_path):
    change(window)
    asker.save_path = tmp_path / "missing" / "x.kerf"
    window.window_actions["save"].trigger()
    assert "Not saved" in window.notices.words
    assert window.isWindowModified()


def test_recent_files_are_listed_newest_first_and_can_be_cleared(window, project, tmp_path):
    second = tmp_path / "second.kerf"
    second.write_bytes(project.read_bytes())
    for path in (project, second):
        window.files.open(path)
    project.unlink()
    menu = next(a.menu() for a in window.header.menus["&File"].actions() if "recent" in a.text())
    menu.aboutToShow.emit()
    words = [(a.text(), a.isEnabled()) for a in menu.actions() if not a.isSeparator()]
    assert words == [("second", True), ("other", False), ("&Clear list", True)]
    menu.actions()[-1].trigger()
    assert window.settings.value("recent") == []


def test_unsaved_work_is_found_again(make_window, qtbot):
    first = make_window()
    change(first)
    design = first.document.design
    assert first.recovery.save()
    first.recovery._lock.unlock()  # as when the program ends without a word
    second = make_window()
    assert "not saved" in second.notices.words
    second.notices.pressed.emit("recovered", "Restore")
    assert second.document.design == design
    assert second.isWindowModified()


def test_saved_work_leaves_no_copy(window, asker, tmp_path):
    change(window)
    window.recovery.save()
    assert window.recovery.path.exists()
    asker.save_path = tmp_path / "mine.kerf"
    window.window_actions["save"].trigger()
    assert not window.recovery.path.exists()


@pytest.mark.parametrize("path", example_paths(), ids=lambda path: path.stem)
def test_every_example_opens_and_can_be_built(window, path):
    window.files.open_example(path)
    assert window.document.path is None
    assert window.pipeline.current.is_buildable


def test_the_window_comes_back_where_it_was(make_window):
    first = make_window(1111, 666)
    first.close()
    second = make_window(900, 600)
    second.take_room()
    assert second.height() == 666  # widths are cut to the screen, which is 800 wide offscreen
