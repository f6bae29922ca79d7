"""Solving a symmetric complex system by threads, with half the work of a general one.

Block elimination A = L D Lᵀ on tiles (`core.fullwave.compiled_solve`): rows are swapped inside
a diagonal tile only. Moment matrices allow that; the residual, which costs next to nothing,
tells, and where it is too large elimination with rows swapped throughout does the work again.

Shapes: n unknowns, m tiles to a side, b rows of a tile, r right-hand sides.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.linalg import lu_factor, lu_solve

from core.fullwave.workers import WORKERS

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_SIDE: Final = 48  # of a tile: three fit the second fastest cache, two of its rows the fastest
_INVERSION: Final = 3  # work of inverting a tile, in products of two tiles
_EXACT: Final = 1e-11  # residual over right-hand side that will do
_REFINED: Final = 2  # times that a solution is improved by its residual


def solve_symmetric(matrix: Complexes, sides: Complexes) -> Complexes:
    """Solve a symmetric system.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Symmetric; may be overwritten.
    sides : (n, r) ndarray of complex
        Right-hand sides.

    Returns
    -------
    (n, r) ndarray of complex
    """
    tiles = _eliminated(matrix)
    wanted = np.ascontiguousarray(sides.T)
    small = _EXACT * np.linalg.norm(wanted, axis=1)
    solved = np.zeros_like(wanted)
    left = wanted
    with np.errstate(invalid="ignore", over="ignore"):  # where a tile has no inverse
        for _ in range(1 + _REFINED):
            solved += _put_in(tiles, left)
            left = wanted - _product(matrix, solved)
            if (np.linalg.norm(left, axis=1) <= small).all():
                return np.asarray(solved.T)
    # The transpose of a symmetric matrix is the column order that LAPACK wants, for nothing.
    factors = lu_factor(matrix.T, overwrite_a=True, check_finite=False)
    return np.asarray(lu_solve(factors, sides, check_finite=False))


def _eliminated(matrix: Complexes) -> Floats:
    """Tiles (m, m, 2, b, b) that solve for any right-hand side."""
    from core.fullwave.compiled_solve import (  # noqa: PLC0415 - slow to load
        cut_tiles,
        eliminate,
        invert_tile,
    )

    count = -(-len(matrix) // _SIDE)
    tiles = np.empty((count, count, 2, _SIDE, _SIDE))
    with ThreadPoolExecutor(WORKERS) as pool:
        list(pool.map(lambda first: cut_tiles(matrix, tiles, first, WORKERS), range(WORKERS)))
        invert_tile(tiles[0, 0])
        for k in range(count - 1):
            list(pool.map(lambda own, k=k: eliminate(tiles, k, own), _shares(k, count)))
    return tiles


def _shares(k: int, count: int) -> list[Ints]:
    """Columns past the k-th, shared out so that all threads have about the same work."""
    shares: list[list[int]] = [[] for _ in range(WORKERS)]
    work = [0] * WORKERS
    for column in range(k + 1, count):
        least = work.index(min(work))
        shares[least].append(column)
        work[least] += count - column + 1 + (_INVERSION if column == k + 1 else 0)
    return [np.array(one, dtype=np.int64) for one in shares if one]


def _put_in(tiles: Floats, sides: Complexes) -> Complexes:
    """Solutions (r, n) for right-hand sides (r, n)."""
    from core.fullwave.compiled_solve import put_in  # noqa: PLC0415 - slow to load

    padded = np.zeros((len(sides), len(tiles) * _SIDE), dtype=np.complex128)
    padded[:, : sides.shape[1]] = sides
    put_in(tiles, padded.reshape(len(sides), len(tiles), _SIDE))
    return padded[:, : sides.shape[1]]


def _product(matrix: Complexes, vectors: Complexes) -> Complexes:
    from core.fullwave.compiled_solve import symmetric_product  # noqa: PLC0415 - slow to load

    out = np.empty_like(vectors)
    symmetric_product(matrix, vectors, out)
    return out
