"""Between the field check and what the Mat shows of it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, Protocol

import numpy as np

from app.mat.current import CurrentState, Shows
from core.response.currents import greatest
from core.response.polarisation import sense
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from app.field_check import Checked, FieldCheck
    from app.pipeline import Pipeline
    from app.settings import Settings

SHOWS: Final = "mat_shows"
ANIMATE: Final = "animate"


class CurrentView(Protocol):
    """What the presenter needs of the Mat."""

    def show_current(self, state: CurrentState) -> None: ...


class CurrentPresenter:
    """Shows mesh and current of the very design on the bench, and says why where it cannot."""

    def __init__(
        self, pipeline: Pipeline, field: FieldCheck, settings: Settings, view: CurrentView
    ) -> None:
        self._field, self._settings, self._view = field, settings, view
        self._shown: tuple[object, ...] = ()
        self.state = CurrentState()
        pipeline.evaluated.connect(lambda _evaluation: self.show())
        field.changed.connect(self.show)
        settings.changed.connect(lambda key, _: self.show() if key in (SHOWS, ANIMATE) else None)
        self.show()

    def show(self) -> None:
        """Show what there is, where it has changed."""
        shows, moves = Shows(self._settings.value(SHOWS)), bool(self._settings.value(ANIMATE))
        checked = self._field.current
        why = "" if shows is Shows.COPPER else self._why_not(checked, shows)
        look = (shows, moves, checked, why)
        if look == self._shown:
            return
        self._shown = look
        self.state = _state(shows, moves, checked, why)
        self._view.show_current(self.state)

    def words_at(self, point: object) -> str:
        """Current under the pointer; empty where none is shown."""
        currents = self.state.currents
        if currents is None or self.state.sheet is None or not isinstance(point, tuple):
            return ""
        sheets = {"ground plate": currents.ground}
        if self.state.shows is Shows.CURRENT:
            sheets = {"copper": currents.top, **sheets}
        for name, sheet in sheets.items():
            if sheet is not None and len(found := sheet.at(np.array([point]))[1]):
                return f"Current on the {name}: {_told(found[0])}     "
        return ""

    def _why_not(self, checked: Checked | None, shows: Shows) -> str:
        """Why nothing is drawn but copper; empty where there is something to draw."""
        what = "mesh" if shows is Shows.MESH else "current"
        field = self._field
        if checked is not None:
            return _lack(checked, shows, what)
        reasons = (
            (not field.is_on, "the field check is off"),
            (bool(field.problem), "the field check has no answer"),
            (field.is_stopped, "the field check is stopped"),
        )
        reason = next((words for holds, words in reasons if holds), "")
        return f"No {what}: {reason}" if reason else f"The {what} waits for the field check"


def _lack(checked: Checked, shows: Shows, what: str) -> str:
    """What an answer does not tell; empty where it tells what is asked for."""
    response = checked.evaluation.response
    if response is None or response.currents is None:
        return f"No {what}: the solver told none"
    if shows is Shows.GROUND and response.currents.ground is None:
        return "A board's ground is endless: its current is not told"
    return ""


def _state(shows: Shows, moves: bool, checked: Checked | None, why: str) -> CurrentState:
    if shows is Shows.COPPER or checked is None or why:
        return CurrentState(shows, words=why)
    response, brief = checked.evaluation.response, checked.evaluation.design.brief
    assert response is not None
    assert response.currents is not None
    currents = response.currents
    if shows is Shows.MESH:
        sheets = (currents.top, currents.ground)
        count = sum(len(sheet.areas) for sheet in sheets if sheet is not None)
        endless = " A board's ground plane is endless and has none." if sheets[1] is None else ""
        details = f"The triangles that the field check has solved on.{endless}"
        return CurrentState(shows, currents, f"{checked.level} mesh, {count} triangles", details)
    turns = sense(complex(response.spot.e_x), complex(response.spot.e_y), brief.polarisation)
    at = format_quantity(currents.frequency, Quantity.FREQUENCY)
    details = (
        f"Greatest current density in a period, peak values, with 1 W accepted at {at}; "
        f"{checked.level} mesh. The ticks show where it flows at one instant: each tip goes "
        "round once a period, in two seconds."
    )
    words = "Peak A/m with 1 W accepted"
    return CurrentState(shows, currents, words, details, turns, moves)


def _told(density: NDArray[np.complex128]) -> str:
    """Size and phases of a current density (2,)."""
    parts = ", ".join(
        f"{name} {abs(value):.3g} ∠ {np.degrees(np.angle(value)):.0f}°".replace("-", "−")
        for name, value in zip("xy", density, strict=True)
    )
    return f"up to {float(greatest(density)):.3g} A/m ({parts})"
