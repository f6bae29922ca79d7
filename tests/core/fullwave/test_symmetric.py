"""Solutions of symmetric systems against numpy's elimination."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.fullwave.symmetric import solve_symmetric


def symmetric(n, seed):
    random = np.random.default_rng(seed)
    one = random.standard_normal((n, n)) + 1j * random.standard_normal((n, n))
    return one + one.T


@pytest.mark.parametrize("unknowns", [1, 7, 48, 49, 144, 301])
def test_any_size_and_several_right_hand_sides(unknowns):
    matrix = symmetric(unknowns, 1) + 4.0 * np.sqrt(unknowns) * np.eye(unknowns)
    sides = np.random.default_rng(2).standard_normal((unknowns, 3)) + 0j
    solved = solve_symmetric(matrix.copy(), sides)
    # Rounding times the condition, under 100 here.
    assert_allclose(solved, np.linalg.solve(matrix, sides), rtol=1e-12, atol=1e-13)


@pytest.mark.parametrize("tilt", [0.0, 1e-14, 1e-9])
def test_matrix_that_needs_rows_swapped_from_far(tilt):
    """Nothing or next to nothing in the first tile: the residual must see it."""
    matrix = symmetric(120, 3)
    matrix[:60, :60] *= tilt
    side = np.random.default_rng(4).standard_normal((120, 1)) + 0j
    solved = solve_symmetric(matrix.copy(), side)
    assert_allclose(solved, np.linalg.solve(matrix, side), rtol=1e-8, atol=1e-9)
