"""Few solved frequencies joined by projection: against the very equations solved in between."""

import numpy as np
import pytest
from board_shapes import board_dual_edge
from fullwave_shapes import thin_air

from core.design.defaults import default_design
from core.errors import Cancelled
from core.fullwave.board_kernels import BoardKernels
from core.fullwave.equations import Equations, project
from core.fullwave.far_field import boresight_weights
from core.fullwave.layered_fields import space_field
from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.layered_system import (
    board_currents,
    build_layered_system,
    layered_equations,
)
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.respond import respond
from core.fullwave.sweep import first_points
from core.fullwave.system import build_system, equations, radiated_field
from core.layout.build import build_layout
from core.progress import SILENT
from core.response.model import TrustLevel

FREQUENCY = 2.45e9
BAND = (0.9 * FREQUENCY, 1.1 * FREQUENCY)
BETWEEN = np.linspace(*BAND, 7) * (1.0 + 1e-3)


def air():
    layout = build_layout(thin_air())
    system = build_system(build_mesh(layout, Level.QUICK), layout.foil, layout.stack)
    return system, lambda frequency: equations(system, frequency)


def board():
    layout = board_dual_edge()
    mesh = build_board_mesh(layout, Level.QUICK)
    system = build_layered_system(mesh, BoardKernels(layout.stack, layout.foil, 1.11 * FREQUENCY))
    return system, lambda frequency: layered_equations(system, frequency)


def solved(posed):
    currents = np.linalg.solve(posed.matrix, posed.excitation)
    return np.array([posed.admittance(currents), *(posed.boresight @ currents)])


def reflection(admittance):
    return (1.0 - 50.0 * admittance) / (1.0 + 50.0 * admittance)


def network(frequency):
    """Six coupled resonant loops: impedance times frequency is a parabola in it."""
    random = np.random.default_rng(5)
    coupling = random.uniform(-0.04, 0.04, (6, 6))
    inductance = np.diag(random.uniform(0.9, 1.1, 6)) + coupling + coupling.T
    stiffness = np.diag(random.uniform(0.9, 1.1, 6))
    resistance = np.diag(random.uniform(0.02, 0.1, 6))
    s = 1j * frequency
    ports = random.uniform(-1.0, 1.0, (3, 6)).astype(complex)
    matrix = s * inductance + resistance + stiffness / s
    return Equations(frequency, matrix, ports[0], 0.3j * frequency, ports[1:] * frequency)


def test_a_network_is_met_where_the_vectors_span_it():
    projection, _ = project(network, np.array([0.8, 1.0, 1.2]), SILENT)
    for frequency in np.linspace(0.75, 1.25, 23):
        expected = solved(network(float(frequency)))
        # Nine vectors span six loops: only rounding is left.
        np.testing.assert_allclose(projection.quantities(frequency), expected, rtol=1e-9)


@pytest.mark.parametrize("antenna", [air, board])
def test_antennas_are_met_between_the_solved_frequencies(antenna):
    _, pose = antenna()
    projection, kept = project(pose, first_points(BAND, FREQUENCY, 3), SILENT)
    assert FREQUENCY in kept
    told = np.array([projection.quantities(one) for one in BETWEEN])
    true = np.array([solved(pose(one)) for one in BETWEEN])
    # A fifth of what the quick mesh itself costs.
    assert np.abs(reflection(told[:, 0]) - reflection(true[:, 0])).max() < 2e-3
    missed = np.linalg.norm(told[:, 1:] - true[:, 1:], axis=1)
    assert (missed / np.linalg.norm(true[:, 1:], axis=1)).max() < 6e-3


def test_solved_frequencies_are_met_themselves():
    _, pose = air()
    projection, kept = project(pose, first_points(BAND, FREQUENCY, 3), SILENT)
    for frequency, (posed, currents) in kept.items():
        expected = solved(posed)
        np.testing.assert_allclose(projection.quantities(frequency), expected, rtol=1e-5)
        exact = np.linalg.solve(posed.matrix, posed.excitation)
        np.testing.assert_allclose(currents, exact, atol=1e-3 * np.abs(exact).max())


def test_boresight_of_each_function_is_the_far_field_there():
    random = np.random.default_rng(1)
    system, _ = air()
    basis = system.moments.basis
    currents = random.normal(size=basis.count) + 1j * random.normal(size=basis.count)
    up = radiated_field(system, currents, FREQUENCY, np.array([[0.0, 0.0, 1.0]]))[0]
    told = boresight_weights(basis, FREQUENCY) @ currents
    np.testing.assert_allclose(told, up[:2], rtol=1e-10)
    system, pose = board()
    basis = system.moments.basis
    currents = random.normal(size=basis.count) + 1j * random.normal(size=basis.count)
    flowing = board_currents(system, currents, FREQUENCY)
    up = np.concatenate(space_field(flowing, np.zeros(1), np.zeros(1)))
    np.testing.assert_allclose(pose(FREQUENCY).boresight @ currents, up, rtol=1e-10)


def test_it_can_be_cancelled():
    class Stopper:
        def step(self, done, total):
            raise Cancelled

    with pytest.raises(Cancelled):
        project(network, np.array([0.8, 1.0]), Stopper())


def test_the_quick_level_says_what_it_is_and_lies_near_the_normal_one():
    design = default_design()
    layout = build_layout(design)
    frequencies = np.linspace(0.9, 1.1, 41) * design.brief.frequency
    quick, normal = (
        respond(layout, frequencies, SILENT, level) for level in (Level.QUICK, Level.NORMAL)
    )
    for trust in quick.trust.values():
        assert trust.level is TrustLevel.ROUGH
        assert trust.reason == "quick mesh, 3 frequencies solved, not checked between them"
    # Twice what docs/models/fullwave-air.md gives for the quick level.
    assert np.abs(quick.sweep.s11 - normal.sweep.s11).max() < 0.1
    assert float(quick.spot.efficiency) == pytest.approx(float(normal.spot.efficiency), abs=0.01)
