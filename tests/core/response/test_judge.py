"""Verdicts against a brief."""

import dataclasses
import pickle

import numpy as np
import pytest
from far_fields import crossed_dipoles, sphere_of, turned

from core.design.polarisation import Polarisation
from core.response.judge import State, judge
from core.response.model import (
    MeshReport,
    Mode,
    PatternCut,
    Reading,
    Response,
    Samples,
    Trust,
    TrustLevel,
)

FREQUENCIES = np.linspace(2.2e9, 2.7e9, 101)


def response_with(vswr=1.2, e_y=-1j, level=TrustLevel.GOOD):
    """A response that is the same at all frequencies."""
    s11 = (vswr - 1.0) / (vswr + 1.0)
    n = FREQUENCIES.size
    sweep = Samples(
        frequency=FREQUENCIES,
        s11=np.full(n, s11, dtype=complex),
        z_in=np.full(n, 50.0 * vswr, dtype=complex),
        e_x=np.full(n, 2.0 + 0j),
        e_y=np.full(n, 2.0 * e_y),
        efficiency=np.full(n, 0.87),
    )
    theta = np.linspace(-np.pi / 2, np.pi / 2, 181)
    cut = PatternCut(0.0, theta, 2.0 * np.cos(theta) + 0j, 2.0 * e_y * np.cos(theta))
    return Response(
        engine="live",
        reference_impedance=50.0,
        sweep=sweep,
        spot=sweep.at(50),
        modes=(Mode("along x", 2.40e9, 21.0), Mode("along y", 2.50e9, 22.0)),
        directivity=8.0,
        cuts=(cut, cut),
        front_to_back=None,
        trust={
            reading: Trust(level, "the plate is small", "a measurement will tell")
            for reading in Reading
        },
    )


def verdict(response, reading, polarisation=Polarisation.RHCP, vswr=1.5, ratio=3.0):
    found = judge(response, polarisation, vswr, ratio)
    return next(item for item in found if item.reading is reading)


def test_every_reading_is_judged_once():
    readings = [item.reading for item in judge(response_with(), Polarisation.RHCP, 2.0, 3.0)]
    assert sorted(readings) == sorted(Reading)


@pytest.mark.parametrize(("vswr", "state"), [(1.5, State.MET), (1.501, State.MISSED)])
def test_match_against_its_target(vswr, state):
    found = verdict(response_with(vswr=vswr), Reading.MATCH)
    assert found.state is state
    assert "asked for" in found.sentence


def test_a_near_miss_shows_the_digit_that_misses():
    assert "VSWR 1.501" in verdict(response_with(vswr=1.501), Reading.MATCH).sentence


def test_a_dead_short_is_missed_in_words():
    response = response_with()
    spot = dataclasses.replace(response.spot, s11=np.array(-1.0 + 0j))
    found = verdict(dataclasses.replace(response, spot=spot), Reading.MATCH)
    assert found.state is State.MISSED
    assert "VSWR infinite" in found.sentence


@pytest.mark.parametrize(
    ("e_y", "polarisation", "state", "text"),
    [
        (-1j, Polarisation.RHCP, State.MET, "Right-hand circular, axial ratio 0.00 dB"),
        (1j, Polarisation.LHCP, State.MET, "Left-hand circular"),
        (1j, Polarisation.RHCP, State.MISSED, "wrong way: left-hand"),
        (-2j, Polarisation.RHCP, State.MISSED, "axial ratio 6.02 dB, over the 3 dB"),
        (0.01j, Polarisation.RHCP, State.MISSED, "All but linear"),
        (0j, Polarisation.LINEAR, State.MET, "over 60 dB"),
        (-1j, Polarisation.LINEAR, State.MISSED, "short of the 15 dB"),
    ],
)
def test_polarisation_against_the_brief(e_y, polarisation, state, text):
    found = verdict(response_with(e_y=e_y), Reading.AXIAL_RATIO, polarisation)
    assert found.state is state
    assert text in found.sentence


def test_what_the_engine_cannot_vouch_for_is_never_met():
    found = judge(response_with(level=TrustLevel.UNKNOWN), Polarisation.RHCP, 10.0, 20.0)
    assert {item.state for item in found} == {State.UNKNOWN}
    assert all("the plate is small" in item.sentence for item in found)
    assert all("A measurement will tell." in item.sentence for item in found)


