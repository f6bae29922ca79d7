"""Compiled filling of the moment matrix. The first import of this module is slow.

Halves of basis functions are numbered corner * triangles + triangle (`core.fullwave.basis`).
For one test triangle at a time: the kernel at 3 x 3 points against every source triangle,
its moments with the 3 x 3 pairs of halves, the near terms, then the sums that make rows of
the matrix. Triangles of one colour share no edge, so that threads never meet in a row.

Shapes: t triangles, n unknowns, p near pairs. Geometry is stored axis by axis, so that the
innermost loop, over source triangles, runs through neighbouring numbers.
"""

from __future__ import annotations

from math import pi
from typing import TYPE_CHECKING

import numpy as np
from numba import njit, prange

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order
_BLOCK = 8  # triangles to a task


@njit(inline="always", fastmath=_FAST)
def _sine_cosine(angle: float) -> tuple[float, float]:
    """Sine and cosine to 1e-11 without a branch: power series of half the reduced angle."""
    half = (angle - 2.0 * pi * np.floor(angle * (0.5 / pi) + 0.5)) * 0.5
    x = half * half
    s = -1.0 / 1307674368000.0
    s = s * x + 1.0 / 6227020800.0
    s = s * x - 1.0 / 39916800.0
    s = s * x + 1.0 / 362880.0
    s = s * x - 1.0 / 5040.0
    s = s * x + 1.0 / 120.0
    s = s * x - 1.0 / 6.0
    s = (s * x + 1.0) * half
    c = 1.0 / 20922789888000.0
    c = c * x - 1.0 / 87178291200.0
    c = c * x + 1.0 / 479001600.0
    c = c * x - 1.0 / 3628800.0
    c = c * x + 1.0 / 40320.0
    c = c * x - 1.0 / 720.0
    c = c * x + 1.0 / 24.0
    c = c * x - 0.5
    c = c * x + 1.0
    return 2.0 * s * c, 1.0 - 2.0 * s * s


@njit(fastmath=_FAST, cache=True)
def _free_space_row(k: float, points: Floats, t: int, real: Floats, imag: Floats) -> None:
    """exp(-jkR)/R between the points of triangle t and of all; its finite part -jk at R = 0."""
    for i in range(3):
        x, y, z = points[0, i, t], points[1, i, t], points[2, i, t]
        for j in range(3):
            px, py, pz = points[0, j], points[1, j], points[2, j]
            re, im = real[3 * i + j], imag[3 * i + j]
            for s in range(points.shape[2]):
                dx, dy, dz = px[s] - x, py[s] - y, pz[s] - z
                r = np.sqrt(dx * dx + dy * dy + dz * dz)
                inverse = 1.0 / max(r, 1e-30)
                sine, cosine = _sine_cosine(k * r)
                re[s] = cosine * inverse
                im[s] = -sine * inverse
        re, im = real[3 * i + i], imag[3 * i + i]
        re[t] = 0.0
        im[t] = -k


@njit(fastmath=_FAST, cache=True)
def _add(weight: float, one: Floats, out: Floats) -> None:
    for s in range(out.shape[0]):
        out[s] += weight * one[s]


@njit(fastmath=_FAST, cache=True)
def _add_sum(weight: float, three: Floats, out: Floats) -> None:
    a, b, c = three[0], three[1], three[2]
    for s in range(out.shape[0]):
        out[s] += weight * (a[s] + b[s] + c[s])


@njit(fastmath=_FAST, cache=True)
def _weigh(kernel: Floats, places: Floats, origin: float, out: Floats) -> None:
    """Sum a kernel (3, t) over source points, each times one coordinate (3, t) less the origin."""
    g0, g1, g2 = kernel[0], kernel[1], kernel[2]
    x0, x1, x2 = places[0], places[1], places[2]
    for s in range(out.shape[0]):
        out[s] = g0[s] * (x0[s] - origin) + g1[s] * (x1[s] - origin) + g2[s] * (x2[s] - origin)


