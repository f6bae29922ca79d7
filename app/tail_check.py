"""What a cable behind the plate would change, solved when it is asked for."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from PySide6.QtCore import QObject, Signal

from app.jobs.runner import Request
from core.layout.tail import coax_tail
from core.response.bands import frequency_grid
from core.response.change import change_details, change_text
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.field_check import Checked, FieldCheck, Solver
    from app.jobs.runner import Runner
    from app.pipeline import Pipeline
    from core.errors import CoreError
    from core.layout.tail import Tail
    from core.response.model import Response

KIND: Final = "coax-tail"


class TailCheck(QObject):
    """Keeps what half a wavelength of cable changes, as long as the design stays the same.

    Attributes
    ----------
    is_busy : bool
        It is being solved.
    """

    changed = Signal()

    def __init__(
        self, pipeline: Pipeline, field: FieldCheck, runner: Runner, solver: Solver
    ) -> None:
        super().__init__(field)
        self._field, self._runner, self._solver = field, runner, solver
        self.is_busy = False
        self._words = self._details = ""
        self._asked: Checked | None = None
        field.changed.connect(self._on_changed)
        pipeline.evaluated.connect(lambda _evaluation: self._on_changed())

    @property
    def can_start(self) -> bool:
        """Whether the design is solved with a plate that a cable can hang from."""
        checked = self._field.current
        if checked is None or not checked.mark or self._field.busy or self.is_busy or self.words:
            return False
        response = checked.evaluation.response
        return response is not None and response.front_to_back is not None

    @property
    def words(self) -> str:
        """What the cable changes; empty where that is not known."""
        return self._words if self._is_current else ""

    @property
    def details(self) -> str:
        """What else it changes."""
        return self._details if self._is_current else ""

    @property
    def _is_current(self) -> bool:
        current = self._field.current
        return current is not None and current is self._asked

    def start(self) -> None:
        """Solve the design on the bench with the cable."""
        checked = self._field.current
        if not self.can_start or checked is None or checked.evaluation.layout is None:
            return
        layout, level = checked.evaluation.layout, checked.level
        tail = coax_tail(layout)
        frequencies = frequency_grid(layout.frequency)
        self._asked, self._words, self._details, self.is_busy = checked, "", "", True
        self._runner.start(
            Request(
                KIND,
                lambda progress: self._solver.solve(layout, frequencies, progress, level, tail),
                lambda response: self._tell(*_words(checked, response, tail)),
                self._on_failed,
            )
        )
        self.changed.emit()

    def stop(self) -> None:
        """Leave it."""
        if self.is_busy:  # else the solver may be at what the field check has asked
            self._runner.stop(KIND)
            self._solver.drop()
            self._tell("")

    def close(self) -> None:
        """End for good, and tell nobody."""
        self._runner.stop(KIND)

    def _tell(self, words: str, details: str = "") -> None:
        self._words, self._details, self.is_busy = words, details, False
        self.changed.emit()

    def _on_failed(self, error: CoreError) -> None:
        self._tell(f"No answer with a cable: {error}")

    def _on_changed(self) -> None:
        # The solver answers one question at a time, and the field check goes first.
        if self.is_busy and (self._field.busy or self._field.current is not self._asked):
            self.stop()


def _words(checked: Checked, hung: Response, tail: Tail) -> tuple[str, str]:
    """What changes first of all, and the rest."""
    response = checked.evaluation.response
    assert response is not None
    long = format_quantity(tail.length, Quantity.LENGTH, digits=3)
    both = response, hung, checked.evaluation.design.brief.polarisation
    return (
        f"With {long} of cable: {change_text(*both)}",
        change_details(*both),
    )
