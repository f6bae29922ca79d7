"""Compiled filling of the moment matrix. The first import of this module is slow.

Halves of basis functions are numbered corner * triangles + triangle (`core.fullwave.basis`).
For one test triangle at a time: the kernel at 3 x 3 points against it and every later source
triangle, its moments with the 3 x 3 pairs of halves, the near terms, then the sums that make
rows of the matrix; its transpose is added at the end. Triangles of one colour share no edge,
so that threads that share out one colour never meet in a row.

Shapes: t triangles, n unknowns, p near pairs. Geometry is stored axis by axis, so that the
innermost loop, over source triangles, runs through neighbouring numbers.
"""

from __future__ import annotations

from math import pi
from typing import TYPE_CHECKING

import numpy as np
from numba import njit

from core.fullwave.compiled_moments import half_moments

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]
    Functions = tuple[Ints, Ints, Floats, Ints, Ints, Ints]
    Near = tuple[Ints, Ints, Floats, Complexes]
    Spacer = tuple[Ints, Complexes, Ints, Ints, Complexes, Floats, Floats]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order
_TILE = 32  # rows and columns of a tile: two fit the fastest cache


@njit(inline="always", fastmath=_FAST)
def sine_cosine(angle: float) -> tuple[float, float]:
    """Sine and cosine to 1e-11 without a branch: power series of half the reduced angle.

    Parameters
    ----------
    angle : float
        rad.

    Returns
    -------
    tuple of (float, float)
    """
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
def _free_space_row(t: int, k: float, points: Floats, real: Floats, imag: Floats) -> None:
    """exp(-jkR)/R between the points of triangle t and those from t on; -jk where R = 0."""
    for i in range(3):
        x, y, z = points[0, i, t], points[1, i, t], points[2, i, t]
        for j in range(3):
            px, py, pz = points[0, j][t:], points[1, j][t:], points[2, j][t:]
            re, im = real[3 * i + j][t:], imag[3 * i + j][t:]
            for s in range(re.shape[0]):
                dx, dy, dz = px[s] - x, py[s] - y, pz[s] - z
                r = np.sqrt(dx * dx + dy * dy + dz * dz)
                inverse = 1.0 / max(r, 1e-30)
                sine, cosine = sine_cosine(k * r)
                re[s] = cosine * inverse
                im[s] = -sine * inverse
        real[4 * i, t] = 0.0
        imag[4 * i, t] = -k


@njit(fastmath=_FAST, cache=True)
def _copy_scaled(by: complex, re: Floats, im: Floats, real: Floats, imag: Floats) -> None:
    for s in range(re.shape[0]):
        real[s] = by.real * re[s] - by.imag * im[s]
        imag[s] = by.real * im[s] + by.imag * re[s]


@njit(fastmath=_FAST, cache=True)
def _add_image(
    k: float,
    place: tuple[float, float, float],
    weight: complex,
    turn: float,
    shift: float,
    points: tuple[Floats, Floats, Floats],
    out: tuple[Floats, Floats],
) -> None:
    """Add weight exp(-jkR)/R from the images of points, at heights turn z + shift."""
    x, y, z = place
    px, py, pz = points
    real, imag = out
    for s in range(real.shape[0]):
        dx, dy, dz = px[s] - x, py[s] - y, turn * pz[s] + shift - z
        r = np.sqrt(dx * dx + dy * dy + dz * dz)
        inverse = 1.0 / max(r, 1e-30)
        sine, cosine = sine_cosine(k * r)
        real[s] += (weight.real * cosine + weight.imag * sine) * inverse
        imag[s] += (weight.imag * cosine - weight.real * sine) * inverse


@njit(fastmath=_FAST, cache=True)
def _scalar_row(
    t: int,
    k: float,
    points: Floats,
    spacer: Spacer,
    vector: tuple[Floats, Floats],
    scalar: tuple[Floats, Floats],
) -> None:
    """Kernel of charges: that of currents times its weight, and its images in the spacer."""
    runs, direct, starts, stops, weights, turns, shifts = spacer
    own = 0
    for run in range(runs.shape[0]):
        if runs[run, 0] <= t < runs[run, 1]:
            own = runs[run, 2]
    for run in range(runs.shape[0]):
        first, last, other = max(t, runs[run, 0]), runs[run, 1], runs[run, 2]
        if first >= last:
            continue
        for i in range(3):
            place = (points[0, i, t], points[1, i, t], points[2, i, t])
            for j in range(3):
                m = 3 * i + j
                re, im = scalar[0][m][first:last], scalar[1][m][first:last]
                _copy_scaled(
                    direct[own, other], vector[0][m][first:last], vector[1][m][first:last], re, im
                )
                there = (
                    points[0, j][first:last],
                    points[1, j][first:last],
                    points[2, j][first:last],
                )
                for n in range(starts[own, other], stops[own, other]):
                    _add_image(k, place, weights[n], turns[n], shifts[n], there, (re, im))


@njit(fastmath=_FAST, cache=True)
def _add_near(
    t: int, k_squared: float, near: Near, half_lengths: Floats, real: Floats, imag: Floats
) -> None:
    """Add what the points miss of 1/R and -k² R/2 near triangle t."""
    starts, sources, currents, charges = near
    for p in range(starts[t], starts[t + 1]):
        s = sources[p]
        charge = -4.0 / k_squared * (charges[p, 0] - 0.5 * k_squared * charges[p, 1])
        for a in range(3):
            for b in range(3):
                current = currents[p, 0, a, b] - 0.5 * k_squared * currents[p, 1, a, b]
                lengths = half_lengths[a, t] * half_lengths[b, s]
                real[a, b, s] += lengths * (current + charge.real)
                imag[a, b, s] += lengths * charge.imag


