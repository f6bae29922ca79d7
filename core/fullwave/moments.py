"""The moment matrix of a mesh: what stays the same at every frequency, filling and solving.

Electric-field integral equation in mixed potentials, tested with the basis functions
themselves (Galerkin); time factor exp(+j omega t).

Shapes: t triangles, n functions, p near pairs.
"""

from __future__ import annotations

import os
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.linalg import lu_factor, lu_solve

from core.constants import SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.fullwave.basis import Basis
from core.fullwave.quadrature import COARSE_RULE, triangle_rule

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_WORKERS = min(4, os.cpu_count() or 1)
_BATCH = 1000  # pairs to a task
# By kind of pair: the fill's own, apart, touching or nearly, sharing an edge, the triangle itself.
_RULES: Final = (COARSE_RULE, *(triangle_rule(order) for order in (4, 3, 5, 6)))


@dataclass(frozen=True, eq=False)
class Moments:
    """What a mesh in free space needs at every frequency.

    Attributes
    ----------
    basis : Basis
    geometry, near, overlaps, functions
        As `core.fullwave.compiled.add_free_space` takes them.
    colours : tuple of (...,) ndarray of int
        All triangles, shared out so that no two of a colour have a function in common.
    """

    basis: Basis
    geometry: tuple[Floats, Floats, Floats]
    near: tuple[Ints, Ints, Floats, Floats]
    overlaps: Floats
    functions: tuple[Ints, Ints, Floats, Ints, Ints]
    colours: tuple[Ints, ...]


def build_moments(basis: Basis, triangles: Ints) -> Moments:
    """Work out what does not change with frequency.

    Parameters
    ----------
    basis : Basis
    triangles : (t, 3) ndarray of int
        Vertices of the mesh's triangles.

    Returns
    -------
    Moments
    """
    corners = basis.corners
    points = np.einsum("ic,tcx->xit", COARSE_RULE[:, :3], corners)
    geometry = (
        np.ascontiguousarray(points),
        np.ascontiguousarray(corners.transpose(2, 1, 0)),
        basis.lengths / 2.0,
    )
    return Moments(
        basis,
        geometry,
        _near(basis, triangles),
        _overlaps(basis),
        _functions(basis),
        _colours(basis),
    )


def impedance_matrix(moments: Moments, frequency: float, sheet_impedance: Complexes) -> Complexes:
    """Moment matrix at one frequency.

    Parameters
    ----------
    moments : Moments
    frequency : float
        Hz, > 0.
    sheet_impedance : (t,) ndarray of complex
        Of the foil at each triangle, ohm.

    Returns
    -------
    (n, n) ndarray of complex
        Symmetric, ohm m²: voltage over current density times edge lengths.
    """
    from core.fullwave.compiled import add_free_space, add_transpose  # noqa: PLC0415 - slow to load

    factor = 1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    matrix = np.zeros((moments.basis.count, moments.basis.count), dtype=np.complex128)

    def add(triangles: Ints) -> None:
        add_free_space(
            triangles,
            TWO_PI * frequency / SPEED_OF_LIGHT,
            factor,
            moments.geometry,
            moments.near,
            (sheet_impedance / factor, moments.overlaps),
            moments.functions,
            matrix,
        )

    with ThreadPoolExecutor(_WORKERS) as pool:
        for colour in moments.colours:
            list(pool.map(add, (colour[first::_WORKERS] for first in range(_WORKERS))))
        list(pool.map(lambda first: add_transpose(matrix, first, _WORKERS), range(_WORKERS)))
    return matrix


def currents(matrix: Complexes, excitations: Complexes) -> Complexes:
    """Solve for the currents; the matrix is overwritten.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Symmetric.
    excitations : (n, ...) ndarray of complex

    Returns
    -------
    (n, ...) ndarray of complex
        Current density leaving through each function's edge, A/m.
    """
    # The transpose of a symmetric matrix is the column order that LAPACK wants, for nothing.
    factors = lu_factor(matrix.T, overwrite_a=True, check_finite=False)
    return np.asarray(lu_solve(factors, excitations, check_finite=False))


def _near(basis: Basis, triangles: Ints) -> tuple[Ints, Ints, Floats, Floats]:
    """Near terms of every triangle with itself and the later ones near it."""
    from core.fullwave.compiled_near import find_near, near_terms  # noqa: PLC0415 - slow to load

    starts, sources, kinds = find_near(basis.corners, triangles)
    pairs = np.column_stack([np.repeat(np.arange(basis.triangles), np.diff(starts)), sources])
    rules = np.concatenate(_RULES), np.cumsum([0, *(len(rule) for rule in _RULES)])
    terms, charges = np.empty((len(pairs), 2, 3, 3)), np.empty((len(pairs), 2))

    def work_out(share: slice) -> None:
        near_terms(
            basis.corners, pairs[share], kinds[share], 0.0, rules, terms[share], charges[share]
        )

    with ThreadPoolExecutor(_WORKERS) as pool:
        list(pool.map(work_out, (slice(i, i + _BATCH) for i in range(0, len(pairs), _BATCH))))
    return starts, sources, terms, charges


def _overlaps(basis: Basis) -> Floats:
    """Integrals (t, 3, 3) of f_a . f_b over each triangle."""
    rule = triangle_rule(2)
    arms = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)[:, :, None] - basis.corners[:, None]
    means = np.einsum("q,tqax,tqbx->tab", rule[:, 3], arms, arms)
    half = basis.lengths.T / 2.0
    return np.asarray(means * half[:, :, None] * half[:, None, :] / basis.areas[:, None, None])


def _functions(basis: Basis) -> tuple[Ints, Ints, Floats, Ints, Ints]:
    """Functions by half, with signs."""
    halves = np.concatenate([basis.plus, basis.minus])
    numbers = np.tile(np.arange(basis.count), 2)
    signs = np.repeat([1.0, -1.0], basis.count)
    order = np.argsort(halves, kind="stable")
    starts = np.searchsorted(halves[order], np.arange(3 * basis.triangles + 1))
    return starts, numbers[order], signs[order], basis.plus, basis.minus


def _colours(basis: Basis) -> tuple[Ints, ...]:
    """Triangles by colour, so that no two of a colour share a function."""
    neighbours: list[list[int]] = [[] for _ in range(basis.triangles)]
    one, two = basis.plus % basis.triangles, basis.minus % basis.triangles
    # A common triangle of a junction keeps all of its partners apart from itself only; two
    # partners share no function.
    for a, b in zip(one.tolist(), two.tolist(), strict=True):
        neighbours[a].append(b)
        neighbours[b].append(a)
    colour = [-1] * basis.triangles
    for t, others in enumerate(neighbours):
        taken = {colour[s] for s in others}
        colour[t] = next(c for c in range(len(taken) + 1) if c not in taken)
    return tuple(np.flatnonzero(np.asarray(colour) == c) for c in range(max(colour) + 1))
