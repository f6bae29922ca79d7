"""Template…: a preview of the sheet, what to write and where."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QCheckBox,
    QDialog,
    QFormLayout,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from app.dialogs.sheet_view import SheetView
from app.jobs.runner import Request
from app.presenters.export import ExportRequest, kinds, obstacle, preview, taken, write
from app.presenters.readings import Line
from app.views.buttons import IconButton
from app.views.fields import Chooser
from app.views.lines import LineList
from core.drawing.paper import PAPERS
from core.formats.export import ExportOptions

if TYPE_CHECKING:
    from app.evaluation import Evaluation
    from app.jobs.runner import Runner
    from app.settings import Settings
    from app.views.notice_bar import NoticeBar
    from core.drawing.sheet import Sheet
    from core.errors import CoreError

_FIRST = ("template-pdf",)


class FolderAsker(Protocol):
    """Asks for a folder."""

    def ask_folder(self, start: str) -> Path | None: ...


class ExportDialog(QDialog):
    """Preview at the left, choices at the right."""

    def __init__(
        self,
        shown: Evaluation,
        settings: Settings,
        asker: FolderAsker,
        runner: Runner,
        notices: NoticeBar,
        parent: QWidget,
    ) -> None:
        super().__init__(parent)
        self.setWindowTitle("Template")
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self._shown, self._settings = shown, settings
        self._asker, self._runner, self._notices = asker, runner, notices
        self._pages: tuple[Sheet, ...] = ()
        self._page = 0
        self._make_fields()
        self._lay_out()
        em = self.fontMetrics().height()
        self.resize(em * 58, em * 40)
        self._draw()

    @property
    def request(self) -> ExportRequest:
        """What the choices ask for."""
        options = ExportOptions(
            paper=str(self.paper.currentData()),
            mirrored=self.mirrored.isChecked(),
            true_arcs=self.arcs.isChecked(),
        )
        chosen = tuple(key for key, box in self.kinds.items() if box.isChecked())
        folder = Path(self.folder.text()).expanduser()
        return ExportRequest(chosen, options, folder, self.replace.isChecked())

    def _make_fields(self) -> None:
        self.sheet = SheetView()
        self.pager = QLabel()
        self.pager.setAccessibleName("Page")
        self.kinds = {key: QCheckBox(title) for key, title in kinds()}
        for key, box in self.kinds.items():
            box.setChecked(key in _FIRST)
            box.toggled.connect(self._check)
        self.paper = Chooser(typed=False)
        self.paper.setAccessibleName("Paper")
        for key, paper in PAPERS.items():
            self.paper.addItem(paper.name, key)
        self.paper.setCurrentIndex(self.paper.findData(self._settings.value("paper")))
        self.paper.activated.connect(self._on_paper)
        self.mirrored = QCheckBox("Mirrored, as seen from behind")
        self.mirrored.toggled.connect(self._draw)
        self.arcs = QCheckBox("True arcs in the artwork")
        self.folder = QLineEdit(self._settings.value("export_folder") or str(Path.home()))
        self.folder.setAccessibleName("Folder")
        self.folder.textChanged.connect(self._check)
        self.replace = QCheckBox("Replace files of the same name")
        self.replace.toggled.connect(self._check)
        self.remarks = LineList("Remarks on the export")
        self.write_button = QPushButton("Write")
        self.write_button.setObjectName("primary")
        self.write_button.setDefault(True)
        self.write_button.clicked.connect(self._write)
        for box in (*self.kinds.values(), self.mirrored, self.arcs, self.replace):
            box.setAccessibleName(box.text())
        self.write_button.setAccessibleName("Write the files")

    def _lay_out(self) -> None:
        em = self.fontMetrics().height()
        back = IconButton("back", "Page before", em)
        forth = IconButton("forth", "Next page", em)
        back.clicked.connect(lambda: self._turn(-1))
        forth.clicked.connect(lambda: self._turn(1))
        turner = QHBoxLayout()
        turner.addStretch(1)
        for widget in (back, self.pager, forth):
            turner.addWidget(widget)
        turner.addStretch(1)
        left = QVBoxLayout()
        left.addWidget(self.sheet, 1)
        left.addLayout(turner)
        browse = QPushButton("Choose…")
        browse.setAccessibleName("Choose a folder")
        browse.clicked.connect(self._browse)
        cancel = QPushButton("Close")
        cancel.setAccessibleName("Close")
        cancel.clicked.connect(self.reject)
        form = QFormLayout()
        form.setVerticalSpacing(em // 2)
        form.addRow(_title("What to write"))
        for box in self.kinds.values():
            form.addRow(box)
        form.addRow(_title("How"))
        form.addRow("Paper", self.paper)
        form.addRow(self.mirrored)
        form.addRow(self.arcs)
        form.addRow(_title("Where"))
        form.addRow("Folder", self.folder)
        form.addRow(browse)
        form.addRow(self.replace)
        buttons = QHBoxLayout()
        buttons.addStretch(1)
        buttons.addWidget(cancel)
        buttons.addWidget(self.write_button)
        right = QVBoxLayout()
        right.addLayout(form)
        right.addWidget(self.remarks)
        right.addStretch(1)
        right.addLayout(buttons)
        layout = QHBoxLayout(self)
        layout.addLayout(left, 3)
        layout.addLayout(right, 2)

    def _draw(self) -> None:
        """Draw the pages anew and look again at what stands in the way."""
        self._pages = preview(self._shown, self.request.options)
        self._turn(0)
        self._check()

    def _turn(self, step: int) -> None:
        last = max(len(self._pages) - 1, 0)
        self._page = min(max(self._page + step, 0), last)
        self.sheet.show_sheet(self._pages[self._page] if self._pages else None)
        self.pager.setText(f"page {self._page + 1} of {last + 1}")

    def _check(self) -> None:
        request, lines = self.request, []
        stop = obstacle(self._shown)
        if stop:
            lines.append(Line("refusal", stop))
        if not request.kinds:
            lines.append(Line("note", "Choose at least one kind of file."))
        if not request.folder.is_dir():
            lines.append(
                Line("refusal", "There is no such folder; accepted: a folder that exists.")
            )
        elif not request.replace and (there := taken(self._shown, request)):
            lines.append(Line("refusal", f"{', '.join(there)}: there already. Tick Replace first."))
        self.write_button.setEnabled(not lines)
        lines.append(Line("note", "Print at 100 %, then measure the rules on the sheet."))
        self.remarks.show_lines(tuple(lines))

    def _write(self) -> None:
        shown, request = self._shown, self.request
        self.write_button.setEnabled(False)
        self._settings.set("export_folder", str(request.folder))
        self._runner.start(
            Request(
                "export",
                lambda _progress: write(shown, request),
                lambda names: self._on_written(request, names),
                self._on_failed,
            )
        )

    def _on_written(self, request: ExportRequest, names: tuple[str, ...]) -> None:
        self._notices.tell("exported", folder=str(request.folder), names=", ".join(names))
        self.accept()

    def _on_failed(self, error: CoreError) -> None:
        self._check()
        self.remarks.show_lines((Line("refusal", f"Not written. {error}"),))

    def _on_paper(self) -> None:
        self._settings.set("paper", str(self.paper.currentData()))
        self._draw()

    def _browse(self) -> None:
        folder = self._asker.ask_folder(self.folder.text())
        if folder is not None:
            self.folder.setText(str(folder))


def _title(text: str) -> QLabel:
    label = QLabel(text)
    label.setObjectName("title")
    return label
