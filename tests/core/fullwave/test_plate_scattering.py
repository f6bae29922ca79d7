"""Flat square plates in a wave from straight ahead, and a patch over a plate."""

from math import pi

import numpy as np
import pytest
from fullwave_shapes import grid, moments_of
from open_surfaces import foot_excitation, patch_over_plate, plate, wave_excitation

from core.constants import SPEED_OF_LIGHT
from core.fullwave.far_field import far_field
from core.fullwave.moments import currents, impedance_matrix

AHEAD = np.array([[0.0, 0.0, 1.0]])


def driven(vertices, triangles, excitation, wavelength=1.0):
    """Basis and currents, wavelengths in metres."""
    basis, moments = moments_of(vertices, triangles)
    frequency = SPEED_OF_LIGHT / wavelength
    matrix = impedance_matrix(moments, frequency, np.zeros(basis.triangles, dtype=complex))
    return basis, currents(matrix, excitation)


def section(vertices, triangles, directions=AHEAD):
    """Scattering cross-section in wavelengths² of a plate in a wave along x."""
    basis, solved = driven(vertices, triangles, wave_excitation(vertices, triangles))
    field = far_field(basis, solved, SPEED_OF_LIGHT, directions)
    return 4.0 * pi * np.sum(np.abs(field) ** 2, axis=1)


def graded(side, cells):
    """A plate with cells smaller towards its edges."""
    places = side / 2.0 * np.sin(np.linspace(-pi / 2.0, pi / 2.0, cells + 1))
    return grid(places, places)


def test_small_plate_scatters_by_its_polarisability():
    # Four times that of a square hole (Babinet), 0.259 l³ measured in an electrolytic tank by
    # S. B. Cohn, Proc. IRE 39, 1416-1421, 1951 (from memory); sigma = k⁴ alpha² / (4 pi).
    side = 0.01
    alpha = np.sqrt(4.0 * pi * section(*graded(side, 12))[0]) / (2.0 * pi) ** 2
    assert alpha / side**3 == pytest.approx(4.0 * 0.259, rel=0.01)


def test_plate_of_a_wavelength_ahead_and_behind():
    # A flat sheet sends alike to both sides. Optical 4 pi A² / wavelength² = 12.57; measured and
    # computed plates of this size lie a little under it (from memory, no table at hand).
    ahead, behind = section(*graded(1.0, 12), np.vstack([AHEAD, -AHEAD]))
    assert ahead == pytest.approx(behind, rel=1e-9)
    assert ahead == pytest.approx(4.0 * pi, rel=0.12)


def test_plate_of_a_wavelength_settles_in_step_with_the_cells():
    # First order in the cells: two meshes tell what a third will say.
    coarse, middle, fine = (section(*graded(1.0, cells))[0] for cells in (6, 9, 14))
    slope = (coarse - middle) / (1.0 / 6.0 - 1.0 / 9.0)
    assert middle + slope * (1.0 / 14.0 - 1.0 / 9.0) == pytest.approx(fine, rel=3e-3)
    assert fine == pytest.approx(middle, rel=0.015)


def test_plate_nears_the_optical_limit_as_it_grows():
    # Edge waves from both sides interfere: the rest swings about zero as it dies away.
    off = [
        10.0 * np.log10(section(*graded(side, 14))[0] / (4.0 * pi * side**4)) for side in (1.5, 3.0)
    ]
    assert 0.4 < off[0] < 1.0
    assert abs(off[1]) < 0.25


# What bempp-cl 0.4.2 says of the same triangles (computed; tests/bench/validate_elements.py).
def test_plate_is_as_a_boundary_element_library_has_it():
    assert section(*plate(8))[0] == pytest.approx(10.532, rel=1e-3)


@pytest.mark.parametrize(("size", "impedance"), [(0.95, 329.25 + 46.58j), (1.0, 149.91 - 102.34j)])
def test_patch_over_a_plate_is_as_a_boundary_element_library_has_it(size, impedance):
    mesh = patch_over_plate()
    excitation = foot_excitation(*mesh)
    _, solved = driven(*mesh, excitation, 1.0 / size)
    assert 1.0 / (excitation @ solved) == pytest.approx(impedance, rel=5e-3)
