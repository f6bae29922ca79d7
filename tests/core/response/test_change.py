"""Plus and minus between meshes, and what something added changes."""

from dataclasses import replace

import numpy as np
import pytest

from core.design.polarisation import Polarisation
from core.fullwave.far_field import direction_frame
from core.fullwave.far_sphere import full_sphere
from core.response.change import change, change_details, change_text
from core.response.judge import State, judge
from core.response.model import (
    Mode,
    PatternCut,
    Reading,
    Response,
    Samples,
    Trust,
    TrustLevel,
)
from core.response.spread import with_spread

RHCP = Polarisation.RHCP
FINE = np.linspace(2.3e9, 2.6e9, 301)
FREQUENCIES = np.linspace(2.2e9, 2.7e9, 11)


def sphere_of(scale=1.0, slope=0.0):
    """Crossed dipoles, and a slope that lifts what is up front and lowers what is behind."""

    def field(theta, phi):
        _, along_theta, along_phi = direction_frame(theta, phi)
        weight = scale * (1.0 + slope * np.cos(theta))
        moment = np.array([1.0, -1.0j, 0.0])
        return weight * (along_theta @ moment), weight * (along_phi @ moment)

    return full_sphere(field, 2.45e9, 0.02)


def response(vswr=1.5, e_y=-1j, size=2.0, modes=(2.447e9, 2.512e9), sphere=None):
    n = FREQUENCIES.size
    sweep = Samples(
        frequency=FREQUENCIES,
        s11=np.full(n, (vswr - 1.0) / (vswr + 1.0), dtype=complex),
        z_in=np.full(n, 50.0 * vswr, dtype=complex),
        e_x=np.full(n, size + 0j),
        e_y=np.full(n, size * e_y),
        efficiency=np.full(n, 0.9),
    )
    theta = np.linspace(-np.pi, np.pi, 181)
    cut = PatternCut(0.0, theta, np.cos(theta) + 0j, 1j * np.cos(theta))
    return Response(
        engine="field",
        reference_impedance=50.0,
        sweep=sweep,
        spot=sweep.at(5),
        modes=tuple(
            Mode(name, f, 20.0) for name, f in zip(("along x", "along y"), modes, strict=False)
        ),
        directivity=8.0,
        cuts=(cut, cut),
        front_to_back=20.0,
        trust=dict.fromkeys(Reading, Trust(TrustLevel.GOOD, "solved")),
        sphere=sphere,
    )


def sentence(found, reading, vswr=2.0, ratio=3.0):
    return next(one for one in judge(found, RHCP, vswr, ratio) if one.reading is reading)


SHIFT = 1.5e-3


def test_plus_and_minus_is_the_difference_of_two_meshes_and_a_shift():
    """What is the same at all frequencies, a shift does not change."""
    fine, coarse = response(1.5, -0.8j), response(1.6, -0.9j, modes=(2.4495e9, 2.505e9))
    spread = with_spread(fine, coarse, "coarse", RHCP).spread
    assert spread.against == "coarse"
    assert spread.modes == pytest.approx((2.5e6 + SHIFT * 2.447e9, 7e6 + SHIFT * 2.512e9))
    assert spread.vswr == pytest.approx(0.1)
    # Axial ratios of 1/0.8 and 1/0.9; right-hand gains (1.8² and 1.9²)/2 of e_x².
    assert spread.axial_ratio_db == pytest.approx(20.0 * np.log10(0.9 / 0.8))
    assert spread.gain_db == pytest.approx(20.0 * np.log10(1.9 / 1.8))


def test_a_steep_match_is_surer_of_nothing_than_a_shift_leaves_it():
    """A resonator of Q 100, off its resonance by half a width, both meshes the same."""
    detuned = 200.0 * (FINE / 2.45e9 - 1.0) + 1.0
    z_in = 50.0 / (1.0 + 1.0j * detuned)
    s11 = (z_in - 50.0) / (z_in + 50.0)
    same = response()
    sweep = replace(same.sweep.at(np.zeros(len(FINE), dtype=int)), frequency=FINE, s11=s11)
    one = replace(same, sweep=sweep, spot=sweep.at(np.argmin(np.abs(FINE - 2.45e9))))
    vswr = [
        (1.0 + abs(g)) / (1.0 - abs(g))
        for g in (-1j * (1.0 + x) / (2.0 + 1j * (1.0 + x)) for x in (0.0, 200.0 * SHIFT))
    ]
    spread = with_spread(one, one, "coarse", RHCP).spread
    assert spread.vswr == pytest.approx(vswr[1] - vswr[0], rel=1e-2)
    assert spread.gain_db == pytest.approx(0.0, abs=1e-9)


