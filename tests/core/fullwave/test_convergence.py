"""Whole designs against meshes beyond the finest level; the long tables: docs/validation.md."""

import pytest
from board_shapes import board_dual_edge
from fullwave_shapes import thick_air, thin_air
from mesh_variants import REFERENCE, meshes

from core.fullwave.board_kernels import BoardKernels
from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.layered_system import build_layered_system, solve_layered
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.solvers import MOST_AIR_LIKE
from core.fullwave.system import build_system, solve
from core.layout.build import build_layout
from core.lines.stack import series_permittivity

FREQUENCY = 2.45e9
DESIGNS = {
    "thin air": lambda: build_layout(thin_air()),
    "thick air": lambda: build_layout(thick_air()),
    "board": board_dual_edge,
}


def match_and_ratio(layout, finest=None, row=None):
    """Reflection and wrong over right hand at boresight, on the finest level or another."""
    with meshes(finest, row):
        if series_permittivity(layout.stack) <= MOST_AIR_LIKE:
            mesh = build_mesh(layout, Level.FINE)
            solution = solve(build_system(mesh, layout.foil, layout.stack), FREQUENCY)
        else:
            mesh = build_board_mesh(layout, Level.FINE)
            system = build_layered_system(mesh, BoardKernels(layout.stack, layout.foil, FREQUENCY))
            solution = solve_layered(system, FREQUENCY)
    normalised = 50.0 * solution.admittance
    ratio = (solution.e_x - 1j * solution.e_y) / (solution.e_x + 1j * solution.e_y)
    return (1.0 - normalised) / (1.0 + normalised), ratio


def apart(one, other):
    return max(abs(a - b) for a, b in zip(one, other, strict=True))


@pytest.mark.parametrize("name", DESIGNS)
def test_finest_level_is_near_a_finer_mesh_with_half_the_edge_row(name):
    layout = DESIGNS[name]()
    true = match_and_ratio(layout, REFERENCE, 0.025)
    with_row, without = match_and_ratio(layout), match_and_ratio(layout, row=0.0)
    assert apart(with_row, true) < 0.02
    assert apart(without, true) > 2.0 * apart(with_row, true)
