"""Samples, cuts and responses."""

import dataclasses

import numpy as np
import pytest

from core.design.polarisation import Polarisation
from core.response.model import (
    Mode,
    PatternCut,
    Reading,
    Response,
    Samples,
    Trust,
    TrustLevel,
)


def resonator(frequencies, centre=2.45e9, quality_factor=20.0, e_y=-1j):
    """A parallel resonator matched to 50 ohm at its centre, radiating a fixed polarisation."""
    detuning = quality_factor * (frequencies / centre - centre / frequencies)
    z_in = 50.0 / (1.0 + 1j * detuning)
    ones = np.ones_like(frequencies)
    return Samples(
        frequency=frequencies,
        s11=(z_in - 50.0) / (z_in + 50.0),
        z_in=z_in,
        e_x=2.0 * ones + 0j,
        e_y=2.0 * e_y * ones,
        efficiency=0.9 * ones,
    )


def make_response(sweep, spot, level=TrustLevel.GOOD):
    theta = np.linspace(-np.pi / 2, np.pi / 2, 181)
    cut = PatternCut(0.0, theta, 2.0 * np.cos(theta) + 0j, -2j * np.cos(theta))
    return Response(
        engine="live",
        reference_impedance=50.0,
        sweep=sweep,
        spot=spot,
        modes=(Mode("along x", 2.40e9, 21.0), Mode("along y", 2.50e9, 22.0)),
        directivity=8.0 / 0.9,
        cuts=(cut, dataclasses.replace(cut, phi=np.pi / 2)),
        front_to_back=None,
        trust={
            reading: Trust(level, "because of the test", "a measurement will tell")
            for reading in Reading
        },
    )


def test_arrays_are_read_only_copies():
    frequencies = np.linspace(2.2e9, 2.7e9, 5)
    samples = resonator(frequencies)
    frequencies[0] = 0.0
    assert samples.frequency[0] == 2.2e9
    with pytest.raises(ValueError, match="read-only"):
        samples.s11[0] = 0.0


def test_match_of_known_reflections():
    samples = resonator(np.array([2.45e9]))
    known = dataclasses.replace(samples, s11=np.array([1.0 / 3.0 + 0j]))
    assert known.vswr == pytest.approx(2.0)
    assert known.return_loss_db == pytest.approx(9.5424, abs=1e-4)
    short = dataclasses.replace(samples, s11=np.array([-1.0 + 0j]))
    assert np.isinf(short.vswr)
    assert np.isinf(samples.return_loss_db)


@pytest.mark.parametrize(
    ("polarisation", "power"),
    [(Polarisation.RHCP, 8.0), (Polarisation.LHCP, 0.0), (Polarisation.LINEAR, 4.0)],
)
def test_gain_to_each_polarisation_of_a_right_hand_wave(polarisation, power):
    samples = resonator(np.array([2.45e9]))
    gain = samples.gain_dbi(polarisation)
    assert 10.0 ** (gain / 10.0) == pytest.approx(power)


def test_realised_gain_counts_the_mismatch():
    samples = resonator(np.array([2.45e9]))
    half = dataclasses.replace(samples, s11=np.array([np.sqrt(0.5) + 0j]))
    loss = half.gain_dbi(Polarisation.RHCP) - half.realised_gain_dbi(Polarisation.RHCP)
    assert loss == pytest.approx(3.0103, abs=1e-4)


def test_band_of_a_resonator_is_the_published_one():
    # P40 of the outside data: a linear patch has a VSWR 2 band of 0.7071/Q (derived).
    frequencies = np.linspace(2.2e9, 2.7e9, 401)
    spot = resonator(np.array([2.4501e9])).at(0)
    band = make_response(resonator(frequencies), spot).vswr_band(2.0)
    assert band.width / 2.45e9 == pytest.approx(0.7071 / 20.0, rel=1e-3)


def test_spot_decides_a_band_that_the_grid_steps_over():
    frequencies = np.linspace(2.2e9, 2.7e9, 4)
    spot = resonator(np.array([2.45e9])).at(0)
    response = make_response(resonator(frequencies), spot)
    assert response.vswr_band(2.0) is not None
    assert response.frequency == 2.45e9


def test_no_band_where_the_spot_is_outside_the_sweep():
    spot = resonator(np.array([3e9])).at(0)
    assert make_response(resonator(np.linspace(2.2e9, 2.7e9, 4)), spot).vswr_band() is None


def test_axial_ratio_band_of_a_circular_wave_is_the_whole_sweep():
    frequencies = np.linspace(2.2e9, 2.7e9, 11)
    spot = resonator(np.array([2.45e9])).at(0)
    band = make_response(resonator(frequencies), spot).axial_ratio_band()
    assert (band.low, band.high) == (2.2e9, 2.7e9)
    assert band.open_low and band.open_high


def test_beamwidth_of_a_cosine_field_is_90_degrees():
    theta = np.linspace(-np.pi / 2, np.pi / 2, 721)
    cut = PatternCut(0.0, theta, np.cos(theta) + 0j, np.zeros_like(theta) + 0j)
    assert np.rad2deg(cut.beamwidth) == pytest.approx(90.0, abs=0.01)


def test_a_beam_that_never_falls_is_as_wide_as_the_cut():
    theta = np.linspace(-np.pi / 2, np.pi / 2, 91)
    cut = PatternCut(0.0, theta, np.ones_like(theta) + 0j, np.zeros_like(theta) + 0j)
    assert cut.beamwidth == pytest.approx(np.pi)