def test_rough_readings_are_likely_at_best():
    response = response_with(level=TrustLevel.ROUGH)
    found = verdict(response, Reading.MATCH)
    assert found.state is State.LIKELY
    assert found.sentence.startswith("Estimate: VSWR")
    assert verdict(response_with(vswr=9.0, level=TrustLevel.ROUGH), Reading.MATCH).state is (
        State.MISSED
    )
    assert "The plate is small." in verdict(response, Reading.RESONANCE).sentence


@pytest.mark.parametrize(
    ("reading", "text"),
    [
        (Reading.GAIN, "Gain 9.0 dBi to right-hand circular waves"),
        (Reading.EFFICIENCY, "87 %"),
        (Reading.BANDS, "2.2 GHz to 2.7 GHz (500 MHz or more)"),
        (Reading.RESONANCE, "2.4 GHz along x (Q 21) and 2.5 GHz along y (Q 22)"),
        (Reading.PATTERN, "Directivity 9.0 dBi, half-power beam 90°"),
    ],
)
def test_other_readings_are_noted_with_their_numbers(reading, text):
    found = verdict(response_with(), reading)
    assert found.state is State.NOTED
    assert text in found.sentence


def test_a_missing_band_is_said():
    assert "nowhere" in verdict(response_with(vswr=3.0), Reading.BANDS).sentence


def test_how_rough_a_resonance_is_is_told_of_equations_alone():
    rough = response_with(level=TrustLevel.ROUGH)
    solved = dataclasses.replace(rough, mesh=MeshReport("coarse", 300, ()))
    by_equations, by_solver = (verdict(one, Reading.RESONANCE).sentence for one in (rough, solved))
    assert by_equations == f"{by_solver} The plate is small."


def test_where_no_mode_was_found_no_frequency_is_named():
    found = verdict(dataclasses.replace(response_with(), modes=()), Reading.RESONANCE)
    said = "No resonance of the element stands out near the brief's frequency."
    assert (found.state, found.sentence) == (State.NOTED, said)


def test_front_to_back_is_told_where_it_is_known():
    response = dataclasses.replace(response_with(), front_to_back=100.0)
    assert "20.0 dB less behind" in verdict(response, Reading.PATTERN).sentence


def test_without_a_sphere_nothing_is_said_by_direction():
    assert "Strongest" not in verdict(response_with(), Reading.PATTERN).sentence


@pytest.mark.parametrize(
    ("tilt", "azimuth", "said"),
    [
        (0.0, 0.0, "Strongest straight ahead; axial ratio up to 1.2 dB within 30°."),
        (12.0, 216.0, "Strongest 12° down and left of straight ahead (216° from x); axial "),
        (12.0, 350.0, "Strongest 12° right of straight ahead (350° from x); axial ratio up to "),
        (75.0, 90.0, "Strongest 75° up of straight ahead (90° from x); of the other sense "),
        (150.0, 90.0, "Strongest behind the plate; of the other sense somewhere within 30°."),
    ],
)
def test_the_beam_is_told_as_it_is_seen_from_the_front(tilt, azimuth, said):
    sphere = sphere_of(crossed_dipoles(turned(*np.radians([tilt, azimuth]))))
    found = dataclasses.replace(response_with(), sphere=sphere)
    assert said in verdict(found, Reading.PATTERN).sentence


def test_a_linear_antenna_is_told_where_its_beam_is_and_no_axial_ratio():
    found = dataclasses.replace(response_with(), sphere=sphere_of(crossed_dipoles()))
    told = verdict(found, Reading.PATTERN, polarisation=Polarisation.LINEAR).sentence
    assert told.endswith("Strongest straight ahead.")


def test_a_response_goes_to_another_process_and_back_whole():
    one = dataclasses.replace(response_with(), sphere=sphere_of(crossed_dipoles()))
    other = pickle.loads(pickle.dumps(one))
    np.testing.assert_array_equal(other.sphere.e_phi, one.sphere.e_phi)
    assert judge(other, Polarisation.RHCP, 2.0, 3.0) == judge(one, Polarisation.RHCP, 2.0, 3.0)
