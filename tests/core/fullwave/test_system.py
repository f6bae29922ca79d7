"""Whole antennas in free space: power, symmetry, scaling, static limit, convergence."""

from dataclasses import replace
from math import pi

import numpy as np
import pytest
from fullwave_shapes import probe_patch, small_ground, thick_air, thin_air
from mesh_variants import meshes

from core.constants import VACUUM_PERMITTIVITY
from core.design.defaults import default_design
from core.design.polarisation import Polarisation
from core.errors import ModelError
from core.fullwave.far_field import sphere_power
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.system import build_system, radiated_field, sheet_impedance, solve
from core.layout.build import build_layout
from core.layout.model import Foil, Role
from core.shapes.outline import Region, circle

DUAL_EDGE = {
    "default": default_design(),
    "thin": thin_air(),
    "thick": thick_air(),
    "small": small_ground(),
}
PATCHES = {
    f"patch {spacer} {disc}": probe_patch(f"air:{spacer}", side, 0.15 * side, disc)
    for spacer, side, disc in (("1.5mm", 0.058, 0.1), ("6mm", 0.055, 0.07), ("12mm", 0.05, 0.12))
}
LAYOUTS = {name: build_layout(design) for name, design in DUAL_EDGE.items()} | PATCHES


def solved(layout, level, frequency):
    system = build_system(build_mesh(layout, level), layout.foil, layout.stack)
    return system, solve(system, frequency)


def power_sent(system, solution):
    reach = np.ptp(system.mesh.vertices, axis=0).max()
    frequency = solution.frequency
    return sphere_power(
        lambda towards: radiated_field(system, solution.currents, frequency, towards),
        frequency,
        reach,
    )


def reflection(solution):
    return (1.0 - 50.0 * solution.admittance) / (1.0 + 50.0 * solution.admittance)


def wrong_over_right(solution):
    return (solution.e_x - 1j * solution.e_y) / (solution.e_x + 1j * solution.e_y)


@pytest.mark.parametrize("name", LAYOUTS)
@pytest.mark.parametrize("frequency", [2.2e9, 2.5e9])
def test_power_in_is_power_out(name, frequency):
    system, solution = solved(LAYOUTS[name], Level.COARSE, frequency)
    sent = power_sent(system, solution)
    accepted = solution.admittance.real / 2.0
    assert accepted > 0.0
    assert sent / accepted + solution.lost == pytest.approx(1.0, abs=2e-3)


def test_poor_foil_loses_the_power_that_it_takes():
    layout = LAYOUTS["thin"]
    lossy = replace(layout, foil=Foil(20e-6, 1e5))
    system, solution = solved(lossy, Level.COARSE, 2.45e9)
    sent = power_sent(system, solution)
    assert solution.lost > 0.05
    assert sent / (solution.admittance.real / 2) + solution.lost == pytest.approx(1.0, abs=2e-3)


def test_boresight_field_is_the_gain():
    # A patch over a plate about a wavelength wide: 8 to 10 dBi (common practice, no source).
    _, solution = solved(LAYOUTS["patch 6mm 0.07"], Level.NORMAL, 2.45e9)
    gain = 10 * np.log10(abs(solution.e_x) ** 2 + abs(solution.e_y) ** 2)
    assert 6.0 < gain < 10.0
    # Fed on the y axis, it is polarised along y.
    assert abs(solution.e_x) < 0.02 * abs(solution.e_y)


def test_mirror_image_swaps_the_sense():
    design = thin_air()
    left = replace(design, brief=replace(design.brief, polarisation=Polarisation.LHCP))
    _, one = solved(build_layout(design), Level.NORMAL, 2.45e9)
    _, two = solved(build_layout(left), Level.NORMAL, 2.45e9)
    assert abs(reflection(one) - reflection(two)) < 0.01
    assert abs(wrong_over_right(one) - 1.0 / wrong_over_right(two)) < 0.01


def test_scaled_antenna_at_the_scaled_frequency():
    # Lossless: with all lengths twice as large and half the frequency nothing changes.
    foil = Foil(50e-6, 1e15)
    layout = probe_patch("air:6mm", 0.055, 0.008, 0.09)
    _, one = solved(replace(layout, foil=foil), Level.COARSE, 2.5e9)
    twice = replace(
        probe_patch("air:12mm", 0.11, 0.016, 0.18), foil=foil, frequency=layout.frequency / 2
    )
    port = replace(twice.ports[0], diameter=2 * twice.ports[0].diameter)
    holes = tuple(replace(hole, diameter=2 * hole.diameter) for hole in twice.holes)
    _, two = solved(replace(twice, ports=(port,), holes=holes), Level.COARSE, 1.25e9)
    assert two.admittance == pytest.approx(one.admittance, rel=1e-4)


