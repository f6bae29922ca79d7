"""Solving a symmetric complex system by threads, with half the work of a general one.

Block elimination A = L D Lᵀ on tiles (`core.fullwave.compiled_solve`): rows are swapped inside
a diagonal tile only. Moment matrices allow that; the residual, which costs next to nothing,
tells, and where it is too large elimination with rows swapped throughout does the work again.

Shapes: n unknowns, m tiles to a side, b rows of a tile, r right-hand sides.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from functools import partial
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
_PANEL: Final = 2  # rows of tiles taken off at a time
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
        invert_panel,
    )

    count = -(-len(matrix) // _SIDE)
    tiles = np.empty((count, count, 2, _SIDE, _SIDE))

    def take(first: int, last: int, share: tuple[int, Ints]) -> None:
        worker, columns = share
        eliminate(tiles, first, last, columns)
        if worker == 0:  # has all columns of the next panel, and less of the others
            invert_panel(tiles, last, min(last + _PANEL, count))

    with ThreadPoolExecutor(WORKERS) as pool:
        list(pool.map(lambda first: cut_tiles(matrix, tiles, first, WORKERS), range(WORKERS)))
        invert_panel(tiles, 0, min(_PANEL, count))
        for first in range(0, count - _PANEL, _PANEL):
            last = first + _PANEL
            list(pool.map(partial(take, first, last), enumerate(_shares(last, count))))
    return tiles


def _shares(start: int, count: int) -> list[Ints]:
    """Columns from `start` on, shared out so that all threads have about the same work."""
    panel = range(start, min(start + _PANEL, count))
    shares: list[list[int]] = [[] for _ in range(WORKERS)]
    shares[0] += panel
    work = [0] * WORKERS
    for place, column in enumerate(panel):
        work[0] += (_PANEL + place) * (count - column + 1) + _INVERSION
    for column in range(start + _PANEL, count):
        least = work.index(min(work))
        shares[least].append(column)
        work[least] += _PANEL * (count - column + 1)
    return [np.array(one, dtype=np.int64) for one in shares]


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
