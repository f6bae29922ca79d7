"""Bands and frequency grids."""

import numpy as np
import pytest

from core.errors import OutOfRangeError
from core.response.bands import band_under, frequency_grid


def test_edges_of_a_triangle_are_interpolated_exactly():
    frequencies = np.linspace(0.0, 10.0, 8)  # no point falls on an edge
    band = band_under(frequencies, np.abs(frequencies - 5.3), 5.3, 1.7)
    # At 5.3 itself the values between the points are a chord of the V, so the true edges hold.
    assert band.low == pytest.approx(3.6, abs=1e-12)
    assert band.high == pytest.approx(7.0, abs=1e-12)
    assert not band.open_low and not band.open_high


def test_only_the_stretch_around_the_frequency_counts():
    frequencies = np.arange(7.0)
    values = np.array([0.0, 3.0, 1.0, 1.0, 3.0, 0.0, 0.0])
    band = band_under(frequencies, values, 2.5, 2.0)
    assert (band.low, band.high) == (1.5, 3.5)
    assert band.width == 2.0


@pytest.mark.parametrize("frequency", [1.0, -0.1, 6.1])
def test_no_band_over_the_limit_or_outside(frequency):
    values = np.array([0.0, 3.0, 1.0, 1.0, 3.0, 0.0, 0.0])
    assert band_under(np.arange(7.0), values, frequency, 2.0) is None


def test_a_band_to_the_end_of_the_sweep_is_open_there():
    band = band_under(np.arange(4.0), np.array([1.0, 1.0, 1.0, 3.0]), 1.0, 2.0)
    assert (band.low, band.open_low) == (0.0, True)
    assert (band.high, band.open_high) == (2.5, False)


@pytest.mark.parametrize("worst", [np.inf, np.nan])
def test_infinite_and_unknown_values_are_over_any_limit(worst):
    band = band_under(np.arange(3.0), np.array([worst, 1.0, worst]), 1.0, 2.0)
    assert band.low == pytest.approx(1.0, abs=1e-5)
    assert band.high == pytest.approx(1.0, abs=1e-5)
    assert band_under(np.arange(3.0), np.full(3, worst), 1.0, 2.0) is None


def test_grid_defaults_to_ten_per_cent_either_side():
    grid = frequency_grid(2.45e9)
    assert grid.shape == (201,)
    assert grid[[0, -1]] == pytest.approx([2.205e9, 2.695e9])


@pytest.mark.parametrize(
    ("start", "stop", "points", "text"),
    [
        (3e9, 2e9, 11, "to: .*not above the start"),
        (2e9, 2e9, 11, "to: .*not above the start"),
        (2e9, 3e9, 1, "points: 1 is out of range; accepted: 2 to 20001"),
        (0.0, 3e9, 11, "from: .*out of range"),
        (2e9, float("inf"), 11, "to: .*out of range"),
    ],
)
def test_impossible_grids_are_refused(start, stop, points, text):
    with pytest.raises(OutOfRangeError, match=text):
        frequency_grid(2.45e9, start, stop, points)
