"""Compiled elimination in a symmetric matrix, tile by tile. The first import is slow.

Tiles are square, real and imaginary parts apart; those on the diagonal and below it come from
the matrix, the last are filled up with the unit matrix.

Shapes: n unknowns, m tiles to a side, b rows of a tile (even), r right-hand sides.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order


@njit(nogil=True, cache=True)
def cut_tiles(matrix: Complexes, tiles: Floats, first: int, step: int) -> None:
    """Copy every `step`th row of tiles from the `first` on.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Symmetric.
    tiles : (m, m, 2, b, b) ndarray of float
        Written to, on the diagonal and below it.
    first, step : int
        Several calls with the same step and every first from 0 up to it do it all.
    """
    n, side = matrix.shape[0], tiles.shape[3]
    for i in range(first, tiles.shape[0], step):
        for j in range(i + 1):
            tile = tiles[i, j]
            tile[:] = 0.0
            last = min(side, n - j * side)
            for a in range(side):
                row = i * side + a
                if row >= n:
                    tile[0, a, a] = 1.0 if i == j else 0.0
                    continue
                for b in range(last):
                    tile[0, a, b] = matrix[row, j * side + b].real
                    tile[1, a, b] = matrix[row, j * side + b].imag


@njit(nogil=True, fastmath=_FAST, cache=True)
def _take_product(one: Floats, two: Floats, out: Floats) -> None:
    """Take the product of two tiles off a third, two rows by two columns at a time."""
    side = out.shape[1]
    for i in range(0, side, 2):
        ra, ia, rb, ib = out[0, i], out[1, i], out[0, i + 1], out[1, i + 1]
        for k in range(0, side, 2):
            a0, a1, b0, b1 = one[0, i, k], one[0, i, k + 1], one[0, i + 1, k], one[0, i + 1, k + 1]
            c0, c1, d0, d1 = one[1, i, k], one[1, i, k + 1], one[1, i + 1, k], one[1, i + 1, k + 1]
            r0, r1, i0, i1 = two[0, k], two[0, k + 1], two[1, k], two[1, k + 1]
            for j in range(side):
                x0, x1, y0, y1 = r0[j], r1[j], i0[j], i1[j]
                ra[j] -= a0 * x0 + a1 * x1 - c0 * y0 - c1 * y1
                ia[j] -= a0 * y0 + a1 * y1 + c0 * x0 + c1 * x1
                rb[j] -= b0 * x0 + b1 * x1 - d0 * y0 - d1 * y1
                ib[j] -= b0 * y0 + b1 * y1 + d0 * x0 + d1 * x1


@njit(nogil=True, error_model="numpy", cache=True)
def _invert_tile(tile: Floats) -> None:
    """Replace a tile by its inverse: Gauss and Jordan's elimination, rows swapped.

    Parameters
    ----------
    tile : (2, b, b) ndarray of float
        Written to.
    """
    side = tile.shape[1]
    real, imag = tile[0], tile[1]
    order = np.arange(side)
    for k in range(side):
        best = k
        for i in range(k + 1, side):
            if real[i, k] ** 2 + imag[i, k] ** 2 > real[best, k] ** 2 + imag[best, k] ** 2:
                best = i
        for j in range(side):
            real[k, j], real[best, j] = real[best, j], real[k, j]
            imag[k, j], imag[best, j] = imag[best, j], imag[k, j]
        order[k], order[best] = order[best], order[k]
        size = real[k, k] ** 2 + imag[k, k] ** 2  # a quotient of complex numbers may raise
        inverse = complex(real[k, k] / size, -imag[k, k] / size)
        real[k, k], imag[k, k] = 1.0, 0.0
        _scale_row(inverse, real[k], imag[k])
        for i in range(side):
            if i != k:
                factor = complex(real[i, k], imag[i, k])
                real[i, k] = imag[i, k] = 0.0
                _take_row(factor, real[k], imag[k], real[i], imag[i])
    columns = tile.copy()
    for j in range(side):
        tile[:, :, order[j]] = columns[:, :, j]


@njit(nogil=True, fastmath=_FAST, cache=True)
def _scale_row(factor: complex, real: Floats, imag: Floats) -> None:
    for j in range(real.shape[0]):
        re, im = real[j], imag[j]
        real[j] = factor.real * re - factor.imag * im
        imag[j] = factor.real * im + factor.imag * re


@njit(nogil=True, fastmath=_FAST, cache=True)
def _take_row(factor: complex, re: Floats, im: Floats, real: Floats, imag: Floats) -> None:
    for j in range(real.shape[0]):
        real[j] -= factor.real * re[j] - factor.imag * im[j]
        imag[j] -= factor.real * im[j] + factor.imag * re[j]


@njit(nogil=True, cache=True)
def invert_panel(tiles: Floats, first: int, last: int) -> None:
    """Invert the diagonal tiles of some columns that earlier ones are taken off already.

    Parameters
    ----------
    tiles : (m, m, 2, b, b) ndarray of float
        Written to.
    first, last : int
        First and past last column, each taken off the next.
    """
    for k in range(first, last):
        _invert_tile(tiles[k, k])
        for j in range(k + 1, last):
            _take_rows(tiles, k, k + 1, j)


@njit(nogil=True, cache=True)
def eliminate(tiles: Floats, first: int, last: int, columns: Ints) -> None:
    """Take some rows of tiles, their panel inverted, off some later columns.

    Parameters
    ----------
    tiles : (m, m, 2, b, b) ndarray of float
        Written to; above the diagonal with less the inverse times what is below, transposed.
    first, last : int
        First and past last row.
    columns : (...,) ndarray of int
        Of tiles, >= last.
    """
    for j in columns:
        _take_rows(tiles, first, last, j)


@njit(nogil=True, cache=True)
def _take_rows(tiles: Floats, first: int, last: int, column: int) -> None:
    """Take several rows off a column at once: each of its tiles is fetched but once."""
    side = tiles.shape[3]
    turned = np.empty((2, side, side))
    for k in range(first, last):
        for part in range(2):
            for a in range(side):
                for b in range(side):
                    turned[part, b, a] = -tiles[column, k, part, a, b]
        tiles[k, column] = 0.0
        _take_product(tiles[k, k], turned, tiles[k, column])
    for i in range(column, tiles.shape[0]):
        for k in range(first, last):
            _take_product(tiles[i, k], tiles[k, column], tiles[i, column])


@njit(nogil=True, fastmath=_FAST, cache=True)
def _add_product(tile: Floats, vector: Complexes, scale: float, out: Complexes) -> None:
    side = tile.shape[1]
    for a in range(side):
        total = 0j
        for b in range(side):
            total += complex(tile[0, a, b], tile[1, a, b]) * vector[b]
        out[a] += scale * total


@njit(nogil=True, cache=True)
def put_in(tiles: Floats, sides: Complexes) -> None:
    """Solve for right-hand sides by a matrix that is eliminated.

    Parameters
    ----------
    tiles : (m, m, 2, b, b) ndarray of float
    sides : (r, m, b) ndarray of complex
        Replaced by the solutions.
    """
    count = tiles.shape[0]
    for side in sides:
        for k in range(count):
            for j in range(k):
                _add_product(tiles[k, j], side[j], -1.0, side[k])
            own = side[k].copy()
            side[k] = 0.0
            _add_product(tiles[k, k], own, 1.0, side[k])
        for k in range(count - 1, -1, -1):
            for i in range(k + 1, count):
                _add_product(tiles[k, i], side[i], -1.0, side[k])


@njit(nogil=True, fastmath=_FAST, cache=True)
def symmetric_product(matrix: Complexes, vectors: Complexes, out: Complexes) -> None:
    """Product of a symmetric matrix, of which the lower half is read, with vectors.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
    vectors : (r, n) ndarray of complex
    out : (r, n) ndarray of complex
        Written.
    """
    out[:] = 0.0
    for i in range(matrix.shape[0]):
        row = matrix[i]
        for r in range(vectors.shape[0]):
            vector, sums = vectors[r], out[r]
            own, total = vector[i], 0j
            for j in range(i):
                total += row[j] * vector[j]
                sums[j] += row[j] * own
            sums[i] += total + row[i] * own
