"""The moment matrix of a mesh: what stays the same at every frequency, filling and solving.

Electric-field integral equation in mixed potentials, tested with the basis functions
themselves (Galerkin); time factor exp(+j omega t).

Shapes: t triangles, n functions, p near pairs.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.linalg import lu_factor, lu_solve
from scipy.spatial.distance import cdist

from core.constants import SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.fullwave.basis import Basis
from core.fullwave.quadrature import COARSE_RULE, triangle_rule

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_NEAR = 1.8  # distance of middles, in sums of both triangles' radii, within which terms are near
_CLOSE = 0.6  # distance of marks, in longest edges, within which the source is integrated exactly
_APART, _TOUCHING, _NEIGHBOUR, _SELF = 1, 2, 3, 4
_RULES: Final = (COARSE_RULE, *(triangle_rule(order) for order in (4, 3, 5, 6)))


@dataclass(frozen=True, eq=False)
class Moments:
    """What a mesh in free space needs at every frequency.

    Attributes
    ----------
    basis : Basis
    geometry, near, overlaps, functions, colours
        As `core.fullwave.compiled.fill_free_space` takes them.
    """

    basis: Basis
    geometry: tuple[Floats, Floats, Floats]
    near: tuple[Ints, Ints, Floats, Floats]
    overlaps: Floats
    functions: tuple[Ints, Ints, Floats, Ints, Ints]
    colours: tuple[Ints, Ints]


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
    pairs, kinds = near_pairs(corners, triangles)
    return Moments(
        basis,
        geometry,
        _near(basis, pairs, kinds),
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
    from core.fullwave.compiled import fill_free_space  # noqa: PLC0415 - slow to load

    factor = 1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    matrix = np.empty((moments.basis.count, moments.basis.count), dtype=np.complex128)
    fill_free_space(
        TWO_PI * frequency / SPEED_OF_LIGHT,
        factor,
        moments.geometry,
        moments.near,
        (sheet_impedance / factor, moments.overlaps),
        moments.functions,
        moments.colours,
        matrix,
    )
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


def near_pairs(corners: Floats, triangles: Ints) -> tuple[Ints, Ints]:
    """Pairs of triangles that the coarse sum over points is not enough for, each once.

    Parameters
    ----------
    corners : (t, 3, 3) ndarray of float
        m.
    triangles : (t, 3) ndarray of int

    Returns
    -------
    pairs : (p, 2) ndarray of int
    kinds : (p,) ndarray of int
        How close, as `core.fullwave.compiled_near.near_terms` takes it.
    """
    middles = corners.mean(axis=1)
    radii = np.linalg.norm(corners - middles[:, None], axis=2).max(axis=1)
    reach = _NEAR * (radii[:, None] + radii)
    first, second = np.nonzero(np.triu(cdist(middles, middles) < reach))
    one, two = triangles[first], triangles[second]
    shared = (one[:, :, None] == two[:, None, :]).sum(axis=(1, 2))
    kinds = np.choose(shared, [_APART, _TOUCHING, _NEIGHBOUR, _SELF])
    apart = np.flatnonzero(kinds == _APART)
    marks = np.concatenate([corners, (corners + np.roll(corners, 1, axis=1)) / 2.0], axis=1)
    longest = np.linalg.norm(corners - np.roll(corners, 1, axis=1), axis=2).max(axis=1)
    between = marks[first[apart]][:, :, None] - marks[second[apart]][:, None]
    gap = np.sqrt(np.einsum("pijx,pijx->pij", between, between).min(axis=(1, 2)))
    close = gap < _CLOSE * np.maximum(longest[first[apart]], longest[second[apart]])
    kinds[apart[close]] = _TOUCHING
    return np.column_stack([first, second]), kinds


def _near(basis: Basis, pairs: Ints, kinds: Ints) -> tuple[Ints, Ints, Floats, Floats]:
    """Near terms of every triangle with every near one, sorted by the first."""
    from core.fullwave.compiled_near import near_terms  # noqa: PLC0415 - slow to load

    starts = np.cumsum([0, *(len(rule) for rule in _RULES)])
    terms, charges = near_terms(basis.corners, pairs, kinds, 0.0, np.concatenate(_RULES), starts)
    other = pairs[:, 0] != pairs[:, 1]
    test = np.concatenate([pairs[:, 0], pairs[other, 1]])
    source = np.concatenate([pairs[:, 1], pairs[other, 0]])
    terms = np.concatenate([terms, terms[other].transpose(0, 1, 3, 2)])
    charges = np.concatenate([charges, charges[other]])
    order = np.argsort(test, kind="stable")
    begin = np.searchsorted(test[order], np.arange(basis.triangles + 1))
    return begin, source[order], np.ascontiguousarray(terms[order]), charges[order]


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


def _colours(basis: Basis) -> tuple[Ints, Ints]:
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
    order = np.argsort(colour, kind="stable")
    ordered = np.asarray(colour)[order]
    return np.searchsorted(ordered, np.arange(ordered[-1] + 2)), order
