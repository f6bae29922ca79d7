"""Template…: a preview of the sheet, what to write and where."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QHBoxLayout, QLabel, QPushButton, QVBoxLayout, QWidget

from app.dialogs.export_form import ExportForm
from app.dialogs.sheet_view import SheetView
from app.jobs.runner import Request
from app.presenters.export import ExportRequest, obstacle, preview, taken, write
from app.presenters.readings import Line
from app.views.buttons import IconButton
from app.views.lines import LineList

if TYPE_CHECKING:
    from pathlib import Path

    from app.evaluation import Evaluation
    from app.jobs.runner import Runner
    from app.settings import Settings
    from app.views.notice_bar import NoticeBar
    from core.drawing.sheet import Sheet
    from core.errors import CoreError

_KIND = "export"


class FolderAsker(Protocol):
    """Asks for a folder."""

    def ask_folder(self, start: str) -> Path | None: ...


class ExportDialog(QDialog):
    """Preview at the left, choices at the right."""

    def __init__(
        self,
        shown: Evaluation,
        field_check: str,
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
        self._field_check = field_check
        self._asker, self._runner, self._notices = asker, runner, notices
        self._pages: tuple[Sheet, ...] = ()
        self._page = 0
        self.form = ExportForm(settings)
        self.form.changed.connect(self._check)
        self.form.redrawn.connect(self._draw)
        self.form.browse_asked.connect(self._browse)
        self.sheet = SheetView()
        self.pager = QLabel()
        self.pager.setAccessibleName("Page")
        self.remarks = LineList("Remarks on the export")
        self.write_button = QPushButton("Write")
        self.write_button.setObjectName("primary")
        self.write_button.setDefault(True)
        self.write_button.setAccessibleName("Write the files")
        self.write_button.clicked.connect(self._write)
        self._lay_out()
        self._draw()

    def done(self, result: int) -> None:
        """Leave; work that is still going on is not waited for."""
        self._runner.stop(_KIND)
        super().done(result)

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
        close = QPushButton("Close")
        close.setAccessibleName("Close without writing")
        close.clicked.connect(self.reject)
        buttons = QHBoxLayout()
        buttons.addStretch(1)
        buttons.addWidget(close)
        buttons.addWidget(self.write_button)
        right = QVBoxLayout()
        right.addWidget(self.form)
        right.addWidget(self.remarks)
        right.addStretch(1)
        right.addLayout(buttons)
        layout = QHBoxLayout(self)
        layout.addLayout(left, 3)
        layout.addLayout(right, 2)
        self.resize(em * 58, em * 40)
        self.write_button.setFocus()

    @property
    def request(self) -> ExportRequest:
        """What is asked, with how the design was checked."""
        asked = self.form.request
        options = replace(asked.options, field_check=self._field_check)
        return replace(asked, options=options)

    def _draw(self) -> None:
        """Draw the pages anew and look again at what stands in the way."""
        options = self.request.options
        self._settings.set("paper", options.paper)
        self._pages = preview(self._shown, options)
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
            lines.append(Line("refusal", "No such folder; accepted: a folder that exists."))
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
                _KIND,
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

    def _browse(self) -> None:
        folder = self._asker.ask_folder(self.form.folder.text())
        if folder is not None:
            self.form.folder.setText(str(folder))
