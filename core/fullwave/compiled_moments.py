"""Compiled moments of a kernel with the halves on two triangles. The first import is slow.

With test points r and source points r' of the 3 x 3 rule, corners p and p', the moment of the
halves that leave from corners a and b is the mean of (r - p_a).(r' - p'_b) K. Each point is
two thirds of its own corner and a sixth of each other, so the mean splits into the nine
products p_c.p'_d and the kernel shared out to pairs of corners: an eighth of the work of the
plain sum. Corners are taken from the middle of the test triangle, to lose no digits.

Shapes: t triangles. Sources come in chunks, laid out in rows of fixed length: only so does the
compiler see that no two rows overlap, and make one vector loop of it all.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Kernel = tuple[Floats, Floats]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order
_CHUNK = 64  # sources
# Rows of a chunk: the kernel, products of corners, half lengths, charges, the moments.
_PRODUCTS, _LENGTHS, _CHARGES, _MOMENTS, _ROWS = 9, 18, 21, 22, 31


@njit(fastmath=_FAST, cache=True)
def half_moments(
    t: int,
    vector: Kernel,
    scalar: Kernel,
    charge: float,
    geometry: tuple[Floats, Floats, Floats],
    out: Kernel,
) -> None:
    """Moments of a kernel with the halves of triangle t and those from t on.

    Parameters
    ----------
    t : int
        Test triangle.
    vector, scalar : pair of (9, t) ndarray of float
        Kernel of currents and of charges at the pairs of points, real and imaginary.
    charge : float
        What the charges are multiplied by, m².
    geometry : tuple
        As `core.fullwave.compiled.add_free_space` takes it.
    out : pair of (3, 3, t) ndarray of float
        Written, real and imaginary.
    """
    _, corners, half_lengths = geometry
    count = half_lengths.shape[1]
    own = half_lengths[:, t] / 9.0
    rows = np.zeros((_ROWS, _CHUNK))
    for first in range(t, count, _CHUNK):
        last = min(count, first + _CHUNK)
        _lay_out(t, first, last, corners, half_lengths, rows)
        for part in range(2):
            currents, charges, moments = vector[part], scalar[part], out[part]
            total = rows[_CHARGES, : last - first]
            total[:] = 0.0
            for m in range(9):
                _copy(currents[m, first:last], rows[m])
                _add(4.0 * charge, charges[m, first:last], total)
            _combine(own[0], own[1], own[2], rows)
            for a in range(3):
                for b in range(3):
                    _copy(rows[_MOMENTS + 3 * a + b], moments[a, b, first:last])


@njit(cache=True)
def _copy(values: Floats, out: Floats) -> None:
    """Copy as many as both have."""
    for s in range(min(values.shape[0], out.shape[0])):
        out[s] = values[s]


@njit(fastmath=_FAST, cache=True)
def _add(weight: float, values: Floats, out: Floats) -> None:
    for s in range(out.shape[0]):
        out[s] += weight * values[s]


@njit(fastmath=_FAST, cache=True)
def _lay_out(
    t: int, first: int, last: int, corners: Floats, half_lengths: Floats, rows: Floats
) -> None:
    """Write products of corners and half lengths of a chunk of sources."""
    middle = np.empty(3)
    for axis in range(3):
        middle[axis] = (corners[axis, 0, t] + corners[axis, 1, t] + corners[axis, 2, t]) / 3.0
    for b in range(3):
        _copy(half_lengths[b, first:last], rows[_LENGTHS + b])
        for a in range(3):
            out = rows[_PRODUCTS + 3 * a + b, : last - first]
            out[:] = 0.0
            for axis in range(3):
                arm = corners[axis, a, t] - middle[axis]
                there = corners[axis, b, first:last]
                for s in range(out.shape[0]):
                    out[s] += arm * (there[s] - middle[axis])


@njit(inline="always", fastmath=_FAST)
def _combine(la: float, lb: float, lc: float, rows: Floats) -> None:
    """Moments of a chunk; la, lb, lc: a ninth of the half lengths of the test triangle."""
    for s in range(_CHUNK):
        k0, k1, k2 = rows[0, s], rows[1, s], rows[2, s]
        k3, k4, k5 = rows[3, s], rows[4, s], rows[5, s]
        k6, k7, k8 = rows[6, s], rows[7, s], rows[8, s]
        au, av, aw = rows[9, s], rows[10, s], rows[11, s]
        bu, bv, bw = rows[12, s], rows[13, s], rows[14, s]
        cu, cv, cw = rows[15, s], rows[16, s], rows[17, s]
        # To the corners of the source, then to those of both.
        i, j, k = (k0 + k1 + k2) / 6.0, (k3 + k4 + k5) / 6.0, (k6 + k7 + k8) / 6.0
        total = i + j + k
        k0, k1, k2 = 0.5 * k0 + i, 0.5 * k1 + i, 0.5 * k2 + i
        k3, k4, k5 = 0.5 * k3 + j, 0.5 * k4 + j, 0.5 * k5 + j
        k6, k7, k8 = 0.5 * k6 + k, 0.5 * k7 + k, 0.5 * k8 + k
        a, b, c = 3.0 * i + total, 3.0 * j + total, 3.0 * k + total
        u, v, w = k0 + k3 + k6, k1 + k4 + k7, k2 + k5 + k8
        i, j, k = u / 6.0, v / 6.0, w / 6.0
        whole = au * (0.5 * k0 + i) + av * (0.5 * k1 + j) + aw * (0.5 * k2 + k)
        whole += bu * (0.5 * k3 + i) + bv * (0.5 * k4 + j) + bw * (0.5 * k5 + k)
        whole += cu * (0.5 * k6 + i) + cv * (0.5 * k7 + j) + cw * (0.5 * k8 + k) + rows[21, s]
        total *= 6.0
        i = whole - au * u - av * v - aw * w
        j = whole - bu * u - bv * v - bw * w
        k = whole - cu * u - cv * v - cw * w
        u, v, w = au * a + bu * b + cu * c, av * a + bv * b + cv * c, aw * a + bw * b + cw * c
        lu, lv, lw = rows[18, s], rows[19, s], rows[20, s]
        rows[22, s] = la * lu * (i - u + au * total)
        rows[23, s] = la * lv * (i - v + av * total)
        rows[24, s] = la * lw * (i - w + aw * total)
        rows[25, s] = lb * lu * (j - u + bu * total)
        rows[26, s] = lb * lv * (j - v + bv * total)
        rows[27, s] = lb * lw * (j - w + bw * total)
        rows[28, s] = lc * lu * (k - u + cu * total)
        rows[29, s] = lc * lv * (k - v + cv * total)
        rows[30, s] = lc * lw * (k - w + cw * total)
