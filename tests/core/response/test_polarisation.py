"""Polarisation algebra against phasors stepped through time and published tables."""

import tomllib
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.design.polarisation import Polarisation
from core.response.polarisation import (
    axial_ratio_db,
    circular_components,
    intended_power,
    sense,
)

PUBLISHED = Path(__file__).parents[2] / "published" / "axial_ratio.toml"
with PUBLISHED.open("rb") as file:
    TABLE = tomllib.load(file)

angles = st.floats(-np.pi, np.pi)
sizes = st.floats(0.05, 20.0)


def stepped_ellipse(e_x: complex, e_y: complex) -> tuple[float, float]:
    """Axial ratio and turning direction (> 0 counter-clockwise from the front) in time."""
    phase = np.exp(1j * np.linspace(0.0, 2.0 * np.pi, 20_001))
    x, y = (e_x * phase).real, (e_y * phase).real
    radius = np.hypot(x, y)
    turning = np.sum(x[:-1] * y[1:] - x[1:] * y[:-1])
    return radius.max() / radius.min(), turning


@pytest.mark.parametrize("row", TABLE["rows"], ids=lambda row: row["id"])
def test_axial_ratio_from_amplitude_and_phase_error(row):
    amplitude = 10.0 ** (row["amplitude_error_db"] / 20.0)
    e_y = -1j * amplitude * np.exp(1j * np.deg2rad(row["phase_error_deg"]))
    assert axial_ratio_db(1.0, e_y) == pytest.approx(row["axial_ratio_db"], abs=6e-5)


@given(sizes, sizes, angles)
def test_ellipse_is_that_of_the_stepped_field(size_x, size_y, lag):
    e_x, e_y = size_x + 0j, size_y * np.exp(1j * lag)
    ratio, turning = stepped_ellipse(e_x, e_y)
    if ratio < 100.0:
        assert axial_ratio_db(e_x, e_y) == pytest.approx(20 * np.log10(ratio), abs=0.01)
        right, left = circular_components(e_x, e_y)
        # Seen from the front the wave comes towards the eye, so clockwise along the way of
        # propagation is counter-clockwise here.
        assert (abs(right) > abs(left)) == (turning > 0.0)


def test_x_first_and_y_a_quarter_later_is_right_hand():
    assert sense(1.0, -1j, Polarisation.RHCP) is Polarisation.RHCP
    assert sense(1.0, 1j, Polarisation.RHCP) is Polarisation.LHCP


def test_sense_is_silent_above_15_db():
    minor = 10.0 ** (-15.01 / 20.0)
    assert sense(1.0, -1j * minor, Polarisation.RHCP) is None
    assert sense(1.0, -1j * minor, Polarisation.LINEAR) is Polarisation.LINEAR
    minor = 10.0 ** (-14.99 / 20.0)
    assert sense(1.0, -1j * minor, Polarisation.LINEAR) is Polarisation.RHCP


def test_linear_wave_has_an_infinite_axial_ratio():
    assert np.isinf(axial_ratio_db(1.0, 0.5))
    assert np.isinf(axial_ratio_db(0.0, 1.0))


@pytest.mark.parametrize("minor", [1e-13, 1e-8, 1e-3])
def test_nearly_linear_keeps_its_digits(minor):
    assert axial_ratio_db(1.0, 1j * minor) == pytest.approx(-20 * np.log10(minor), rel=1e-13)


@pytest.mark.parametrize("error", [1e-12, 1e-9, 1e-5])
def test_nearly_circular_keeps_its_digits(error):
    # 1 + e against 1: the axial ratio is 1 + e.
    ratio_db = axial_ratio_db(1.0, -1j * (1.0 + error))
    assert ratio_db == pytest.approx(20 / np.log(10) * error, rel=1e-3)


@given(sizes, sizes, angles, angles)
def test_linear_power_is_the_best_of_all_directions(size_x, size_y, lag, turn):
    e_x, e_y = size_x + 0j, size_y * np.exp(1j * lag)
    tilt = np.linspace(0.0, np.pi, 3601)
    along = np.abs(e_x * np.cos(tilt) + e_y * np.sin(tilt)) ** 2
    best = intended_power(e_x, e_y, Polarisation.LINEAR)
    assert best == pytest.approx(along.max(), rel=1e-5)
    right = intended_power(e_x, e_y, Polarisation.RHCP)
    left = intended_power(e_x, e_y, Polarisation.LHCP)
    assert right + left == pytest.approx(size_x**2 + size_y**2)
