"""Probe-fed copper on boards: free space as a limit, power, convergence."""

import numpy as np
import pytest
from board_shapes import IDEAL, board_dual_edge, board_patch
from fullwave_shapes import grid, moments_of, probe_patch, stripline_design

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.fullwave.board_kernels import BoardKernels
from core.fullwave.far_field import direction_frame
from core.fullwave.kernel_table import plan_tables
from core.fullwave.layered_fields import power_into_space, power_into_waves, space_field
from core.fullwave.layered_mesh import BoardMesh, build_board_mesh
from core.fullwave.layered_moments import board_basis, build_layered_moments, layered_matrix
from core.fullwave.layered_system import board_currents, build_layered_system, solve_layered
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.mesh_model import CoaxRing
from core.fullwave.moments import impedance_matrix
from core.fullwave.system import build_system, radiated_field, solve
from core.layout.build import build_layout
from core.lines.stack import Layer

PORT = CoaxRing(0.0, 0.0, 1e-4, 2e-4)
THREE = (Layer(0.5e-3, 2.2), Layer(0.3e-3, 6.0), Layer(0.8e-3, 3.0))
BOARDS = {  # name: patch, layers if not its own, frequency
    "thin": (board_patch(8.5e-3, 12.9e-3, 0.17e-3, 2.22, 7.74e9), None, 7.74e9),
    "ceramic": (board_patch(9.1e-3, 10e-3, 1.27e-3, 10.2, 4.6e9), None, 4.6e9),
    "thick": (board_patch(10.5e-3, 7e-3, 3.175e-3, 2.33, 9.14e9), None, 9.14e9),
    "thick ceramic": (board_patch(9.1e-3, 10e-3, 5e-3, 10.2, 4.6e9), None, 4.6e9),
    "three layers": (board_patch(30e-3, 30e-3, 1.6e-3, 3.0, 2.45e9), THREE, 2.45e9),
    "dual edge": (board_dual_edge(), None, 2.45e9),
}


def built(layout, level, highest, layers=None, foil=IDEAL):
    kernels = BoardKernels(layers or layout.stack, foil, highest)
    return build_layered_system(build_board_mesh(layout, level), kernels)


def reflection(solution):
    return (1.0 - 50.0 * solution.admittance) / (1.0 + 50.0 * solution.admittance)


@pytest.mark.parametrize("height_mm", [6, 15])
def test_air_is_free_space_with_a_mirror_image(height_mm):
    height, k = 1e-3 * height_mm, TWO_PI * 2.45e9 / SPEED_OF_LIGHT
    vertices, triangles = grid(np.linspace(0.0, 0.05, 7), np.linspace(0.0, 0.03, 5))
    lift = np.array([0.0, 0.0, height])
    both = np.vstack([vertices + lift, vertices - lift])
    basis, moments = moments_of(both, np.vstack([triangles, triangles + len(vertices)]))
    whole = impedance_matrix(moments, 2.45e9, np.zeros(basis.triangles, dtype=complex))
    above = basis.plus % basis.triangles < len(triangles)
    expected = whole[np.ix_(above, above)] - whole[np.ix_(above, ~above)]

    plan = plan_tables((Layer(height, 1.0),), k, 0.06, 0.02)
    basis = board_basis(BoardMesh(vertices, triangles, np.array([[0, 1]]), PORT), 0)
    own = build_layered_moments(basis, triangles, plan)
    matrix = layered_matrix(own, plan.tables(np.array([k])), k, 0.0)
    assert np.abs(matrix - expected).max() < 5e-5 * np.abs(expected).max()


def test_air_board_is_a_patch_over_a_large_plate():
    # The disc is 2.5 wavelengths wide; its rim is worth about 0.01.
    layout = probe_patch("air:3mm", 0.056, 0.014, 0.30)
    finite = build_system(build_mesh(layout, Level.NORMAL), IDEAL)
    endless = built(layout, Level.NORMAL, 2.5e9)
    for frequency in (2.35e9, 2.45e9):
        difference = reflection(solve(finite, frequency)) - reflection(
            solve_layered(endless, frequency)
        )
        assert abs(difference) < 0.03


