"""Far fields against dipoles, small discs and reciprocity."""

from math import pi

import numpy as np
import pytest
import shapely
from fullwave_shapes import current_power, gap_excitation, grid, moments_of

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT
from core.fullwave.far_field import direction_frame, far_field
from core.fullwave.moments import currents, impedance_matrix
from core.fullwave.quadrature import triangle_rule
from core.fullwave.sizes import sizes_near
from core.fullwave.triangulate import triangulate

WAVELENGTH = 0.3
FREQUENCY = SPEED_OF_LIGHT / WAVELENGTH


def dipole(length):
    """Thin strip dipole along x, driven in its middle."""
    xs = np.linspace(-length / 2, length / 2, 31)
    vertices, triangles = grid(np.append(xs[:15], np.append(0.0, xs[16:])), [-1e-4, 1e-4])
    basis, moments = moments_of(vertices, triangles)
    matrix = impedance_matrix(moments, FREQUENCY, np.zeros(basis.triangles, dtype=complex))
    return basis, currents(matrix, gap_excitation(basis, vertices, 0.0))


def directivity(basis, solved, towards):
    field = far_field(basis, solved, FREQUENCY, np.array([towards]))
    density = np.sum(np.abs(field) ** 2) / (2.0 * FREE_SPACE_IMPEDANCE)
    return 4.0 * pi * density / current_power(basis, solved, FREQUENCY)


@pytest.mark.parametrize(
    ("length", "expected", "tolerance"),
    # Short dipole exact; half-wave dipole 4 / Cin(2 pi) = 1.6409 for a sine current
    # (published/cp_and_patterns.csv P53, P51).
    [(0.02, 1.5, 2e-4), (0.5, 1.641, 8e-3)],
)
def test_dipole_directivity(length, expected, tolerance):
    basis, solved = dipole(length * WAVELENGTH)
    assert directivity(basis, solved, [0.0, 0.0, 1.0]) == pytest.approx(expected, rel=tolerance)


def test_half_wave_dipole_beamwidth():
    # 78.1 degrees (published/cp_and_patterns.csv P52).
    basis, solved = dipole(0.48 * WAVELENGTH)
    theta = np.radians(np.linspace(0.0, 60.0, 601))
    towards, along_theta, _ = direction_frame(theta, 0.0)
    field = np.sum(far_field(basis, solved, FREQUENCY, towards) * along_theta, axis=1)
    half = np.interp(-0.5, -(np.abs(field / field[0]) ** 2), theta)
    assert np.degrees(2.0 * half) == pytest.approx(78.1, abs=0.6)


def test_dipole_is_silent_along_its_axis_and_polarised_along_it():
    basis, solved = dipole(0.5 * WAVELENGTH)
    broadside, axis = far_field(basis, solved, FREQUENCY, np.array([[0, 0, 1.0], [1.0, 0, 0]]))
    assert np.abs(axis).max() < 1e-4 * np.abs(broadside).max()
    assert np.abs(broadside[1:]).max() < 1e-3 * np.abs(broadside[0])


def test_field_of_a_short_dipole_is_that_of_its_current():
    # r E = -j omega mu I L / (4 pi) at broadside, I L the moment of the current.
    basis, solved = dipole(0.02 * WAVELENGTH)
    halves = basis.on_halves(solved) * basis.lengths / 2.0
    arms = basis.corners.mean(axis=1)[:, None] - basis.corners
    moment = np.einsum("at,tax->x", halves, arms)
    field = far_field(basis, solved, FREQUENCY, np.array([[0, 0, 1.0]]))[0]
    expected = -1j * 2 * pi / WAVELENGTH * FREE_SPACE_IMPEDANCE / (4 * pi) * moment
    assert field[0] == pytest.approx(expected[0], rel=1e-4)


def test_small_disc_scatters_by_its_polarisability():
    # Field along a disc of radius a: dipole moment eps0 16/3 a³ E (H. A. Bethe, Phys. Rev. 66,
    # 1944; J. D. Jackson, *Classical Electrodynamics*, sec. 9.5; from memory).
    sides = 60
    turn = 2 * pi / sides
    radius = (2 * pi / (sides * np.sin(turn))) ** 0.5  # as large as a circle of radius 1
    corners = radius * np.column_stack([f(turn * np.arange(sides)) for f in (np.cos, np.sin)])
    points, triangles = triangulate(shapely.Polygon(corners), sizes_near(0.15, 1, []), 0.02)
    basis, moments = moments_of(np.column_stack([points, np.zeros(len(points))]), triangles)
    k = 0.02
    frequency = k * SPEED_OF_LIGHT / (2 * pi)
    rule = triangle_rule(2)
    arms = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)[..., None, 0]
    mean = np.einsum("q,tqa->at", rule[:, 3], arms - basis.corners[:, None, :, 0])
    excitation = basis.tested((mean * basis.lengths / 2.0).astype(complex))
    matrix = impedance_matrix(moments, frequency, np.zeros(basis.triangles, dtype=complex))
    field = far_field(basis, currents(matrix, excitation), frequency, np.array([[0.0, 0.0, 1.0]]))
    assert field[0, 0] == pytest.approx(k**2 / (4 * pi) * 16.0 / 3.0, rel=9e-3)


def test_antenna_receives_as_it_sends():
    # A wave's reaction with the current is its far field: two different sums over the surface.
    basis, solved = dipole(0.7 * WAVELENGTH)
    towards, along_theta, _ = (v[None] for v in direction_frame(0.7, 0.4))
    k = 2 * pi / WAVELENGTH
    rule = triangle_rule(6)
    points = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)
    wave = np.exp(1j * k * points @ towards[0])[..., None] * along_theta[0]
    arms = points[:, :, None] - basis.corners[:, None]
    reaction = np.einsum("q,tqx,tqax->at", rule[:, 3], wave, arms) * basis.lengths / 2.0
    received = basis.tested(reaction) @ solved
    sent = far_field(basis, solved, FREQUENCY, towards)[0] @ along_theta[0]
    assert sent == pytest.approx(-1j * k * FREE_SPACE_IMPEDANCE / (4 * pi) * received, rel=1e-5)


def test_frame_is_right_handed_and_smooth_through_boresight():
    r, theta, phi = direction_frame(np.array([-1e-9, 1e-9, 1.0]), 0.3)
    np.testing.assert_allclose(np.cross(r, theta), phi, atol=1e-12)
    np.testing.assert_allclose(theta[0], theta[1], atol=1e-8)
