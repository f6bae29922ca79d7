"""The same open surfaces solved by a general boundary-element library, bempp-cl.

Its functions on edges are ours up to order and sign; its time runs the other way. From the
mesh to the far field nothing else is shared.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

import bempp_cl.api as bempp
import numpy as np
from fullwave_shapes import moments_of

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
