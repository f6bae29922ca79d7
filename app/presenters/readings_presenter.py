"""Between the evaluations and the panels on the right."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Protocol

from app.presenters.curves import CurvesState, curves_state
from app.presenters.readings import ReadingsState, readings_state

if TYPE_CHECKING:
    from app.evaluation import Evaluation
    from app.pipeline import Pipeline
    from app.settings import Settings


class Panel(Protocol):
    """A panel that shows readings."""

    def show_state(self, state: ReadingsState) -> None: ...


class Curves(Protocol):
    """A panel that shows curves."""

    def show_state(self, state: CurvesState | None) -> None: ...


class ReadingsPresenter:
    """Shows each evaluation as sentences and as curves."""

    def __init__(
        self, pipeline: Pipeline, settings: Settings, readings: Panel, curves: Curves
    ) -> None:
        self._pipeline, self._settings = pipeline, settings
        self._readings, self._curves = readings, curves
        self._answered = pipeline.current
        self._busy, self._proposal = "", ""
        pipeline.evaluated.connect(self._on_evaluated)
        self.show()

    def show(self) -> None:
        current = self._pipeline.current
        if current.response is not None:
            self._answered = current
        self._show_readings()
        self._curves.show_state(
            curves_state(
                self._answered,
                is_stale=current.response is None,
                match_as=self._settings.value("match_as"),
            )
        )

    def show_sizing(self, busy: str, proposal: str) -> None:
        """Tell what sizing is at, or what it proposes."""
        self._busy, self._proposal = busy, proposal
        self._show_readings()

    def _show_readings(self) -> None:
        state = readings_state(self._pipeline.current, self._answered)
        self._readings.show_state(replace(state, busy=self._busy, proposal=self._proposal))

    def _on_evaluated(self, _evaluation: Evaluation) -> None:
        self.show()