def love_capacitance(radius, height):
    """Capacitance of a disc over an infinite plane.

    Twice that of two discs 2 h apart, by E. R. Love's integral equation (Quart. J. Mech. Appl.
    Math. 2, 1949, 428-451; from memory): f - (1/pi) integral of c f / (c² + (x - t)²) = 1,
    c = 2 h / a, C = 2 eps0 a times the integral of f, for the two discs.
    """
    c = 2.0 * height / radius
    x, w = np.polynomial.legendre.leggauss(400)
    kernel = c / pi * w / (c**2 + (x[:, None] - x) ** 2)
    f = np.linalg.solve(np.eye(400) - kernel, np.ones(400))
    return 4.0 * VACUUM_PERMITTIVITY * radius * float(w @ f)


@pytest.mark.parametrize("height_mm", [1, 2, 4])
def test_static_limit_is_a_disc_capacitor(height_mm):
    # The probe, the coax's mouth and the plate's finite size are worth about one per cent.
    layout = probe_patch(f"air:{height_mm}mm", 0.04, 0.0, 0.12)
    pieces = tuple(
        replace(piece, region=Region(circle(0.04))) if piece.role is Role.TOP_COPPER else piece
        for piece in layout.pieces
    )
    _, solution = solved(replace(layout, pieces=pieces), Level.NORMAL, 30e6)
    capacitance = solution.admittance.imag / (2 * pi * 30e6)
    assert capacitance == pytest.approx(love_capacitance(0.02, height_mm * 1e-3), rel=0.015)


@pytest.mark.parametrize(("name", "tolerance"), [("thin", 0.03), ("thick", 0.02), ("small", 0.025)])
def test_match_and_field_ratio_converge(name, tolerance):
    # Against the finest level: a coarse mesh within `tolerance`, a normal one within 60 % of it.
    fine = solved(LAYOUTS[name], Level.FINE, 2.45e9)[1]
    for level, share in ((Level.COARSE, 1.0), (Level.NORMAL, 0.6)):
        other = solved(LAYOUTS[name], level, 2.45e9)[1]
        assert abs(reflection(other) - reflection(fine)) < share * tolerance
        assert abs(wrong_over_right(other) - wrong_over_right(fine)) < share * tolerance


def resonance(layout, level):
    """Frequency of the pole of the input impedance nearest to the band's middle."""
    system = build_system(build_mesh(layout, level), layout.foil, layout.stack)
    middle = 2.42e9
    for spread in (0.05, 0.015):
        x = spread * np.cos(pi * (2 * np.arange(7) + 1) / 14)
        z = np.array([1.0 / solve(system, middle * (1.0 + one)).admittance for one in x])
        rows = np.column_stack([np.ones(7), x, x**2, -z * x, -z * x**2])
        *_, first, second = np.linalg.lstsq(rows, z, rcond=None)[0]
        roots = np.roots([second, first, 1.0])
        middle = middle * (1.0 + roots[np.argmin(np.abs(roots))].real)
    return middle


@pytest.mark.parametrize(("spacer", "side"), [("1.5mm", 0.058), ("6mm", 0.0525)])
def test_resonance_converges(spacer, side):
    layout = probe_patch(f"air:{spacer}", side, 0.12 * side, 0.1)
    coarse, normal, fine = (resonance(layout, level) for level in list(Level)[1:])
    assert coarse == pytest.approx(fine, rel=3e-3)
    assert normal == pytest.approx(fine, rel=2e-3)


def test_edge_row_is_what_makes_a_coarse_mesh_true():
    layout = probe_patch("air:6mm", 0.0525, 0.0063, 0.1)
    fine = resonance(layout, Level.FINE)
    with_row = resonance(layout, Level.COARSE)
    with meshes(row=0.0):
        without = resonance(layout, Level.COARSE)
    assert without > 1.004 * fine
    assert abs(with_row - fine) < 0.3 * abs(without - fine)


def test_thick_foil_has_the_surface_resistance():
    # sqrt(pi f mu / sigma): copper at 1 GHz is 8.25 milliohm (D. M. Pozar, *Microwave
    # Engineering*, 4th ed., Wiley, 2012, sec. 1.7, from memory).
    value = sheet_impedance(Foil(1e-3, 5.8e7), 1e9)
    assert value == pytest.approx(8.25e-3 * (1 + 1j), rel=2e-3)


def test_thin_foil_has_its_direct_current_resistance():
    assert sheet_impedance(Foil(1e-6, 1e6), 1e6).real == pytest.approx(1.0, rel=1e-3)


def test_mesh_without_a_port_is_refused():
    layout = LAYOUTS["thin"]
    mesh = replace(build_mesh(layout, Level.COARSE), port=None)
    with pytest.raises(ModelError, match="no port"):
        build_system(mesh, layout.foil)