@njit(fastmath=_FAST, cache=True)
def _project(
    both: Floats, test: Floats, places: Floats, origin: Floats, lengths: Floats, out: Floats
) -> None:
    """Moment with the source halves that leave from `places` (3, t)."""
    x, y, z = places[0], places[1], places[2]
    tx, ty, tz = test[0], test[1], test[2]
    ox, oy, oz = origin[0], origin[1], origin[2]
    for s in range(out.shape[0]):
        current = both[s] - (x[s] - ox) * tx[s] - (y[s] - oy) * ty[s] - (z[s] - oz) * tz[s]
        out[s] = lengths[s] * current


@njit(fastmath=_FAST, cache=True)
def _half_moments(
    vector: Floats,
    scalar: Floats,
    charge: float,
    t: int,
    points: Floats,
    corners: Floats,
    half_lengths: Floats,
    work: Floats,
    out: Floats,
) -> None:
    """Moments of a kernel (9, t) with the halves of t and all other halves: out (3, 3 t).

    `vector` weighs currents; `scalar` weighs charges, times `charge`. The sum over points of
    (r - p).(r' - p') splits into the kernel's moments 1, r, r' and r.r', taken about the
    middle of the test triangle to lose no digits. Each loop has few arrays, or the
    compiler makes no vector loop of it.
    """
    n = points.shape[2]
    source, test, from_corner = work[0:3], work[3:6], work[6:9]
    both, none, charges, inner, mine = work[9], work[10], work[11], work[12], work[13]
    work[:12] = 0.0
    middle = np.empty(3)
    for axis in range(3):
        middle[axis] = (corners[axis, 0, t] + corners[axis, 1, t] + corners[axis, 2, t]) / 3.0
    for i in range(3):
        kernel = vector[3 * i : 3 * i + 3]
        inner[:] = 0.0
        _add_sum(1.0, kernel, inner)
        _add(1.0, inner, none)
        _add_sum(4.0 * charge, scalar[3 * i : 3 * i + 3], charges)
        for axis in range(3):
            place = points[axis, i, t] - middle[axis]
            _add(place, inner, test[axis])
            _weigh(kernel, points[axis], middle[axis], mine)
            _add(1.0, mine, source[axis])
            _add(place, mine, both)
    _add(1.0, charges, both)
    for a in range(3):
        mine[:] = both
        for axis in range(3):
            place = corners[axis, a, t] - middle[axis]
            _add(-place, source[axis], mine)
            from_corner[axis] = test[axis]
            _add(-place, none, from_corner[axis])
        from_corner *= half_lengths[a, t] / 9.0
        mine *= half_lengths[a, t] / 9.0
        for b in range(3):
            _project(
                mine,
                from_corner,
                corners[:, b],
                middle,
                half_lengths[b],
                out[a, b * n : (b + 1) * n],
            )


@njit(fastmath=_FAST, cache=True)
def _add_near(
    t: int,
    k_squared: float,
    starts: Ints,
    sources: Ints,
    currents: Floats,
    charges: Floats,
    half_lengths: Floats,
    out: Floats,
) -> None:
    """Add what the points miss of 1/R and -k² R/2 near triangle t; real, so to `out` alone."""
    n = half_lengths.shape[1]
    for p in range(starts[t], starts[t + 1]):
        s = sources[p]
        charge = -4.0 / k_squared * (charges[p, 0] - 0.5 * k_squared * charges[p, 1])
        for a in range(3):
            for b in range(3):
                current = currents[p, 0, a, b] - 0.5 * k_squared * currents[p, 1, a, b]
                out[a, b * n + s] += half_lengths[a, t] * half_lengths[b, s] * (current + charge)


