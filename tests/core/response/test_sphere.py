"""Readings off the far field over the sphere, against crossed dipoles that can be written down."""

from math import pi

import numpy as np
import pytest
from far_fields import FREQUENCY, WAVELENGTH, crossed_dipoles, sphere_of, turned

from core.design.polarisation import Polarisation
from core.fullwave.far_sphere import half_sphere
from core.response.polarisation import axial_ratio_db, intended_power
from core.response.sphere import (
    beam,
    field_at,
    pattern_cut,
    sense_reach,
    worst_axial_ratio_db,
)

RHCP, LHCP = Polarisation.RHCP, Polarisation.LHCP


def test_field_between_the_directions_of_the_grid_is_that_of_the_sources():
    """Three pairs of dipoles as far as half a wavelength from the origin."""
    places = 0.5 * WAVELENGTH * np.array([[1.0, 0, 0], [0, 0.6, -0.8], [-0.5, 0.5, 0.7]])
    field = crossed_dipoles(places=places)
    draw = np.random.default_rng(3)
    theta, phi = draw.uniform(0.0, pi, 200), draw.uniform(-4.0, 7.0, 200)
    found = field_at(sphere_of(field, 0.5 * WAVELENGTH), theta, phi)
    np.testing.assert_allclose(found, field(theta, phi), atol=3e-6)


def test_a_cut_at_any_azimuth_runs_on_through_boresight():
    field = crossed_dipoles(turned(0.4, 1.0))
    cut = pattern_cut(sphere_of(field), 0.7)
    assert np.degrees(cut.theta[[0, 1, -1]]) == pytest.approx([-180.0, -178.0, 180.0])
    expected = field(cut.theta, np.full(len(cut.theta), 0.7))
    np.testing.assert_allclose((cut.e_theta, cut.e_phi), expected, atol=1e-6)


def test_crossed_dipoles_point_where_they_are_turned():
    # 3/4 (1 + cos)²: 3/2 ahead, all of it right-hand.
    for tilt, azimuth in ((0.3, 3.49), (1.1, 5.5)):
        found = beam(sphere_of(crossed_dipoles(turned(tilt, azimuth))), RHCP)
        assert (found.tilt, found.azimuth) == pytest.approx((tilt, azimuth), abs=2e-3)
        assert found.gain == pytest.approx(1.5, rel=1e-5)
    behind = beam(sphere_of(crossed_dipoles(turned(0.3, 3.49))), LHCP)
    assert (behind.tilt, behind.azimuth) == pytest.approx((pi - 0.3, 3.49 - pi), abs=5e-3)


def test_a_beam_straight_ahead_has_no_tilt():
    assert beam(sphere_of(crossed_dipoles()), RHCP).tilt < 2e-3


@pytest.mark.parametrize("within", [30.0, 60.0])
def test_axial_ratio_of_crossed_dipoles_grows_as_one_over_the_cosine(within):
    """Seen from an angle one dipole is foreshortened by its cosine, the other is not."""
    worst = worst_axial_ratio_db(sphere_of(crossed_dipoles()), RHCP, np.radians(within))
    assert worst == pytest.approx(-20.0 * np.log10(np.cos(np.radians(within))), abs=1e-5)


def test_worst_axial_ratio_is_that_of_a_finer_search():
    field = crossed_dipoles(turned(0.35, 0.8), moment=(1.0, -0.8j, 0.2))
    theta, phi = np.meshgrid(np.linspace(0, pi / 6, 241), np.linspace(0, 2 * pi, 721))
    e_theta, e_phi = field(theta.ravel(), phi.ravel())
    finer = axial_ratio_db(e_theta, e_phi).max()
    assert worst_axial_ratio_db(sphere_of(field), RHCP) == pytest.approx(finer, abs=0.02)


def test_beam_is_that_of_a_finer_search():
    field = crossed_dipoles(turned(0.35, 0.8), moment=(1.0, -0.8j, 0.2))
    theta, phi = np.meshgrid(np.linspace(0, pi / 2, 361), np.linspace(0, 2 * pi, 1441))
    power = intended_power(*field(theta.ravel(), phi.ravel()), RHCP)
    found = beam(sphere_of(field), RHCP)
    assert found.gain == pytest.approx(power.max(), rel=1e-5)
    assert found.tilt == pytest.approx(theta.ravel()[np.argmax(power)], abs=6e-3)


def test_crossed_dipoles_turn_the_other_way_behind():
    sphere = sphere_of(crossed_dipoles())
    assert np.degrees(sense_reach(sphere, RHCP)) == pytest.approx(89.0, abs=1.1)
    assert sense_reach(sphere, LHCP) == 0.0
    assert worst_axial_ratio_db(sphere, LHCP) == np.inf


def test_dipoles_turned_sideways_change_sense_inside_the_cone():
    sphere = sphere_of(crossed_dipoles(turned(np.radians(75.0), 2.0)))
    assert np.degrees(sense_reach(sphere, RHCP)) == pytest.approx(14.5, abs=1.1)
    assert worst_axial_ratio_db(sphere, RHCP) == np.inf


def test_half_a_sphere_ends_where_its_angles_end():
    """Above an endless ground nothing is told of what is below it."""
    angles = np.radians(np.arange(0.0, 89.0, 2.0))
    half = half_sphere(crossed_dipoles(), FREQUENCY, 0.02, angles)
    assert np.degrees(pattern_cut(half, 0.3).theta[[0, -1]]) == pytest.approx([-88.0, 88.0])
    assert sense_reach(half, RHCP) == pytest.approx(angles[-1])
    assert beam(half, RHCP).gain == pytest.approx(1.5, rel=1e-5)
    assert worst_axial_ratio_db(half, RHCP) == pytest.approx(1.2494, abs=1e-3)
