"""Curves of an evaluation: what each chart shows and says."""

from __future__ import annotations

from dataclasses import replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from app.curves.state import ESTIMATE, PatternState, PlotState, SmithState
from core.design.polarisation import Polarisation
from core.response.model import Reading, TrustLevel
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.evaluation import Evaluation
    from core.design.model import Brief
    from core.response.model import Response

PLANES = ("in the plane of x", "in the plane of y")


class CurvesState:
    """All charts of an evaluation that has a response; each is made when it is looked at."""

    def __init__(
        self,
        response: Response,
        brief: Brief,
        *,
        is_stale: bool,
        match_as: str,
        beside: CurvesState | None = None,
    ) -> None:
        self._response, self._brief = response, brief
        self._is_stale, self._match_as = is_stale, match_as
        self._beside = beside

    def with_beside(self, beside: CurvesState | None) -> CurvesState:
        """The same with the curves of the other engine beside them."""
        return CurvesState(
            self._response,
            self._brief,
            is_stale=self._is_stale,
            match_as=self._match_as,
            beside=beside,
        )

    @property
    def has_axial_ratio(self) -> bool:
        """Whether there is an axial ratio to show: not for a linear antenna."""
        return self._brief.polarisation is not Polarisation.LINEAR

    @cached_property
    def match(self) -> PlotState:
        state = _match(self._response, self._brief, self._is_stale, self._match_as)
        return replace(state, beside=self._beside.match if self._beside else None)

    @cached_property
    def axial_ratio(self) -> PlotState:
        state = _axial_ratio(self._response, self._brief, self._is_stale)
        return replace(state, beside=self._beside.axial_ratio if self._beside else None)

    @cached_property
    def smith(self) -> SmithState:
        state = _smith(self._response, self._brief, self._is_stale)
        return replace(state, beside=self._beside.smith if self._beside else None)

    @cached_property
    def pattern(self) -> PatternState:
        state = _pattern(self._response, self._is_stale)
        return replace(state, beside=self._beside.pattern if self._beside else None)


def curves_state(shown: Evaluation, *, is_stale: bool, match_as: str) -> CurvesState | None:
    """Charts of an evaluation; None where it has no response.

    Parameters
    ----------
    shown : Evaluation
    is_stale : bool
        Whether it is that of an older design.
    match_as : str
        "S11" or "VSWR".
    """
    if shown.response is None:
        return None
    return CurvesState(shown.response, shown.design.brief, is_stale=is_stale, match_as=match_as)


def _is_estimate(response: Response, reading: Reading) -> bool:
    return response.trust[reading].level is TrustLevel.UNKNOWN


def _match(response: Response, brief: Brief, is_stale: bool, match_as: str) -> PlotState:
    reflection = (brief.vswr - 1.0) / (brief.vswr + 1.0)
    sweep = response.sweep
    if match_as == "VSWR":
        title, unit, values, target = "Match, VSWR", "", sweep.vswr, brief.vswr
        low, high, step = 1.0, 6.0, 1.0
    else:
        title, unit, values = "Match, S11 in dB", "dB", -sweep.return_loss_db
        target = float(20.0 * np.log10(reflection))
        low, high, step = -30.0, 0.0, 10.0
    at = float(np.interp(brief.frequency, sweep.frequency, np.clip(values, -100.0, 100.0)))
    doubt = _is_estimate(response, Reading.MATCH)
    spoken = _spoken(title, at, unit, brief.frequency, doubt)
    return PlotState(
        title, doubt, is_stale, spoken, sweep.frequency, values, low, high, step, unit, target,
        brief.frequency, engine=response.engine,
    )  # fmt: skip


def _axial_ratio(response: Response, brief: Brief, is_stale: bool) -> PlotState:
    title = "Axial ratio in dB"
    doubt = _is_estimate(response, Reading.AXIAL_RATIO)
    at = float(response.spot.axial_ratio_db)
    spoken = _spoken(title, at, "dB", brief.frequency, doubt)
    sweep = response.sweep
    return PlotState(
        title, doubt, is_stale, spoken, sweep.frequency, sweep.axial_ratio_db, 0.0, 12.0, 3.0,
        "dB", brief.axial_ratio_db, brief.frequency, engine=response.engine,
    )  # fmt: skip


def _smith(response: Response, brief: Brief, is_stale: bool) -> SmithState:
    doubt = _is_estimate(response, Reading.MATCH)
    impedance = complex(response.spot.z_in)
    sign = "−" if impedance.imag < 0 else "+"
    where = format_quantity(brief.frequency, Quantity.FREQUENCY)
    spoken = f"Smith chart, {ESTIMATE}"
    if not doubt:
        spoken = (
            f"Input impedance {impedance.real:.1f} {sign} j{abs(impedance.imag):.1f} Ω at {where}"
        )
    return SmithState(
        "Smith chart", doubt, is_stale, spoken, response.sweep.frequency, response.sweep.s11,
        complex(response.spot.s11), (brief.vswr - 1.0) / (brief.vswr + 1.0),
        engine=response.engine,
    )  # fmt: skip


def _pattern(response: Response, is_stale: bool) -> PatternState:
    doubt = _is_estimate(response, Reading.PATTERN)
    cuts = tuple(
        (name, cut.theta, cut.gain_dbi) for name, cut in zip(PLANES, response.cuts, strict=True)
    )
    beam = format_quantity(response.beamwidth, Quantity.ANGLE, digits=2)
    spoken = f"Pattern, {ESTIMATE}" if doubt else f"Pattern, half-power beam {beam} wide"
    return PatternState("Pattern", doubt, is_stale, spoken, cuts, engine=response.engine)


def _spoken(title: str, value: float, unit: str, frequency: float, doubt: bool) -> str:
    if doubt:
        return f"{title}: {ESTIMATE}"
    where = format_quantity(frequency, Quantity.FREQUENCY)
    return f"{title}: {value:.2f} {unit}".strip() + f" at {where}"
