"""The field check: the design on the bench, solved by itself whenever an edit rests."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import partial
from importlib.metadata import version
from typing import TYPE_CHECKING, Final, Protocol

from PySide6.QtCore import QObject, QTimer, Signal

from app.jobs.runner import Request
from core.engines import NEXT_COARSER
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
QUICK: Final = "quick"
_PREPARING: Final = "Preparing the field check…"
_FOLLOWS: Final = "The field check follows the hand on a quick, coarse mesh."
_COMPARING: Final = "Solved on the {level} mesh; now on the {coarser} one, for the ±."


class Solver(Protocol):
    """A field solver: takes a layout, frequencies (Hz), a listener, a level of mesh, a cable."""

    def solve(
        self,
        layout: Layout,
        frequencies: ArrayLike,
        progress: Progress,
        level: str,
        tail: Tail | None = None,
    ) -> Response: ...
    def drop(self) -> None: ...
    def close(self) -> None: ...


@dataclass(frozen=True)
class Checked:
    """A design that was solved.

    Attributes
    ----------
    evaluation : Evaluation
        With the solver's response and the verdicts on it.
    level : str
        Fineness of the mesh: quick, coarse, normal or fine.
    solved : int
        Frequencies that were solved.
    is_compared : bool
        The plus and minus from the next coarser mesh is known, or cannot be.
    """

    evaluation: Evaluation
    level: str
    solved: int
    is_compared: bool

    @property
    def words(self) -> str:
        return f"field solver, {self.level} mesh, {self.solved} frequencies"

    @property
    def mark(self) -> str:
        """What the sheets of this design say; a quick answer is none to cut by."""
        if self.level == QUICK:
            return ""
        return f"Field-checked: {self.level} mesh, Kerfwave {version('kerfwave')}"


class FieldCheck(QObject):
    """Keeps the last answer of the field solver, and asks for the next one.

    An edit stops what is being solved; when edits rest, the design is solved beside the
    window, and then on the next coarser mesh for the plus and minus. As long as the hand holds
    on, quick answers follow it one after the other.

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
        self, pipeline: Pipeline, settings: Settings, runner: Runner, solver: Solver
    ) -> None:
        super().__init__(pipeline)
        self._pipeline, self._settings, self._runner = pipeline, settings, runner
        self._solver = solver
        self.last: Checked | None = None
        self._is_held = self._is_ready = False
        self.busy, self.problem, self.is_stopped = "", "", False
        self._rest = QTimer(self)
        self._rest.setSingleShot(True)
        self._rest.setInterval(REST)
        self._rest.timeout.connect(self.start)
        pipeline.evaluated.connect(self._on_evaluated)
        settings.changed.connect(lambda key, _: self._on_setting(key))
        self._rest.start()

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
        current, checked = self._pipeline.current, self.current
        if not self.is_on or current.layout is None or self._is_done():
            return
        level = QUICK if self._is_held else _level(self._settings)
        if checked is not None and checked.level == level:
            coarser = NEXT_COARSER[level]
            self._tell(busy=_COMPARING.format(level=level, coarser=coarser))
            self._runner.start(
                Request(
                    KIND,
                    partial(_compared, checked, self._solver),
                    self._on_checked,
                    # The finer mesh may do where this one does not: its readings stand.
                    lambda _error: self._on_checked(replace(checked, is_compared=True)),
                )
            )
            return
        busy = _FOLLOWS if self._is_held else "Field check: first frequency"
        self._tell(busy=busy if self._is_ready else _PREPARING)
        self._runner.start(
            Request(
                KIND,
                partial(_checked, current, level, checked, self._solver),
                self._on_checked,
                lambda error: self._tell(problem=_reason(error)),
                self._on_stepped,
            )
        )

    def stop(self) -> None:
        """Stop solving until the next edit; an answer that only lacks its plus and minus stands."""
        checked = self.current
        self._leave()
        self._rest.stop()
        is_answered = checked is not None and checked.level == _level(self._settings)
        self._tell(is_stopped=not is_answered)

    def close(self) -> None:
        """End for good: nothing is solved and nobody is told."""
        self._rest.stop()
        self._runner.stop(KIND)
        self._solver.close()

    def hold(self, is_held: bool) -> None:
        """The hand has taken hold of something, or let go of it."""
        self._is_held = is_held
        self._leave()
        self.busy = ""
        if not is_held and not self._is_done() and not self.is_stopped:
            self._rest.start()
        self.changed.emit()

    def forget(self) -> None:
        """Forget the last answer: another design comes on the bench."""
        self.last = None

    def _is_done(self) -> bool:
        """Whether the design on the bench is solved as finely as it is to be."""
        checked = self.current
        if checked is None or self._is_held:
            return checked is not None
        return checked.level == _level(self._settings) and checked.is_compared

    def _leave(self) -> None:
        """Leave what is being solved."""
        if self.busy:  # else the solver may be at what others have asked
            self._runner.stop(KIND)
            self._solver.drop()

    def _tell(self, *, busy: str = "", problem: str = "", is_stopped: bool = False) -> None:
        self.busy, self.problem, self.is_stopped = busy, problem, is_stopped
        self.changed.emit()

    def _on_evaluated(self, _evaluation: Evaluation) -> None:
        if self._is_held:
            if not self.busy:
                self.start()
            return
        self._leave()
        self.busy, self.problem, self.is_stopped = "", "", False
        self._rest.start()

    def _on_setting(self, key: str) -> None:
        if key not in ("field_check", "mesh_level"):
            return
        self._leave()
        self._rest.stop()
        if not self.is_on:
            self.last = None
        self._rest.start()
        self._tell()

    def _on_stepped(self, done: int, total: int) -> None:
        # The first frequency of a session also loads the solver.
        self._is_ready = self._is_ready or done > 0
        if self._is_ready and not self._is_held:
            self._tell(busy=f"Field check: {done} of about {total} frequencies")

    def _on_checked(self, checked: Checked) -> None:
        self.last, self._is_ready = checked, True
        if self._is_done():
            self._tell()
        else:
            self.start()


