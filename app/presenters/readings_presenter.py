"""Between the evaluations and the panels on the right."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Protocol

from app.presenters.check_words import check_state
from app.presenters.curves import CurvesState, curves_state
from app.presenters.offer import OfferState
from app.presenters.readings import ReadingsState, readings_state

if TYPE_CHECKING:
    from app.evaluation import Evaluation
    from app.field_check import Checked, FieldCheck
    from app.pipeline import Pipeline
    from app.settings import Settings
    from app.tail_check import TailCheck


ESTIMATED = "live estimate, by equations"


class Panel(Protocol):
    """A panel that shows readings."""

    def show_state(self, state: ReadingsState) -> None: ...


class Curves(Protocol):
    """A panel that shows curves."""

    def show_state(self, state: CurvesState | None) -> None: ...


class ReadingsPresenter:
    """Shows each evaluation as sentences and as curves."""

    def __init__(
        self,
        pipeline: Pipeline,
        field: FieldCheck,
        settings: Settings,
        readings: Panel,
        curves: Curves,
        tail: TailCheck,
    ) -> None:
        self._pipeline, self._field, self._settings = pipeline, field, settings
        self._tail = tail
        self._readings, self._curves = readings, curves
        self._answered = pipeline.current
        self._offer = OfferState()
        self._told: Checked | None = None
        pipeline.evaluated.connect(self._on_evaluated)
        field.changed.connect(self._on_checked)
        tail.changed.connect(self._show_readings)
        self.show()

    def show(self) -> None:
        current = self._pipeline.current
        if current.response is not None:
            self._answered = current
        self._show_readings()
        self._curves.show_state(self._curves_state())

    def show_offer(self, offer: OfferState) -> None:
        """Tell what sizing is at, or what it proposes."""
        self._offer = offer
        self._show_readings()

    def _show_readings(self) -> None:
        current = self._pipeline.current
        state = readings_state(current, self._answered, self._field.current)
        is_estimate = self._field.is_on and self._field.current is None
        self._readings.show_state(
            replace(
                state,
                engine=ESTIMATED if is_estimate else state.engine,
                offer=self._offer,
                check=check_state(self._field, self._tail),
            )
        )

    def _curves_state(self) -> CurvesState | None:
        """Curves of both engines, that of the design on the bench first."""
        live = curves_state(
            self._answered,
            is_stale=self._pipeline.current.response is None,
            match_as=self._settings.value("match_as"),
        )
        self._told = self._field.last
        if self._told is None:
            return live
        solved = curves_state(
            self._told.evaluation,
            is_stale=self._field.current is None,
            match_as=self._settings.value("match_as"),
        )
        assert solved is not None
        if live is None or self._field.current is not None:
            return solved.with_beside(live)
        return live.with_beside(solved)

    def _on_checked(self) -> None:
        """Curves change with an answer only, the line with every step."""
        if self._field.last is self._told:
            self._show_readings()
        else:
            self.show()

    def _on_evaluated(self, _evaluation: Evaluation) -> None:
        self.show()
