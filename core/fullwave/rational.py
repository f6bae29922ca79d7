"""Rational interpolation of what a few solved frequencies say, after Nakatsukasa and others.

Shapes: k sampled frequencies, m support points, c quantities, n frequencies.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.linalg import eig

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_EXACT = 1e-13  # relative; a fit this close to its samples needs no more support points


@dataclass(frozen=True, eq=False)
class Rational:
    """Rational function of frequency with several values that share their poles.

    Attributes
    ----------
    support : (m,) ndarray of float
        Frequencies that are met exactly, Hz.
    weights : (m,) ndarray of complex
        Barycentric weights.
    values : (m, c) ndarray of complex
        Values at the support points.
    """

    support: Floats
    weights: Complexes
    values: Complexes

    def at(self, frequencies: Floats) -> Complexes:
        """Values at (n,) frequencies (Hz), shape (n, c)."""
        gaps = frequencies[:, None] - self.support[None, :]
        hits = gaps == 0.0
        with np.errstate(divide="ignore", invalid="ignore"):
            terms = self.weights[None, :] / gaps
            result = (terms @ self.values) / np.sum(terms, axis=1)[:, None]
        rows, columns = np.nonzero(hits)
        result[rows] = self.values[columns]
        return np.asarray(result)

    def poles(self) -> Complexes:
        """Poles, complex Hz, rising in their real part; those at infinity left out."""
        m = len(self.support)
        if m < 2:
            return np.empty(0, dtype=np.complex128)
        scale = float(np.mean(self.support))
        pencil = np.zeros((m + 1, m + 1), dtype=np.complex128)
        pencil[0, 1:] = self.weights
        pencil[1:, 0] = 1.0
        pencil[1:, 1:] = np.diag(self.support / scale)
        mass = np.eye(m + 1, dtype=np.complex128)
        mass[0, 0] = 0.0
        found = eig(pencil, mass, right=False)
        finite = found[np.isfinite(found) & (np.abs(found) < 1e6)] * scale
        return np.asarray(finite[np.argsort(finite.real)])


def fit_rational(frequencies: Floats, samples: Complexes, most_support: int) -> Rational:
    """Rational function through samples, support points chosen greedily.

    Parameters
    ----------
    frequencies : (k,) ndarray of float
        Hz, all different, k >= 2.
    samples : (k, c) ndarray of complex
        Each quantity counts alike, whatever its size.
    most_support : int
        Largest number of support points, >= 1; k is the other limit.

    Returns
    -------
    Rational

    Notes
    -----
    The AAA algorithm [1]_ for several functions with common weights: at each step the sample
    with the largest error joins the support points, and the weights are the least right
    singular vector of the Loewner matrix of the others, all quantities stacked.

    References
    ----------
    .. [1] Y. Nakatsukasa, O. Sète and L. N. Trefethen, "The AAA algorithm for rational
       approximation", SIAM J. Sci. Comput., vol. 40, pp. A1494-A1522, 2018.
    """
    sizes = np.linalg.norm(samples, axis=0)
    scaled = samples / np.where(sizes > 0.0, sizes, 1.0)
    count = len(frequencies)
    chosen: list[int] = []
    error = scaled - np.mean(scaled, axis=0)
    fit = Rational(frequencies[:1], np.ones(1, dtype=np.complex128), samples[:1])
    for _ in range(min(most_support, count)):
        spread = np.linalg.norm(error, axis=1)
        spread[chosen] = -1.0
        chosen.append(int(np.argmax(spread)))
        rest = [i for i in range(count) if i not in chosen]
        weights = _weights(frequencies, scaled, chosen, rest)
        fit = Rational(frequencies[chosen], weights, samples[chosen])
        if not rest:
            break
        error = np.zeros_like(scaled)
        error[rest] = (
            Rational(frequencies[chosen], weights, scaled[chosen]).at(frequencies[rest])
            - scaled[rest]
        )
        if np.max(np.abs(error)) < _EXACT:
            break
    return fit


def _weights(
    frequencies: Floats, scaled: Complexes, chosen: list[int], rest: list[int]
) -> Complexes:
    """Weights that make the fit miss the other samples least."""
    if len(chosen) == 1 or not rest:
        return _interpolating_weights(frequencies[chosen])
    gaps = frequencies[rest][:, None] - frequencies[chosen][None, :]
    unit = float(np.max(np.abs(gaps)))
    blocks = [
        (scaled[rest, i][:, None] - scaled[chosen, i][None, :]) * unit / gaps
        for i in range(scaled.shape[1])
    ]
    return np.asarray(np.conj(np.linalg.svd(np.vstack(blocks))[2][-1]))


def _interpolating_weights(support: Floats) -> Complexes:
    """Weights of the polynomial through the support points."""
    scale = float(np.ptp(support)) or 1.0
    gaps = (support[:, None] - support[None, :]) / scale + np.eye(len(support))
    return np.asarray(1.0 / np.prod(gaps, axis=1), dtype=np.complex128)
