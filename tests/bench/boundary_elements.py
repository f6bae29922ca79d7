"""The same open surfaces solved by a general boundary-element library, bempp-cl.

Its functions on edges are ours up to order and sign; its time runs the other way. From the
mesh to the far field nothing else is shared.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

import bempp_cl.api as bempp
import numpy as np
from fullwave_shapes import grid, moments_of

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT
from core.fullwave.far_field import far_field
from core.fullwave.moments import currents, impedance_matrix

bempp.DEFAULT_DEVICE_INTERFACE = "numba"


@dataclass(frozen=True, eq=False)
class Solved:
    """Currents on our functions, matrix, and far field as `far_field` gives it."""

    matrix: np.ndarray
    currents: np.ndarray
    field: np.ndarray


def by_us(vertices, triangles, excitation, wavenumber, directions) -> Solved:
    """By the project's own solver."""
    basis, moments = moments_of(vertices, triangles)
    frequency = wavenumber * SPEED_OF_LIGHT / (2.0 * pi)
    matrix = impedance_matrix(moments, frequency, np.zeros(basis.triangles, dtype=complex))
    solved = currents(matrix.copy(), excitation)
    return Solved(matrix, solved, far_field(basis, solved, frequency, directions))


def by_library(vertices, triangles, excitation, wavenumber, directions, order=4) -> Solved:
    """By the library, quadrature of an order (its own is 4)."""
    bempp.GLOBAL_PARAMETERS.quadrature.regular = order
    bempp.GLOBAL_PARAMETERS.quadrature.singular = order
    mesh = bempp.Grid(vertices.T, triangles.T.astype(np.uint32))
    space = bempp.function_space(mesh, "RWG", 0)
    turned = bempp.function_space(mesh, "SNC", 0)
    order_of, signs = _ours(mesh, space, vertices, triangles)
    operator = bempp.operators.boundary.maxwell.electric_field(space, space, turned, wavenumber)
    theirs = operator.weak_form().to_dense()
    ours = FREE_SPACE_IMPEDANCE * theirs.conj() * signs[:, None] * signs
    matrix = np.empty_like(ours)
    matrix[np.ix_(order_of, order_of)] = ours
    solved = np.linalg.solve(matrix, excitation)
    density = bempp.GridFunction(space, coefficients=(solved[order_of] * signs).conj())
    sent = bempp.operators.far_field.maxwell.electric_field(space, directions.T, wavenumber)
    return Solved(matrix, solved, FREE_SPACE_IMPEDANCE * sent.evaluate(density).T.conj())


def _ours(mesh, space, vertices, triangles):
    """For each of the library's functions the number of ours, and its sign."""
    basis, _ = moments_of(vertices, triangles)
    number = {tuple(ends): i for i, ends in enumerate(basis.ends)}
    order = np.zeros(space.global_dof_count, dtype=int)
    signs = np.zeros(space.global_dof_count)
    for triangle, edges in enumerate(space.local2global):
        for place, function in enumerate(edges):
            if space.local_multipliers[triangle, place] > 0.0:
                ends = mesh.edges[:, mesh.element_edges[place, triangle]]
                order[function] = number[tuple(sorted(ends))]
                ahead = basis.plus[order[function]] % basis.triangles == triangle
                signs[function] = 1.0 if ahead else -1.0
    return order, signs


def plate(cells: int, side: float = 1.0):
    """Vertices and triangles of a square plate in the plane z = 0."""
    places = np.linspace(-side / 2.0, side / 2.0, cells + 1)
    return grid(places, places)


def patch_over_plate(cell: float = 0.06):
    """A patch over a plate's rim, joined to it by an upright strip; where the strip is fed.

    Lengths in wavelengths: plate 0.6 x 0.6, patch 0.48 wide and 0.42 long, 0.06 high, the strip
    0.12 wide. No edge has more than two triangles: the library knows no junctions.
    """
    count = round(0.06 / cell)
    low = grid(np.linspace(-0.3, 0.3, 10 * count + 1), np.linspace(-0.3, 0.3, 10 * count + 1))
    top = grid(
        np.linspace(-0.24, 0.24, 8 * count + 1), np.linspace(-0.3, 0.12, 7 * count + 1), 0.06
    )
    x_z, strip = grid(np.linspace(-0.06, 0.06, 2 * count + 1), np.linspace(0.0, 0.06, count + 1))
    upright = np.column_stack([x_z[:, 0], np.full(len(x_z), -0.3), x_z[:, 1]])
    # The library wants neighbours to turn the same way round: plate, strip, patch as one sheet.
    faces = [(low[0], low[1][:, ::-1]), (upright, strip), top]
    starts = np.cumsum([0, *(len(points) for points, _ in faces)])
    points = np.concatenate([points for points, _ in faces])
    triangles = np.concatenate([t + s for (_, t), s in zip(faces, starts, strict=False)])
    _, first, number = np.unique(
        np.round(points, 9), axis=0, return_index=True, return_inverse=True
    )
    return points[first], number.reshape(-1)[triangles]


def foot_excitation(vertices, triangles):
    """1 V up the strip, across its foot."""
    basis, _ = moments_of(vertices, triangles)
    ends = vertices[basis.ends]
    foot = (abs(ends[..., 2]) < 1e-9) & (abs(ends[..., 1] + 0.3) < 1e-9)
    excitation = np.zeros(basis.count, dtype=complex)
    for m in np.flatnonzero(foot.all(axis=1)):
        upwards = basis.corners[basis.minus[m] % basis.triangles][:, 2].max() > 1e-9
        excitation[m] = np.linalg.norm(np.diff(ends[m], axis=0)) * (1.0 if upwards else -1.0)
    return excitation


def wave_excitation(vertices, triangles):
    """A wave of 1 V/m along x that falls on a plate at z = 0 from straight ahead."""
    basis, _ = moments_of(vertices, triangles)
    arms = (basis.corners.mean(axis=1)[:, None] - basis.corners)[..., 0].T
    return basis.tested((arms * basis.lengths / 2.0).astype(complex))
