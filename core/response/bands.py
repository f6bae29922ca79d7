"""The frequencies asked for, and the band around one of them in which a limit is kept."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.errors import OutOfRangeError
from core.units import Quantity, check_quantity

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]

DEFAULT_POINTS: Final = 201
_DEFAULT_SPREAD: Final = 0.1  # either side of the brief's frequency
_MOST_POINTS: Final = 20_001
_WORST: Final = 1e6  # stands for an infinite value, so that an edge can be interpolated


@dataclass(frozen=True)
class Band:
    """An unbroken stretch of frequencies.

    Attributes
    ----------
    low, high : float
        Hz.
    open_low, open_high : bool
        Whether it runs to that end of what was computed, so that it may be wider.
    """

    low: float
    high: float
    open_low: bool
    open_high: bool

    @property
    def width(self) -> float:
        """Hz."""
        return self.high - self.low


def frequency_grid(
    frequency: float,
    start: float | None = None,
    stop: float | None = None,
    points: int = DEFAULT_POINTS,
) -> Floats:
    """Evenly spaced frequencies.

    Parameters
    ----------
    frequency : float
        The brief's, Hz; start and stop default to 10 % below and above it.
    start, stop : float, optional
        Hz, start < stop.
    points : int, optional
        2 to 20001.

    Returns
    -------
    (points,) ndarray of float
        Hz, rising.

    Raises
    ------
    OutOfRangeError
        If an argument leaves its range, or stop is not above start.
    """
    low = frequency * (1.0 - _DEFAULT_SPREAD) if start is None else start
    high = frequency * (1.0 + _DEFAULT_SPREAD) if stop is None else stop
    check_quantity(low, Quantity.FREQUENCY, field="from")
    check_quantity(high, Quantity.FREQUENCY, field="to")
    if not low < high:
        message = f"to: {high:g} Hz is not above the start; accepted: more than {low:g} Hz"
        raise OutOfRangeError(message, field="to", value=high, allowed=f"more than {low:g} Hz")
    if not 2 <= points <= _MOST_POINTS:
        allowed = f"2 to {_MOST_POINTS}"
        message = f"points: {points} is out of range; accepted: {allowed}"
        raise OutOfRangeError(message, field="points", value=points, allowed=allowed)
    return np.linspace(low, high, points)


def band_under(frequencies: Floats, values: Floats, frequency: float, limit: float) -> Band | None:
    """Find the band around a frequency in which a quantity stays at or under a limit.

    Parameters
    ----------
    frequencies : (n,) ndarray of float
        Hz, rising.
    values : (n,) ndarray of float
        The quantity; infinite values count as far over the limit, and so do unknown ones.
    frequency : float
        Hz.
    limit : float
        In the unit of the values.

    Returns
    -------
    Band or None
        Edges are interpolated between neighbouring points. None where the quantity is over the
        limit at the frequency, or the frequency is outside what was computed.
    """
    heights = np.fmin(values, _WORST) - limit  # what is unknown becomes the worst too
    here = float(np.interp(frequency, frequencies, heights))
    if here > 0.0 or not frequencies[0] <= frequency <= frequencies[-1]:
        return None
    below, above = frequencies < frequency, frequencies > frequency
    low = _crossing(frequency, here, frequencies[below][::-1], heights[below][::-1])
    high = _crossing(frequency, here, frequencies[above], heights[above])
    return Band(
        low=float(frequencies[0]) if low is None else low,
        high=float(frequencies[-1]) if high is None else high,
        open_low=low is None,
        open_high=high is None,
    )


def _crossing(start: float, height: float, frequencies: Floats, heights: Floats) -> float | None:
    """Where heights that start at or under zero first rise over it; None where they don't."""
    over = np.flatnonzero(heights > 0.0)
    if over.size == 0:
        return None
    last = int(over[0]) - 1
    before, under = (start, height) if last < 0 else (frequencies[last], heights[last])
    part = under / (under - heights[last + 1])
    return float(before + part * (frequencies[last + 1] - before))
