"""Compiled sums of currents with the phase of plane waves. The first import is slow."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

from core.fullwave.compiled import sine_cosine

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order


@njit(fastmath=_FAST, cache=True)
def _phases(way: Floats, points: Floats, cosines: Floats, sines: Floats) -> None:
    """Write cosine and sine of the product of a wave vector with points (axis by axis)."""
    cosines[:] = 0.0
    for axis in range(way.shape[0]):
        along = points[axis]
        for q in range(cosines.shape[0]):
            cosines[q] += way[axis] * along[q]
    for q in range(cosines.shape[0]):
        sines[q], cosines[q] = sine_cosine(cosines[q])


@njit(nogil=True, fastmath=_FAST, cache=True)
def sum_waves(ways: Floats, points: Floats, real: Floats, imag: Floats, out: Complexes) -> None:
    """Sum moments at points times exp(j k . r) for several wave vectors.

    Parameters
    ----------
    ways : (d, a) ndarray of float
        Wave vectors, 1/m.
    points : (a, q) ndarray of float
        m.
    real, imag : (c, q) ndarray of float
        Moments by component.
    out : (d, c) ndarray of complex
        Written.
    """
    count = points.shape[1]
    cosines, sines = np.empty(count), np.empty(count)
    for d in range(ways.shape[0]):
        _phases(ways[d], points, cosines, sines)
        for c in range(real.shape[0]):
            re, im = real[c], imag[c]
            total, turned = 0.0, 0.0
            for q in range(count):
                total += cosines[q] * re[q] - sines[q] * im[q]
                turned += cosines[q] * im[q] + sines[q] * re[q]
            out[d, c] = complex(total, turned)
