"""Compiled filling of the moment matrix on a layered stack. The first import is slow.

As `core.fullwave.compiled`, whose sums it shares, with kernels read from tables: copper lies
in one plane, so a kernel is a function of distance alone.

Shapes: t triangles, n unknowns, p near pairs, u steps of a table.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

from core.fullwave.compiled import add_rows, settle_own
from core.fullwave.compiled_moments import half_moments

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order


@njit(fastmath=_FAST, cache=True)
def _kernel_row(
    t: int, table: Floats, per_step: float, source: complex, points: Floats, out: Floats
) -> None:
    """Kernels (4, 9, t) between the points of triangle t and those from t on.

    Vector and scalar kernel, real and imaginary part of each: a cubic per step of the table,
    and 1/R of the source itself, nothing where R = 0.
    """
    for i in range(3):
        x, y = points[0, i, t], points[1, i, t]
        for j in range(3):
            px, py = points[0, j], points[1, j]
            a, b, c, d = out[0, 3 * i + j], out[1, 3 * i + j], out[2, 3 * i + j], out[3, 3 * i + j]
            for s in range(t, px.shape[0]):
                dx, dy = px[s] - x, py[s] - y
                r = np.sqrt(dx * dx + dy * dy)
                inverse = 1.0 / max(r, 1e-30)
                at = r * per_step
                step = int(at)
                u = at - step
                row = table[step]
                a[s] = ((row[12] * u + row[8]) * u + row[4]) * u + row[0] + inverse
                b[s] = ((row[13] * u + row[9]) * u + row[5]) * u + row[1]
                c[s] = ((row[14] * u + row[10]) * u + row[6]) * u + row[2] + source.real * inverse
                d[s] = ((row[15] * u + row[11]) * u + row[7]) * u + row[3] + source.imag * inverse
        for part in range(4):
            out[part, 4 * i, t] = table[0, part]


@njit(fastmath=_FAST, cache=True)
def _add_near(
    t: int,
    charge: float,
    kinks: tuple[float, float],
    near: tuple[Ints, Ints, Floats, Floats, Floats, Floats],
    part: int,
    half_lengths: Floats,
    out: Floats,
) -> None:
    """Add what the points miss near triangle t, of the real (0) or the imaginary part (1)."""
    starts, sources, currents, current_slopes, charges, charge_slopes = near
    for p in range(starts[t], starts[t + 1]):
        s = sources[p]
        pulled = 4.0 * charge * (charges[p, part] + kinks[1] * charge_slopes[p])
        for a in range(3):
            for b in range(3):
                current = kinks[0] * current_slopes[p, a, b]
                if part == 0:
                    current += currents[p, a, b]
                out[a, b, s] += half_lengths[a, t] * half_lengths[b, s] * (current + pulled)


@njit(nogil=True, fastmath=_FAST, cache=True)
def add_layered(
    triangles: Ints,
    k: float,
    factor: complex,
    kernels: tuple[Floats, float, complex, complex, complex],
    geometry: tuple[Floats, Floats, Floats],
    near: tuple[Ints, Ints, Floats, Floats, Floats, Floats],
    foil: tuple[Complexes, Floats],
    functions: tuple[Ints, Ints, Floats, Ints, Ints, Ints],
    matrix: Complexes,
) -> None:
    """Add the part of some triangles to the half-filled moment matrix on a layered stack.

    Done for all triangles, the matrix and its transpose add up to the moment matrix but for
    what vertical currents do.

    Parameters
    ----------
    triangles : (...,) ndarray of int
        Test triangles.
    k : float
        Wavenumber of free space, 1/m.
    factor : complex
        What the sums are multiplied by: j omega mu / (4 pi), ohm/m.
    kernels : tuple
        Times 4 pi: coefficients (u, 16) of cubics over each step of the tables, by rising
        power, for the real and imaginary parts of the vector and of the scalar kernel, less
        their sources; steps to the metre; weight of the charge's 1/R; slopes of the vector
        and of the scalar table at the source, 1/m².
    geometry, foil, functions : tuple
        As `core.fullwave.compiled.add_free_space` takes them.
    near : tuple
        Where the sources of each triangle start (t + 1), the sources (p), none before its
        triangle; what the points miss: of the static current terms and of R (p, 3, 3), of
        the static charge terms, real and imaginary (p, 2), and of R (p,).
    matrix : (n, n) ndarray of complex
        Written to, in the rows of the functions on `triangles` alone.
    """
    table, per_step, source, vector_kink, scalar_kink = kernels
    points, _, half_lengths = geometry
    sheets, overlaps = foil
    n = points.shape[2]
    charge = -1.0 / (k * k)
    kernel = np.empty((4, 9, n))
    real, imag = np.empty((3, 3, n)), np.empty((3, 3, n))
    for t in triangles:
        real[:, :, :t] = 0.0
        imag[:, :, :t] = 0.0
        _kernel_row(t, table, per_step, source, points, kernel)
        vector, scalar = (kernel[0], kernel[1]), (kernel[2], kernel[3])
        half_moments(t, vector, scalar, charge, geometry, (real, imag))
        slopes = (vector_kink.real, scalar_kink.real)
        _add_near(t, charge, slopes, near, 0, half_lengths, real)
        slopes = (vector_kink.imag, scalar_kink.imag)
        _add_near(t, charge, slopes, near, 1, half_lengths, imag)
        settle_own(t, sheets[t], overlaps, real, imag)
        add_rows(t, real, imag, factor, functions, matrix)
