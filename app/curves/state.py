"""What the charts show, as plain values."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from numpy.typing import NDArray

ESTIMATE = "estimate, not to cut by"
OLD = "of the last layout that could be drawn"


@dataclass(frozen=True, eq=False)
class ChartState:
    """What every chart shows.

    Attributes
    ----------
    title : str
    is_estimate : bool
        The engine cannot vouch for it: dashed, labelled, and no values told.
    is_stale : bool
        It belongs to an older design: greyed.
    spoken : str
        The same in words.
    engine : str
        Its name in `core.engines`.
    beside : ChartState or None
        The same by the other engine, of the same kind.
    """

    title: str
    is_estimate: bool
    is_stale: bool
    spoken: str
    engine: str = field(default="", kw_only=True)
    beside: ChartState | None = field(default=None, kw_only=True)


@dataclass(frozen=True, eq=False)
class PlotState(ChartState):
    """A curve over frequency.

    Attributes
    ----------
    frequency, values : (n,) ndarray of float
        Hz, and the unit of the axis.
    low, high, step : float
        Of the axis.
    unit : str
    target : float or None
        Drawn across; the curve should be under it.
    brief : float
        The brief's frequency, Hz.
    """

    frequency: NDArray[Any]
    values: NDArray[Any]
    low: float
    high: float
    step: float
    unit: str
    target: float | None
    brief: float


@dataclass(frozen=True, eq=False)
class SmithState(ChartState):
    """Reflection over frequency in its plane.

    Attributes
    ----------
    frequency : (n,) ndarray of float
        Hz.
    s11 : (n,) ndarray of complex
    spot : complex
        At the brief's frequency.
    target : float
        Radius of the reflection that will do.
    """

    frequency: NDArray[Any]
    s11: NDArray[Any]
    spot: complex
    target: float


@dataclass(frozen=True, eq=False)
class PatternState(ChartState):
    """Cuts of the pattern.

    Attributes
    ----------
    cuts : tuple of (str, ndarray, ndarray)
        Name of the plane, angle from boresight (rad) and gain (dBi).
    """

    cuts: tuple[tuple[str, NDArray[Any], NDArray[Any]], ...]