def test_air_board_sends_as_copper_over_a_large_plate():
    # Its rim adds ripples of about a tenth.
    layout = build_layout(
        stripline_design("air:6mm", 300, (52, 49), (24, 4, 2), (23, 4, 4), (2, 62), 28)
    )
    finite = build_system(build_mesh(layout, Level.COARSE), IDEAL)
    endless = built(layout, Level.COARSE, 2.5e9)
    one, other = solve(finite, 2.45e9), solve_layered(endless, 2.45e9)
    assert other.e_y / other.e_x == pytest.approx(one.e_y / one.e_x, abs=0.15)
    theta = np.radians([-30.0, 0.0, 30.0])
    flowing = board_currents(endless, other.currents, 2.45e9)
    for phi in (0.0, 1.0, 2.5):
        towards, along_theta, along_phi = direction_frame(theta, phi)
        field = radiated_field(finite, one.currents, 2.45e9, towards)
        found = space_field(flowing, theta, np.full(3, phi))
        for along, mine in zip((along_theta, along_phi), found, strict=True):
            expected = np.sum(field * along, axis=1)
            assert mine / mine[1] == pytest.approx(expected / expected[1], abs=0.2)


@pytest.mark.parametrize("name", BOARDS)
def test_power_in_is_power_out(name):
    layout, layers, middle = BOARDS[name]
    lossless = tuple(Layer(one.thickness, one.eps_r) for one in layers or layout.stack)
    system = built(layout, Level.COARSE, 1.06 * middle, lossless)
    for frequency in (0.93 * middle, 1.05 * middle):
        solution = solve_layered(system, frequency)
        flowing = board_currents(system, solution.currents, frequency)
        sent = power_into_space(flowing) + power_into_waves(flowing)
        assert sent / (solution.admittance.real / 2.0) == pytest.approx(1.0, abs=2e-3)


@pytest.mark.parametrize("number", range(20))
def test_power_of_patches_drawn_by_lot(number):
    draw = np.random.default_rng(number)
    frequency, eps_r = 10.0 ** draw.uniform(9.0, 10.0), round(draw.uniform(2.0, 10.5), 3)
    inside = SPEED_OF_LIGHT / frequency / eps_r**0.5
    height = inside * 10.0 ** draw.uniform(-2.3, -0.9)
    width, length = inside * draw.uniform(0.35, 0.7), inside * draw.uniform(0.36, 0.49)
    layout = board_patch(width, length, height, eps_r, frequency, draw.uniform(0.08, 0.4))
    system = built(layout, Level.COARSE, frequency, (Layer(height, eps_r),))
    solution = solve_layered(system, frequency)
    flowing = board_currents(system, solution.currents, frequency)
    accepted = solution.admittance.real / 2.0
    assert accepted > 0.0
    guided = power_into_waves(flowing) / accepted
    assert 1.0 - solution.lost + guided == pytest.approx(1.0, abs=5e-3)


@pytest.mark.parametrize("name", ["ceramic", "three layers"])
def test_losses_take_power(name):
    layout, _, middle = BOARDS[name]
    lossy = tuple(Layer(one.thickness, one.eps_r, 0.02) for one in layout.stack)
    without, within = (
        solve_layered(built(layout, Level.COARSE, middle, stack), middle)
        for stack in (tuple(Layer(one.thickness, one.eps_r) for one in lossy), lossy)
    )
    assert 0.0 < without.lost < within.lost - 0.1 < 0.9


def test_levels_agree_but_for_a_small_shift():
    layout = board_patch(29e-3, 29e-3, 1.6e-3, 4.3, 2.45e9, feed=0.2, tan=0.018)
    coarse, fine = (
        built(layout, level, 2.6e9, foil=layout.foil) for level in (Level.COARSE, Level.FINE)
    )
    target = reflection(solve_layered(fine, 2.43e9))
    shifted = [
        reflection(solve_layered(coarse, 2.43e9 * (1.0 + shift)))
        for shift in np.linspace(0.0, 3e-3, 7)
    ]
    assert min(abs(np.array(shifted) - target)) < 0.02
