"""The workbench: puts documents, presenters and views together, and nothing else."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import QByteArray, Qt
from PySide6.QtWidgets import QLabel, QMainWindow, QSplitter, QVBoxLayout, QWidget

from app.actions import make_actions
from app.curves.panel import CurvesPanel
from app.dialogs.preferences import PreferencesDialog
from app.document import Document
from app.field_check import FieldCheck, Solver
from app.jobs.solver_process import SolverProcess
from app.mat.mat import Mat
from app.menus import add_file_menus
from app.pipeline import Pipeline
from app.presenters.cards_presenter import CardsPresenter
from app.presenters.current_presenter import CurrentPresenter
from app.presenters.files import Asker, FilesPresenter
from app.presenters.mat_presenter import MatPresenter
from app.presenters.readings_presenter import ReadingsPresenter
from app.presenters.sizing import Settler, SizingPresenter
from app.recovery import Recovery
from app.shown_wiring import connect_shown
from app.tail_check import TailCheck
from app.views.card_column import CardColumn
from app.views.header import Header
from app.views.notice_bar import NoticeBar
from app.views.readings_view import ReadingsView
from app.wiring import connect_actions, connect_views, place_words
from core.design.defaults import default_design

if TYPE_CHECKING:
    from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent

    from app.jobs.runner import Runner
    from app.settings import Settings


_SMALL = 900  # pixels of a screen that the window should have for itself


class WindowAsks(Asker, Protocol):
    """All that the window asks in boxes."""

    def ask_folder(self, start: str) -> Path | None: ...
    def tell(self, title: str, text: str) -> None: ...


class MainWindow(QMainWindow):
    """The one window of the workbench."""

    def __init__(
        self,
        settings: Settings,
        runner: Runner,
        folder: Path,
        asker: WindowAsks | None = None,
        solver: Solver | None = None,
        settler: Settler | None = None,
    ) -> None:
        super().__init__()
        self.settings, self.runner = settings, runner
        self.asker: WindowAsks = asker or _own_asker(self)
        self.document = Document(default_design(), self)
        self.pipeline = Pipeline(self.document)
        solver = solver or SolverProcess()
        self.field = FieldCheck(self.pipeline, settings, runner, solver)
        self.tail = TailCheck(self.pipeline, self.field, runner, solver)
        self._settler = settler or SolverProcess()  # of its own: the field check goes on beside it
        self.window_actions = make_actions(self, self.document.stack)
        self._make_views()
        self._make_presenters()
        self._lay_out()
        connect_views(self)
        connect_actions(self)
        connect_shown(self, self)
        add_file_menus(self.header.menus["&File"], settings, self.files)
        self.setAcceptDrops(True)
        self.show_name()
        self.mat.plan.setFocus()
        self.recovery = Recovery(self.document, folder)
        self._tell_first()

    def show_export(self) -> None:
        """Open the preview of the sheet."""
        # Loaded when it is first used: its drawing libraries would slow the start.
        from app.dialogs.export import ExportDialog  # noqa: PLC0415

        checked = self.field.current
        dialog = ExportDialog(
            self.pipeline.current,
            checked.mark if checked is not None else "",
            self.settings,
            self.asker,
            self.runner,
            self.notices,
            self,
        )
        dialog.open()

    def show_preferences(self) -> None:
        """Open the preferences."""
        PreferencesDialog(self.settings, self).open()

    def toggle_full_screen(self) -> None:
        """Take all of the screen, or give it back."""
        self.setWindowState(self.windowState() ^ Qt.WindowState.WindowFullScreen)

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if event.mimeData().hasUrls():
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
        if paths:
            event.acceptProposedAction()
            self.files.open(paths[0])

    def closeEvent(self, event: QCloseEvent) -> None:
        if not self.files.may_leave():
            event.ignore()
            return
        geometry = bytes(self.saveGeometry().toBase64().data()).decode()
        self.settings.set("geometry", geometry)
        self.field.close()
        self.tail.close()
        self.sizing.discard()
        self._settler.close()
        self.runner.close()
        self.recovery.close()
        super().closeEvent(event)

    def take_room(self) -> None:
        """The size and place of last time; at first most of the screen, all of a small one."""
        geometry = QByteArray.fromBase64(self.settings.value("geometry").encode())
        if not geometry.isEmpty():
            self.restoreGeometry(geometry)
            return
        room = self.screen().availableSize()
        self.resize(room * 0.85)
        if room.height() < _SMALL:
            self.setWindowState(Qt.WindowState.WindowMaximized)

    def _tell_first(self) -> None:
        """Unsaved work that was found goes before the hints of a first start."""
        left = self.recovery.left
        if left is not None:
            self.notices.tell("recovered", name=left.name or "A design")
        elif not self.settings.value("hints_seen"):
            self.notices.tell("hints")

    def _make_views(self) -> None:
        settings = self.settings
        self.header = Header(self.window_actions)
        self.notices = NoticeBar()
        self.cards = CardColumn(settings.value("open_card"))
        self.mat = Mat()
        self.mat.plan.shows_dimensions = settings.value("dimensions")
        self.readings = ReadingsView()
        self.curves = CurvesPanel(settings.value("curve"), settings.value("match_as"))
        self.place = QLabel()
        self.place.setAccessibleName("Place of the pointer")
        self.place.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)

    def _make_presenters(self) -> None:
        document, pipeline = self.document, self.pipeline
        self.cards_presenter = CardsPresenter(document, self.cards)
        self.mat_presenter = MatPresenter(document, pipeline, self.mat)
        self.current_presenter = CurrentPresenter(pipeline, self.field, self.settings, self.mat)
        self.readings_presenter = ReadingsPresenter(
            pipeline, self.field, self.settings, self.readings, self.curves, self.tail
        )
        self.sizing = SizingPresenter(
            document,
            self.runner,
            self._settler,
            self.mat_presenter,
            self.readings_presenter,
            self.notices,
        )
        self.files = FilesPresenter(document, self.settings, self.asker, self.notices)

    def _lay_out(self) -> None:
        em = self.fontMetrics().height()
        right = QWidget()
        right.setObjectName("clear")
        column = QVBoxLayout(right)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(em // 2)
        column.addWidget(self.readings)
        self.curves.setMinimumHeight(em * 13)  # what can scroll in the Readings gives way
        column.addWidget(self.curves, 1)
        self.columns = QSplitter(Qt.Orientation.Horizontal)
        self.columns.setHandleWidth(em // 2)
        self.columns.setChildrenCollapsible(False)
        for widget in (self.cards, self.mat, right):
            self.columns.addWidget(widget)
        for i, stretch in enumerate((2, 6, 4)):
            self.columns.setStretchFactor(i, stretch)
        self.columns.setSizes([em * 20, em * 40, em * 23])
        bench = QWidget()
        bench.setObjectName("bench")
        layout = QVBoxLayout(bench)
        layout.setContentsMargins(em // 2, em // 2, em // 2, em // 3)
        layout.setSpacing(em // 2)
        layout.addWidget(self.notices)
        layout.addWidget(self.columns, 1)
        self.setMenuWidget(self.header)
        self.setCentralWidget(bench)
        self.statusBar().addPermanentWidget(self.place)
        self.statusBar().setSizeGripEnabled(False)

    def show_place(self, point: object) -> None:
        """Say where the pointer is on the Mat."""
        words = self.current_presenter.words_at(point) + place_words(point)
        self.place.setText(words)
        # A label of a fixed size does not lay out the whole window at every move of the pointer.
        size, needed = self.place.size(), self.place.sizeHint()
        if not words or needed.width() > size.width() or needed.height() != size.height():
            self.place.setFixedSize(needed)

    def show_name(self) -> None:
        """Say whose design is on the bench, and whether it is saved."""
        name = self.files.name
        self.setWindowTitle(f"{name}[*] — Kerfwave")
        if self.isWindowModified() != self.document.is_modified:
            self.setWindowModified(self.document.is_modified)
        unsaved = " · not saved" if self.document.is_modified else ""
        self.header.show_name(f"{self.document.design.name}{unsaved}")


def _own_asker(window: MainWindow) -> WindowAsks:
    from app.dialogs.ask import WindowAsker  # noqa: PLC0415 - replaced as a whole in tests

    return WindowAsker(window)
