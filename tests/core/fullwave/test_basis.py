"""Basis functions: how many, and where they flow."""

import numpy as np
import pytest
from fullwave_shapes import grid, sphere

from core.fullwave.basis import build_basis


def basis_of(vertices, triangles, rank=None):
    rank = np.zeros(len(triangles), dtype=int) if rank is None else rank
    return build_basis(vertices, np.asarray(triangles), rank)


def test_closed_surface_has_one_function_an_edge():
    vertices, triangles = sphere(1)
    assert basis_of(vertices, triangles).count == 3 * len(triangles) // 2


def test_open_sheet_has_none_on_its_rim():
    vertices, triangles = grid(np.arange(4.0), np.arange(3.0))
    # 3 x 2 squares: 17 sides and 6 diagonals, 10 sides on the rim.
    assert basis_of(vertices, triangles).count == 17 + 6 - 10


@pytest.mark.parametrize("wings", [2, 3, 4, 5])
def test_edge_of_k_triangles_has_k_less_one_functions(wings):
    turns = 2 * np.pi * np.arange(wings) / wings
    tips = np.column_stack([np.cos(turns), np.sin(turns), np.full(wings, 0.5)])
    vertices = np.vstack([[[0, 0, 0], [0, 0, 1]], tips])
    triangles = [(0, 1, 2 + i) for i in range(wings)]
    rank = np.arange(wings) == wings - 1
    basis = basis_of(vertices, triangles, rank.astype(int))
    assert basis.count == wings - 1
    # The one of highest rank is common to all.
    assert set(basis.plus % wings) == {wings - 1}
    assert set(basis.minus % wings) == set(range(wings - 1))


def test_no_charge_gathers_on_an_edge():
    # What leaves the one triangle through the edge enters the other: l (r - p) / (2 A) is 1
    # across the edge, and the two halves have opposite signs.
    rng = np.random.default_rng(5)
    vertices = np.array([[0, 0, 0], [1, 0, 0], [0.2, 1, 0], [0.9, 1.1, 0.4]])
    basis = basis_of(vertices, [(0, 1, 2), (1, 3, 2)])
    halves = basis.on_halves(np.array([rng.normal() + 0j]))
    flows = []
    for t in range(2):
        corners = basis.corners[t]
        corner = int(np.flatnonzero(halves[:, t])[0])
        on_edge = (corners.sum(axis=0) - corners[corner]) / 2.0
        side = corners[(corner + 2) % 3] - corners[(corner + 1) % 3]
        normal = np.cross(side, np.cross(corners[1] - corners[0], corners[2] - corners[0]))
        normal /= np.linalg.norm(normal)
        field = basis.lengths[corner, t] / (2 * basis.areas[t]) * (on_edge - corners[corner])
        assert field @ normal == pytest.approx(1.0)
        flows.append(halves[corner, t] * (field @ normal))
    assert sum(flows) == pytest.approx(0.0)


def test_testing_is_the_transpose_of_expanding():
    vertices, triangles = grid(np.arange(4.0), np.arange(4.0))
    basis = basis_of(vertices, triangles)
    rng = np.random.default_rng(9)
    x = rng.normal(size=basis.count) + 0j
    y = rng.normal(size=(3, basis.triangles)) + 0j
    assert np.sum(basis.on_halves(x) * y) == pytest.approx(x @ basis.tested(y))
