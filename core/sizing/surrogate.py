"""A cheap stand-in for solved residuals, through everything solved so far.

Shapes: n freedoms, k solved designs, m residuals.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]

Model = Callable[["Floats"], tuple["Floats", "Floats"]]
"""From turns (n,) to residuals (m,) and their slopes (m, n)."""

_NOISE = 0.05  # residuals of two meshes of nearly the same shape differ by about this
_BEND, _TREND = 4.0, 2.0  # size of what is not linear, and slope, over one step
_DIFFERENCE = 0.02  # steps over which slopes of a smooth model are taken


@dataclass(frozen=True, eq=False)
class Surrogate:
    """A coarser model and what it lacks, as a Gaussian process through the differences.

    Attributes
    ----------
    base : Model
        The coarser model.
    places : (k, n) ndarray of float
        Solved designs, in steps.
    weights : (k, m) ndarray of float
    steps : (n,) ndarray of float
        Turns over which differences stay about linear.
    trust : float
        Size of the differences to be expected, 1 for a base of no worth.
    """

    base: Model
    places: Floats
    weights: Floats
    steps: Floats
    trust: float

    def __call__(self, turns: Floats) -> tuple[Floats, Floats]:
        """Residuals and their slopes at a point."""
        value, slope = self.base(turns)
        place = turns / self.steps
        kernel = _kernel(place[None], self.places, self.trust)[0]
        apart = place - self.places
        bend = (_BEND * self.trust) ** 2 * np.exp(-np.sum(apart**2, axis=1) / 2.0)
        trend = (_TREND * self.trust) ** 2 * (self.places - self.places[0])
        rate = trend - bend[:, None] * apart
        return value + kernel @ self.weights, slope + self.weights.T @ rate / self.steps


def fitted(base: Model, turns: Floats, solved: Floats, steps: Floats, trust: float) -> Surrogate:
    """Stand-in that goes through solved residuals, but for the noise of meshes.

    Parameters
    ----------
    base : Model
    turns : (k, n) ndarray of float
    solved : (k, m) ndarray of float
        Residuals.
    steps : (n,) ndarray of float
    trust : float
        Size of the differences to be expected, 1 for a base of no worth.

    Returns
    -------
    Surrogate

    Notes
    -----
    A coarse model corrected to agree with a fine one where that is known is space mapping
    [1]_; the correction is the mean of a Gaussian process with a linear and a squared
    exponential covariance [2]_.

    References
    ----------
    .. [1] J. W. Bandler, R. M. Biernacki, S. H. Chen, P. A. Grobelny, R. H. Hemmers, "Space
       mapping technique for electromagnetic optimization", IEEE Trans. Microw. Theory Techn.
       42, 1994, 2536-2544.
    .. [2] C. E. Rasmussen, C. K. I. Williams, *Gaussian Processes for Machine Learning*, MIT
       Press, 2006, eq. 2.25 and sec. 4.2 (from memory).
    """
    places = turns / steps
    missing = solved - np.array([base(one)[0] for one in turns])
    covariance = _kernel(places, places, trust) + _NOISE**2 * np.eye(len(turns))
    return Surrogate(base, places, np.linalg.solve(covariance, missing), steps, trust)


def nothing(residuals: int, freedoms: int) -> Model:
    """Model that knows nothing: no residuals, no slopes.

    Parameters
    ----------
    residuals, freedoms : int

    Returns
    -------
    Model
    """
    zero = np.zeros(residuals), np.zeros((residuals, freedoms))
    return lambda _: zero


def linearised(function: Callable[[Floats], Floats], turns: Floats, steps: Floats) -> Model:
    """Model that is straight round a point, by differences.

    Parameters
    ----------
    function : callable
        From turns (n,) to residuals (m,).
    turns : (n,) ndarray of float
    steps : (n,) ndarray of float
        Differences are taken over a small part of these.

    Returns
    -------
    Model
    """
    value = function(turns)
    ways = np.diag(_DIFFERENCE * steps)
    slope = np.array([function(turns + way) - value for way in ways]).T / (_DIFFERENCE * steps)
    return lambda at: (value + slope @ (at - turns), slope)


def _kernel(one: Floats, other: Floats, trust: float) -> Floats:
    """Covariance of differences at some places with those at others."""
    distance = np.sum((one[:, None] - other[None]) ** 2, axis=2)
    trend = (one - other[0]) @ (other - other[0]).T
    size = _BEND**2 * (np.exp(-distance / 2.0) + 1.0) + _TREND**2 * trend
    return np.asarray(trust**2 * size)