@njit(fastmath=_FAST, cache=True)
def _add_foil(t: int, sheet: complex, overlaps: Floats, real: Floats, imag: Floats) -> None:
    """Add the voltage drop of the current of triangle t in its own foil."""
    n = real.shape[1] // 3
    for a in range(3):
        for b in range(3):
            real[a, b * n + t] += sheet.real * overlaps[t, a, b]
            imag[a, b * n + t] += sheet.imag * overlaps[t, a, b]


@njit(fastmath=_FAST, cache=True)
def _add_rows(
    t: int,
    real: Floats,
    imag: Floats,
    factor: complex,
    row_starts: Ints,
    rows: Ints,
    signs: Floats,
    plus: Ints,
    minus: Ints,
    matrix: Complexes,
) -> None:
    """Add the halves of triangle t to the rows of the functions that they belong to."""
    n = plus.shape[0]
    triangles = real.shape[1] // 3
    for a in range(3):
        half = a * triangles + t
        for place in range(row_starts[half], row_starts[half + 1]):
            row = matrix[rows[place]]
            scale = factor * signs[place]
            re, im = real[a], imag[a]
            for m in range(n):
                row[m] += scale * complex(re[plus[m]] - re[minus[m]], im[plus[m]] - im[minus[m]])


@njit(parallel=True, fastmath=_FAST, cache=True)
def fill_free_space(
    k: float,
    factor: complex,
    geometry: tuple[Floats, Floats, Floats],
    near: tuple[Ints, Ints, Floats, Floats],
    foil: tuple[Complexes, Floats],
    functions: tuple[Ints, Ints, Floats, Ints, Ints],
    colours: tuple[Ints, Ints],
    matrix: Complexes,
) -> None:
    """Fill the moment matrix (n, n) of conductors in free space.

    Parameters
    ----------
    k : float
        Wavenumber, 1/m.
    factor : complex
        What the sums are multiplied by: j omega mu / (4 pi), ohm.
    geometry : tuple
        Points (3 axes, 3 points, t), corners (3 axes, 3 corners, t) and half the length of
        the edge opposite each corner (3, t), m.
    near : tuple
        Where the sources of each triangle start (t + 1), the sources (p), and the terms of
        `core.fullwave.compiled_near` in that order.
    foil : tuple
        Sheet impedance over `factor` (t,) and overlaps of the halves of each triangle
        (t, 3, 3).
    functions : tuple
        Where the functions of each half start (3 t + 1), those functions, their signs; the
        positive and the negative half of each function (n,).
    colours : tuple
        Where each colour starts, and the triangles colour by colour (t,).
    matrix : (n, n) ndarray of complex
        Written to.
    """
    points, corners, half_lengths = geometry
    starts, sources, currents, charges = near
    sheets, overlaps = foil
    row_starts, rows, signs, plus, minus = functions
    colour_starts, order = colours
    n = points.shape[2]
    matrix[:] = 0.0
    for colour in range(colour_starts.shape[0] - 1):
        first, last = colour_starts[colour], colour_starts[colour + 1]
        for block in prange((last - first + _BLOCK - 1) // _BLOCK):
            real, imag = np.empty((9, n)), np.empty((9, n))
            real_out, imag_out = np.empty((3, 3 * n)), np.empty((3, 3 * n))
            work = np.empty((14, n))
            for place in range(first + block * _BLOCK, min(last, first + (block + 1) * _BLOCK)):
                t = order[place]
                _free_space_row(k, points, t, real, imag)
                charge = -1.0 / (k * k)
                _half_moments(real, real, charge, t, points, corners, half_lengths, work, real_out)
                _half_moments(imag, imag, charge, t, points, corners, half_lengths, work, imag_out)
                _add_near(t, k * k, starts, sources, currents, charges, half_lengths, real_out)
                _add_foil(t, sheets[t], overlaps, real_out, imag_out)
                _add_rows(
                    t, real_out, imag_out, factor, row_starts, rows, signs, plus, minus, matrix
                )
