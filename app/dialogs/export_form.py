"""What the export dialog asks: kinds of file, how, and where."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFormLayout, QLabel, QLineEdit, QPushButton, QWidget

from app.presenters.export import ExportRequest, kinds
from app.views.buttons import CheckBox
from app.views.fields import Chooser
from core.drawing.paper import PAPERS
from core.formats.export import ExportOptions

if TYPE_CHECKING:
    from app.settings import Settings

_FIRST = ("template-pdf",)


class ExportForm(QWidget):
    """The choices; `request` is what they come to."""

    changed = Signal()  # which files, or where
    redrawn = Signal()  # the sheet itself
    browse_asked = Signal()

    def __init__(self, settings: Settings) -> None:
        super().__init__()
        self.kinds = {key: CheckBox(title) for key, title in kinds()}
        for key, box in self.kinds.items():
            box.setChecked(key in _FIRST)
            box.toggled.connect(self.changed)
        self.paper = Chooser(typed=False)
        self.paper.setAccessibleName("Paper")
        for key, paper in PAPERS.items():
            self.paper.addItem(paper.name, key)
        self.paper.setCurrentIndex(self.paper.findData(settings.value("paper")))
        self.paper.activated.connect(self.redrawn)
        self.mirrored = CheckBox("Mirrored, as seen from behind")
        self.mirrored.toggled.connect(self.redrawn)
        self.arcs = CheckBox("True arcs in the artwork")
        self.folder = QLineEdit(settings.value("export_folder") or str(Path.home()))
        self.folder.setAccessibleName("Folder")
        self.folder.textChanged.connect(self.changed)
        self.browse = QPushButton("Choose…")
        self.browse.setAccessibleName("Choose a folder")
        self.browse.clicked.connect(self.browse_asked)
        self.replace = CheckBox("Replace files of the same name")
        self.replace.toggled.connect(self.changed)
        self._lay_out()

    @property
    def request(self) -> ExportRequest:
        options = ExportOptions(
            paper=str(self.paper.currentData()),
            mirrored=self.mirrored.isChecked(),
            true_arcs=self.arcs.isChecked(),
        )
        chosen = tuple(key for key, box in self.kinds.items() if box.isChecked())
        folder = Path(self.folder.text()).expanduser()
        return ExportRequest(chosen, options, folder, self.replace.isChecked())

    def _lay_out(self) -> None:
        form = QFormLayout(self)
        form.setContentsMargins(0, 0, 0, 0)
        form.setVerticalSpacing(self.fontMetrics().height() // 2)
        form.addRow(_title("What to write"))
        for box in self.kinds.values():
            form.addRow(box)
        form.addRow(_title("How"))
        form.addRow("Paper", self.paper)
        form.addRow(self.mirrored)
        form.addRow(self.arcs)
        form.addRow(_title("Where"))
        form.addRow("Folder", self.folder)
        form.addRow(self.browse)
        form.addRow(self.replace)


def _title(text: str) -> QLabel:
    label = QLabel(text)
    label.setObjectName("title")
    return label