def _level(settings: Settings) -> str:
    """Level of mesh to solve on at rest."""
    return str(settings.value("mesh_level"))


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


def _checked(
    current: Evaluation, level: str, known: Checked | None, solver: Solver, progress: Progress
) -> Checked:
    """Solve a design at the frequencies of the curves and hold it against its brief.

    With its plus and minus, where the next coarser mesh is known already or there is none.
    """
    assert current.layout is not None
    counted = _Counted(progress)
    frequencies = frequency_grid(current.design.brief.frequency)
    response = solver.solve(current.layout, frequencies, counted, level)
    coarser = NEXT_COARSER.get(level)
    checked = Checked(_judged(current, response), level, counted.count, coarser is None)
    if known is None or known.level != coarser or known.evaluation.response is None:
        return checked
    return _beside(checked, known.evaluation.response)


def _compared(checked: Checked, solver: Solver, progress: Progress) -> Checked:
    """Solve the same on the next coarser mesh, and tell how far the two differ."""
    layout, frequency = checked.evaluation.layout, checked.evaluation.design.brief.frequency
    assert layout is not None
    coarser = NEXT_COARSER[checked.level]
    return _beside(checked, solver.solve(layout, frequency_grid(frequency), progress, coarser))


def _beside(checked: Checked, coarser: Response) -> Checked:
    """An answer with its plus and minus."""
    shown = checked.evaluation
    assert shown.response is not None
    against, polarisation = NEXT_COARSER[checked.level], shown.design.brief.polarisation
    response = with_spread(shown.response, coarser, against, polarisation)
    return replace(checked, evaluation=_judged(shown, response), is_compared=True)


def _judged(current: Evaluation, response: Response) -> Evaluation:
    """What is on the bench with the solver's response, held against the brief."""
    brief = current.design.brief
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    return replace(current, response=response, verdicts=verdicts, problem="")