@njit(fastmath=_FAST, cache=True)
def settle_own(t: int, sheet: complex, overlaps: Floats, real: Floats, imag: Floats) -> None:
    """Add the voltage drop in the foil of triangle t; halve it all: the transpose follows.

    Parameters
    ----------
    t : int
    sheet : complex
        Impedance of the foil over what the sums are multiplied by, m.
    overlaps : (t, 3, 3) ndarray of float
        m².
    real, imag : (3, 3, t) ndarray of float
        Written to.
    """
    for a in range(3):
        for b in range(3):
            real[a, b, t] = 0.5 * (real[a, b, t] + sheet.real * overlaps[t, a, b])
            imag[a, b, t] = 0.5 * (imag[a, b, t] + sheet.imag * overlaps[t, a, b])


@njit(fastmath=_FAST, cache=True)
def add_rows(
    t: int,
    real: Floats,
    imag: Floats,
    factor: complex,
    functions: Functions,
    matrix: Complexes,
) -> None:
    """Add the halves of triangle t to the rows of the functions that they belong to.

    Parameters
    ----------
    t : int
    real, imag : (3, 3, t) ndarray of float
        Sums of its halves with all others.
    factor : complex
        What they are multiplied by.
    functions : tuple
        As `add_free_space` takes it.
    matrix : (n, n) ndarray of complex
        Written to.
    """
    starts, rows, signs, plus, minus, firsts = functions
    triangles = real.shape[2]
    for a in range(3):
        re, im = real[a].reshape(-1), imag[a].reshape(-1)
        half = a * triangles + t
        for place in range(starts[half], starts[half + 1]):
            row = matrix[rows[place]]
            scale = factor * signs[place]
            for m in range(firsts[t], plus.shape[0]):
                one, two = plus[m], minus[m]
                row[m] += scale * complex(re[one] - re[two], im[one] - im[two])


@njit(nogil=True, cache=True)
def add_transpose(matrix: Complexes, first: int, step: int) -> None:
    """Add its transpose to a matrix, for every `step`th row of tiles from the `first` on.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Written to.
    first, step : int
        Several calls with the same step and every first from 0 up to it do it all.
    """
    n = matrix.shape[0]
    for i in range(first, (n + _TILE - 1) // _TILE, step):
        for j in range(i + 1):
            for a in range(i * _TILE, min(n, (i + 1) * _TILE)):
                for b in range(j * _TILE, min(a + 1, (j + 1) * _TILE)):
                    total = matrix[a, b] + matrix[b, a]
                    matrix[a, b] = total
                    matrix[b, a] = total


@njit(nogil=True, fastmath=_FAST, cache=True)
def add_free_space(
    triangles: Ints,
    k: float,
    factor: complex,
    geometry: tuple[Floats, Floats, Floats],
    near: Near,
    spacer: Spacer,
    foil: tuple[Complexes, Floats],
    functions: Functions,
    matrix: Complexes,
) -> None:
    """Add the part of some triangles to the half-filled moment matrix in free space.

    Done for all triangles, the matrix and its transpose add up to the moment matrix.

    Parameters
    ----------
    triangles : (...,) ndarray of int
        Test triangles.
    k : float
        Wavenumber, 1/m.
    factor : complex
        What the sums are multiplied by: j omega mu / (4 pi), ohm/m.
    geometry : tuple
        Points (3 axes, 3 points, t), corners (3 axes, 3 corners, t) and half the length of
        the edge opposite each corner (3, t), m.
    near : tuple
        Where the sources of each triangle start (t + 1), the sources (p), none before its
        triangle, and the terms of `core.fullwave.compiled_near` in that order, those of the
        charges complex and with the spacer's images.
    spacer : tuple
        First and past last triangle and sheet of each run of triangles of one sheet (r, 3),
        then direct weights, starts, stops, weights at this wavenumber, turns and shifts as in
        `core.fullwave.spacer_images.SpacerImages`.
    foil : tuple
        Sheet impedance over `factor` (t,), m, and overlaps of the halves of each triangle
        (t, 3, 3), m².
    functions : tuple
        Where the functions of each half start (3 t + 1), those functions, their signs; the
        positive and the negative half of each function (n,); the first function that is on
        each triangle or a later one (t,).
    matrix : (n, n) ndarray of complex
        Written to, in the rows of the functions on `triangles` alone.
    """
    points, _, half_lengths = geometry
    sheets, overlaps = foil
    n = points.shape[2]
    charge = -1.0 / (k * k)
    real, imag = np.empty((9, n)), np.empty((9, n))
    real_out, imag_out = np.empty((3, 3, n)), np.empty((3, 3, n))
    scalar_real, scalar_imag = real, imag
    in_air = spacer[4].shape[0] == 0
    if not in_air:
        scalar_real, scalar_imag = np.empty((9, n)), np.empty((9, n))
    for t in triangles:
        real_out[:, :, :t] = 0.0
        imag_out[:, :, :t] = 0.0
        _free_space_row(t, k, points, real, imag)
        if not in_air:
            _scalar_row(t, k, points, spacer, (real, imag), (scalar_real, scalar_imag))
        vector, scalar = (real, imag), (scalar_real, scalar_imag)
        half_moments(t, vector, scalar, charge, geometry, (real_out, imag_out))
        _add_near(t, k * k, near, half_lengths, real_out, imag_out)
        settle_own(t, sheets[t], overlaps, real_out, imag_out)
        add_rows(t, real_out, imag_out, factor, functions, matrix)
