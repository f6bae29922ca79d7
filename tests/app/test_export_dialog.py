"""Template…: what is previewed is what is written, and nothing is replaced unasked."""

import csv
import re

import pypdfium2
import pytest
from PySide6.QtGui import QImage
from PySide6.QtWidgets import QApplication
from pytest import approx
from shiboken6 import isValid

from app.dialogs.export import ExportDialog


@pytest.fixture
def dialog(window, tmp_path):
    window.header.template_button.click()
    found = window.findChild(ExportDialog)
    found.form.folder.setText(str(tmp_path))
    yield found
    if isValid(found):
        found.reject()
    QApplication.processEvents()


def choose(dialog, *kinds):
    for key, box in dialog.form.kinds.items():
        box.setChecked(key in kinds)


def remarks(dialog):
    return [one.line.words for one in dialog.remarks.shown]


def test_the_preview_is_the_page_that_will_be_printed(dialog, tmp_path):
    assert re.fullmatch(r"page 1 of \d+", dialog.pager.text())
    dialog.write_button.click()
    (path,) = tmp_path.glob("*.pdf")
    document = pypdfium2.PdfDocument(path)
    assert dialog.pager.text() == f"page 1 of {len(document)}"
    width, height = document[0].get_size()
    document.close()
    # A4, 210 by 297 mm (ISO 216), in points.
    assert (width, height) == approx((595.276, 841.890), abs=0.01)


def ink(view):
    """How many of the pixels looked at are dark."""
    picture = view.grab().toImage().convertToFormat(QImage.Format.Format_Grayscale8)
    places = [(x, y) for x in range(0, picture.width(), 2) for y in range(0, picture.height(), 2)]
    return sum(picture.pixelColor(x, y).lightness() < 128 for x, y in places)


def test_the_page_shows_ink(dialog):
    assert ink(dialog.sheet) > 100
    dialog.sheet.show_sheet(None)
    assert ink(dialog.sheet) == 0


def test_all_kinds_are_written_and_told(window, dialog, tmp_path):
    choose(dialog, *dialog.form.kinds)
    dialog.write_button.click()
    names = {path.suffix for path in tmp_path.iterdir() if path.is_file()}
    assert {".svg", ".pdf", ".dxf", ".csv"} <= names
    assert "Written to" in window.notices.words


def test_mirrored_templates_say_so(dialog, tmp_path):
    choose(dialog, "template-svg")
    dialog.form.mirrored.setChecked(True)
    dialog.write_button.click()
    assert [path.name for path in tmp_path.glob("*mirrored*.svg")]


def test_a_file_that_is_there_is_replaced_only_when_told_to(window, dialog, tmp_path):
    choose(dialog, "cutlist-csv")
    dialog.write_button.click()
    (path,) = tmp_path.glob("*.csv")
    path.write_text("mine", encoding="utf-8")
    window.header.template_button.click()
    second = window.findChildren(ExportDialog)[-1]
    choose(second, "cutlist-csv")
    assert not second.write_button.isEnabled()
    assert any("there already" in one for one in remarks(second))
    second.form.replace.setChecked(True)
    second.write_button.click()
    assert next(csv.reader(path.read_text(encoding="utf-8").splitlines())) != ["mine"]


def test_a_missing_folder_is_refused(dialog, tmp_path):
    dialog.form.folder.setText(str(tmp_path / "nowhere"))
    assert not dialog.write_button.isEnabled()
    assert any("folder that exists" in one for one in remarks(dialog))


def test_a_design_that_cannot_be_built_is_not_written(window):
    window.cards.edited.emit("feed.first.width", "0.5 mm")
    window.show_export()
    dialog = window.findChild(ExportDialog)
    assert not dialog.write_button.isEnabled()
    assert any("cannot be built" in one for one in remarks(dialog))
    dialog.reject()


def test_the_chosen_folder_is_kept(window, dialog, asker, tmp_path):
    folder = tmp_path / "out"
    folder.mkdir()
    asker.folder = folder
    dialog.form.browse.click()
    choose(dialog, "cutlist-csv")
    dialog.write_button.click()
    assert window.settings.value("export_folder") == str(folder)
    assert list(folder.glob("*.csv"))