def test_a_mode_that_the_coarser_mesh_has_not_got_has_no_plus_and_minus():
    spread = with_spread(response(), response(modes=(2.45e9,)), "coarse", RHCP).spread
    assert spread.modes == (pytest.approx(3e6 + SHIFT * 2.447e9), None)
    far = with_spread(response(), response(modes=(2.45e9, 2.1e9)), "coarse", RHCP).spread
    assert far.modes[1] is None


def test_readings_show_it_rounded_up():
    coarse = response(1.513, -0.991j, size=2.01, modes=(2.4496e9,))
    found = with_spread(response(), coarse, "coarse", RHCP)
    assert "VSWR 1.50 ± 0.02 at" in sentence(found, Reading.MATCH).sentence
    assert "axial ratio 0.00 ± 0.08 dB" in sentence(found, Reading.AXIAL_RATIO).sentence
    assert "± 0.1 dBi to right-hand" in sentence(found, Reading.GAIN).sentence
    told = sentence(found, Reading.RESONANCE).sentence
    assert "2.447 ± 0.007 GHz along x" in told
    assert "2.512 GHz along y" in told


@pytest.mark.parametrize(
    ("coarse", "target", "state"),
    [(1.55, 1.6, State.MET), (1.7, 1.6, State.LIKELY), (1.7, 1.49, State.MISSED)],
)
def test_a_target_within_the_plus_and_minus_is_only_likely_met(coarse, target, state):
    found = with_spread(response(1.5), response(coarse), "coarse", RHCP)
    assert sentence(found, Reading.MATCH, vswr=target).state is state


def test_meshes_that_turn_opposite_ways_vouch_for_no_axial_ratio():
    found = with_spread(response(e_y=-0.95j), response(e_y=0.95j), "coarse", RHCP)
    assert np.isnan(found.spread.axial_ratio_db)
    verdict = sentence(found, Reading.AXIAL_RATIO)
    assert verdict.state is State.LIKELY
    assert "±" not in verdict.sentence.replace("the ±", "")


def test_nothing_changes_between_a_response_and_itself():
    one = response(sphere=sphere_of())
    found = change(one, one, RHCP)
    assert (found.s11, found.vswr, found.axial_ratio_db, found.gain_db) == (0.0, 0.0, 0.0, 0.0)
    assert found.pattern_db == 0.0


def test_the_pattern_changes_by_what_it_gains_or_loses_where_it_is_strong():
    scaled = change(
        response(sphere=sphere_of()), response(sphere=sphere_of(scale=10 ** (-1 / 20))), RHCP
    )
    assert scaled.pattern_db == pytest.approx(1.0, abs=1e-6)
    # Up front by 20 log 1.2, straight behind by -20 log 0.8, the more.
    sloped = change(response(sphere=sphere_of()), response(sphere=sphere_of(slope=0.2)), RHCP)
    assert sloped.pattern_db == pytest.approx(-20.0 * np.log10(0.8), abs=1e-6)


def test_a_change_is_told_in_two_sentences():
    one, other = response(1.5, sphere=sphere_of()), response(1.8, -0.8j, sphere=sphere_of())
    assert change_text(one, other, RHCP) == (
        "VSWR 1.50 to 1.80, axial ratio 0.00 to 1.94 dB, gain 9.0 to 8.1 dBi, "
        "pattern by up to 0.0 dB."
    )
    assert change_details(one, other, RHCP) == (
        "S11 moves by 0.086, beam 0° to 0° from straight ahead, front to back 13.0 to 13.0 dB."
    )


def test_a_linear_antenna_has_no_axial_ratio_to_change():
    one = replace(response(e_y=0.0), sphere=None)
    assert "axial" not in change_text(one, one, Polarisation.LINEAR)
