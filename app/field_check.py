"""The field check: the design on the bench, solved by itself whenever an edit rests."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass, replace
from importlib.metadata import version
from typing import TYPE_CHECKING, Final, Protocol

from PySide6.QtCore import QObject, QTimer, Signal

from app.jobs.runner import Request
from core.engines import NEXT_COARSER
from core.errors import ModelError
from core.response.bands import frequency_grid
from core.response.judge import judge
from core.response.spread import with_spread

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from app.evaluation import Evaluation
    from app.jobs.runner import Runner
    from app.pipeline import Pipeline
    from app.settings import Settings
    from core.errors import CoreError
    from core.layout.model import Layout
    from core.layout.tail import Tail
    from core.progress import Progress
    from core.response.model import Response

KIND: Final = "field-check"
REST: Final = 400  # ms that an edit must rest before it is solved
COARSE: Final = "coarse"
_PREPARING: Final = "Preparing the field check…"


class Solve(Protocol):
    """A field solver: takes a layout, frequencies (Hz), a listener, a level of mesh, a cable."""

    def __call__(
        self,
        layout: Layout,
        frequencies: ArrayLike,
        progress: Progress,
        level: str,
        tail: Tail | None = None,
    ) -> Response: ...


@dataclass(frozen=True)
class Checked:
    """A design that was solved.

    Attributes
    ----------
    evaluation : Evaluation
        With the solver's response and the verdicts on it.
    level : str
        Fineness of the mesh: coarse, normal or fine.
    solved : int
        Frequencies that were solved.
    """

    evaluation: Evaluation
    level: str
    solved: int

    @property
    def words(self) -> str:
        return f"field solver, {self.level} mesh, {self.solved} frequencies"

    @property
    def mark(self) -> str:
        """What the sheets of this design say."""
        return f"Field-checked: {self.level} mesh, Kerfwave {version('kerfwave')}"


class FieldCheck(QObject):
    """Keeps the last answer of the field solver, and asks for the next one.

    An edit stops what is being solved; when edits rest, the design is solved beside the
    window, on a coarse mesh as long as the hand holds on.

    Attributes
    ----------
    last : Checked or None
        Newest answer, whichever design it is for.
    busy, problem : str
        What is being solved, and why it could not be; empty where nothing is.
    is_stopped : bool
        The user has stopped it.
    """

    changed = Signal()

    def __init__(
        self, pipeline: Pipeline, settings: Settings, runner: Runner, solve: Solve
    ) -> None:
        super().__init__(pipeline)
        self._pipeline, self._settings, self._runner = pipeline, settings, runner
        self._solve = solve
        self.last: Checked | None = None
        self._is_held = self._is_ready = False
        self.busy, self.problem, self.is_stopped = "", "", False
        self._rest = QTimer(self)
        self._rest.setSingleShot(True)
        self._rest.setInterval(REST)
        self._rest.timeout.connect(self.start)
        pipeline.evaluated.connect(self._on_evaluated)
        settings.changed.connect(lambda key, _: self._on_setting(key))
        self._wait()

    @property
    def is_on(self) -> bool:
        return bool(self._settings.value("field_check"))

    @property
    def current(self) -> Checked | None:
        """Answer for the very design on the bench."""
        last = self.last
        is_same = last is not None and last.evaluation.design == self._pipeline.current.design
        return last if is_same else None

    def start(self) -> None:
        """Solve the design on the bench now."""
        current = self._pipeline.current
        if not self.is_on or current.layout is None or self._is_done():
            return
        level = COARSE if self._is_held else str(self._settings.value("mesh_level"))
        known = self.current
        self._tell(busy="Field check: first frequency" if self._is_ready else _PREPARING)
        self._runner.start(
            Request(
                KIND,
                lambda progress: _checked(current, level, self._solve, progress, known),
                self._on_checked,
                lambda error: self._tell(problem=_reason(error)),
                self._on_stepped,
            )
        )

    def stop(self) -> None:
        """Stop solving until the next edit."""
        self._runner.stop(KIND)
        self._rest.stop()
        self._tell(is_stopped=True)

    def close(self) -> None:
        """End for good: nothing is solved and nobody is told."""
        self._rest.stop()
        self._runner.stop(KIND)

    def hold(self) -> None:
        """The hand has taken hold of something."""
        self._is_held = True

    def let_go(self) -> None:
        """The hand has let go: what it left is solved on the chosen mesh."""
        self._is_held = False
        if not self._is_done() and not self.is_stopped:
            self._wait()
            self.changed.emit()

    def _is_done(self) -> bool:
        """Whether the design on the bench is solved as finely as it is to be."""
        current, level = self.current, self._settings.value("mesh_level")
        return current is not None and (self._is_held or current.level == level)

    def _wait(self) -> None:
        if self.is_on:
            self._rest.start()

    def _tell(self, *, busy: str = "", problem: str = "", is_stopped: bool = False) -> None:
        self.busy, self.problem, self.is_stopped = busy, problem, is_stopped
        self.changed.emit()

    def _on_evaluated(self, _evaluation: Evaluation) -> None:
        if self.busy:
            self._runner.stop(KIND)
        self.busy, self.problem, self.is_stopped = "", "", False
        self._wait()

    def _on_setting(self, key: str) -> None:
        if key not in ("field_check", "mesh_level"):
            return
        self._runner.stop(KIND)
        self._rest.stop()
        if not self.is_on:
            self.last = None
        self._wait()
        self._tell()

    def _on_stepped(self, done: int, total: int) -> None:
        # The first frequency of a session also loads the solver.
        self._is_ready = self._is_ready or done > 0
        if self._is_ready:
            self._tell(busy=f"Field check: {done} of about {total} frequencies")

    def _on_checked(self, checked: Checked) -> None:
        self.last, self._is_ready = checked, True
        self._tell()


def _reason(error: CoreError) -> str:
    return str(error).removeprefix("field solver: ")


class _Counted:
    """Passes progress on and counts the frequencies."""

    def __init__(self, progress: Progress) -> None:
        self._progress = progress
        self.count = 0

    def step(self, done: int, total: int) -> None:
        self.count += 1
        self._progress.step(done, total)


class _Before:
    """Passes on that work goes on, as long as what is counted has not begun."""

    def __init__(self, progress: Progress) -> None:
        self._progress = progress

    def step(self, _done: int, total: int) -> None:
        self._progress.step(0, total)


def _checked(
    current: Evaluation, level: str, solve: Solve, progress: Progress, known: Checked | None
) -> Checked:
    """Solve a design at the frequencies of the curves and hold it against its brief.

    On the next coarser mesh too, if that is not known already: how far the two differ is told.
    """
    layout, brief, counted = current.layout, current.design.brief, _Counted(progress)
    assert layout is not None
    frequencies = frequency_grid(brief.frequency)
    coarser = NEXT_COARSER.get(level)
    other = None
    if known is not None and known.level == coarser:
        other = known.evaluation.response
    elif coarser is not None:
        # The finer mesh may do where this one does not; then its readings have no plus and minus.
        with suppress(ModelError):
            other = solve(layout, frequencies, _Before(progress), coarser)
    response = solve(layout, frequencies, counted, level)
    if other is not None and coarser is not None:
        response = with_spread(response, other, coarser, brief.polarisation)
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    evaluation = replace(current, response=response, verdicts=verdicts, problem="")
    return Checked(evaluation, level, counted.count)
