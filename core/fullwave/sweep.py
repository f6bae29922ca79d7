"""Few solved frequencies for a whole band: chosen one by one, joined by a rational function.

Shapes: k solved frequencies, c quantities.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.errors import ConvergenceError
from core.fullwave.rational import Rational, fit_rational

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from core.progress import Progress

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

FIRST_POINTS = 5
MOST_POINTS = 15
_PROBES = 129  # frequencies at which two fits are compared
_UNSEEN = 1.0  # half widths of a resonance within which a solved frequency has seen it


@dataclass(frozen=True, eq=False)
class Sweep:
    """Quantities over a band, from k solved frequencies.

    Attributes
    ----------
    frequencies : (k,) ndarray of float
        Solved ones, Hz, rising.
    values : (k, c) ndarray of complex
        Solved quantities.
    fit : Rational
        Through them all.
    error : float
        How far the last solved frequency lay from what the fit before had said of it, in the
        measure that the caller gave.
    """

    frequencies: Floats
    values: Complexes
    fit: Rational
    error: float


def adaptive_sweep(
    solve: Callable[[float], Complexes],
    band: tuple[float, float],
    wanted: float,
    distance: Callable[[Complexes, Complexes], Floats],
    tolerance: float,
    progress: Progress,
) -> Sweep:
    """Solve at as few frequencies of a band as it takes.

    Parameters
    ----------
    solve : callable
        From a frequency (Hz) to (c,) quantities that are analytic in it.
    band : tuple of float
        Lowest and highest frequency, Hz.
    wanted : float
        A frequency in the band that is solved in any case, Hz.
    distance : callable
        From two (n, c) sets of quantities to (n,) how far apart they are.
    tolerance : float
        Distance that will do.
    progress : Progress
        Told after each solved frequency; may cancel.

    Returns
    -------
    Sweep

    Raises
    ------
    ConvergenceError
        If the fit has not settled after 15 frequencies.
    Cancelled
        If the progress asks for it.

    Notes
    -----
    Chebyshev points first; then, each time, the frequency at which the fit and one with a
    support point less differ most. What the fit says there before it is solved is tested
    against the solution: an honest error, not a difference of two fits. A narrow resonance
    may hide between: where the fit has one that no solved frequency is near, it is tested too.
    """
    low, high = band
    frequencies = list(first_points(band, wanted, FIRST_POINTS))
    values: list[Complexes] = []
    for done, frequency in enumerate(frequencies):
        progress.step(done, FIRST_POINTS + 2)
        values.append(solve(frequency))
    probes = np.linspace(low, high, _PROBES)
    error = np.inf
    while len(frequencies) < MOST_POINTS:
        fit, coarse = _two_fits(np.array(frequencies), np.array(values))
        if error < tolerance:
            hidden = _hidden(fit, band, frequencies)
            if hidden is None:
                break
            place = hidden
        else:
            apart = distance(fit.at(probes), coarse.at(probes))
            place = float(probes[_worst(apart, probes, frequencies)])
        progress.step(len(frequencies), len(frequencies) + 2)
        solved = solve(place)
        told = fit.at(np.array([place]))
        error = float(distance(told, solved[None, :])[0])
        frequencies.append(place)
        values.append(solved)
    if error >= tolerance:
        raise ConvergenceError(
            f"field solver: the sweep has not settled after {MOST_POINTS} frequencies, "
            f"{error:.2g} off; accepted: a narrower band",
            residual=error,
            iterations=MOST_POINTS,
        )
    order = np.argsort(frequencies)
    solved_at, solved_values = np.array(frequencies)[order], np.array(values)[order]
    return Sweep(solved_at, solved_values, _two_fits(solved_at, solved_values)[0], error)


def first_points(band: tuple[float, float], wanted: float, count: int) -> Floats:
    """Chebyshev points of a band, the nearest of them moved to a wanted frequency.

    Parameters
    ----------
    band : tuple of float
        Lowest and highest frequency, Hz.
    wanted : float
        In the band, Hz.
    count : int

    Returns
    -------
    (count,) ndarray of float
        Hz, rising.
    """
    low, high = band
    angles = np.pi * (2 * np.arange(count) + 1) / (2 * count)
    points = (low + high) / 2 - (high - low) / 2 * np.cos(angles)
    points[np.argmin(np.abs(points - wanted))] = wanted
    return np.asarray(np.sort(points))


def _hidden(fit: Rational, band: tuple[float, float], frequencies: list[float]) -> float | None:
    """Narrowest resonance of a fit in its band that no solved frequency is near, Hz."""
    poles = fit.poles()
    gaps = np.abs(poles.real[:, None] - np.array(frequencies)).min(axis=1, initial=np.inf)
    inside = (band[0] < poles.real) & (poles.real < band[1])
    unseen = poles[inside & (gaps > _UNSEEN * np.abs(poles.imag))]
    return float(unseen[np.argmin(np.abs(unseen.imag))].real) if len(unseen) else None


def _two_fits(frequencies: Floats, values: Complexes) -> tuple[Rational, Rational]:
    """Fit with as many support points as the samples determine, and one with one less."""
    count, quantities = values.shape
    most = (count * quantities + 1) // (quantities + 1)
    return (
        fit_rational(frequencies, values, most),
        fit_rational(frequencies, values, max(most - 1, 1)),
    )


def _worst(apart: Floats, probes: Floats, frequencies: list[float]) -> int:
    """Probe where the fits differ most, not too close to a solved frequency."""
    nearest = np.min(np.abs(probes[:, None] - np.array(frequencies)[None, :]), axis=1)
    spacing = (probes[-1] - probes[0]) / (4 * len(frequencies))
    return int(np.argmax(np.where(nearest > spacing, apart, -1.0)))
