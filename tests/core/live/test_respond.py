"""The whole instant model: laws that any antenna keeps, and published bands."""

import dataclasses
import tomllib
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from scipy.optimize import fsolve

from core.constants import SPEED_OF_LIGHT
from core.design.defaults import default_design
from core.design.edit import with_texts
from core.design.polarisation import Polarisation
from core.engines import ENGINES
from core.layout.build import build_layout
from core.layout.model import Bend, Foil, Segment
from core.lines.stack import Layer
from core.live.modes import element_modes
from core.live.respond import sample
from core.progress import SILENT
from core.response.bands import band_under, frequency_grid
from core.response.model import Reading
from core.response.polarisation import sense

PUBLISHED = Path(__file__).parents[2] / "published"
COPPER = Foil(35e-6, 5.8e7)
PERFECT = Foil(0.0, np.inf)
FREQUENCIES = np.linspace(2.2e9, 2.7e9, 41)
respond = ENGINES["live"]


def readings(samples):
    """Every number that a response is read by, as rows over frequency."""
    return np.stack(
        [
            samples.s11.real,
            samples.s11.imag,
            np.abs(samples.e_x),
            np.abs(samples.e_y),
            np.cos(np.angle(samples.e_y / samples.e_x)),
            samples.efficiency,
        ]
    )


def scaled_run(run, k):
    return tuple(
        Bend(part.width * k, part.mitred)
        if isinstance(part, Bend)
        else Segment(part.width * k, part.length * k)
        for part in run
    )


def scaled(layout, k):
    """The layout with every length times k and the frequency over k."""
    feed = layout.feed
    return dataclasses.replace(
        layout,
        ports=(dataclasses.replace(layout.ports[0], diameter=layout.ports[0].diameter * k),),
        element_width=layout.element_width * k,
        element_length=layout.element_length * k,
        ground_reach=layout.ground_reach * k,
        stack=tuple(dataclasses.replace(la, thickness=la.thickness * k) for la in layout.stack),
        foil=dataclasses.replace(layout.foil, thickness=layout.foil.thickness * k),
        frequency=layout.frequency / k,
        feed=dataclasses.replace(
            feed,
            probe=dataclasses.replace(
                feed.probe,
                x=feed.probe.x * k,
                y=feed.probe.y * k,
                diameter=feed.probe.diameter * k,
            ),
            trunk=scaled_run(feed.trunk, k),
            tee_widths=tuple(width * k for width in feed.tee_widths),
            arms=tuple(scaled_run(arm, k) for arm in feed.arms),
            landings=tuple(
                dataclasses.replace(land, x=land.x * k, y=land.y * k, width=land.width * k)
                for land in feed.landings
            ),
            clearance=feed.clearance * k,
        ),
    )


@pytest.mark.parametrize("k", [0.1, 0.5, 3.0])
@pytest.mark.parametrize("eps_r", [1.0, 2.2])
def test_scaling_all_lengths_scales_frequency(dual_edge, k, eps_r):
    layout = dual_edge(stack=(Layer(6e-3, eps_r),), foil=Foil(35e-6, np.inf))
    one = sample(layout, FREQUENCIES)
    other = sample(scaled(layout, k), FREQUENCIES / k)
    assert readings(other) == pytest.approx(readings(one), rel=1e-9, abs=1e-9)


def test_mirroring_the_copper_swaps_the_sense_and_nothing_else(dual_edge):
    one = respond(dual_edge(), FREQUENCIES, SILENT)
    other = respond(dual_edge(mirror=-1.0), FREQUENCIES, SILENT)
    for right, left in ((one.sweep, other.sweep), (one.spot, other.spot)):
        assert readings(left)[:4] == pytest.approx(readings(right)[:4], rel=1e-9, abs=1e-12)
        assert left.axial_ratio_db == pytest.approx(right.axial_ratio_db, rel=1e-9)
        assert left.gain_dbi(Polarisation.LHCP) == pytest.approx(
            right.gain_dbi(Polarisation.RHCP), rel=1e-9
        )
    assert other.directivity == pytest.approx(one.directivity, rel=1e-9)
    assert other.beamwidth == pytest.approx(one.beamwidth, rel=1e-9)


def test_the_first_branch_below_and_the_delayed_one_on_the_right_is_right_hand(dual_edge):
    # Matched halves a quarter wave apart: the field along y leads, so that E_y = -j E_x.
    layout = dual_edge(first=0.0, second=0.0, delay=3e-3, gap=2e-3, tee=0.0, lead=0.0)
    quarter = SPEED_OF_LIGHT / layout.frequency / 4.0
    arms = ((Segment(3e-3, 5e-3),), (Segment(3e-3, 5e-3 + quarter),))
    layout = dataclasses.replace(
        layout, feed=dataclasses.replace(layout.feed, arms=arms, tee_widths=())
    )
    spot = respond(layout, FREQUENCIES, SILENT).spot
    assert sense(complex(spot.e_x), complex(spot.e_y), Polarisation.RHCP) is Polarisation.RHCP
    phase = np.exp(1j * np.linspace(0.0, 2.0 * np.pi, 1001))
    x, y = (spot.e_x * phase).real, (spot.e_y * phase).real
    # From the front the wave comes towards the eye: right-hand turns counter-clockwise.
    assert np.sum(x[:-1] * y[1:] - x[1:] * y[:-1]) > 0.0


CHANGES = {
    "first": 16e-3,
    "second": 14e-3,
    "gap": 8e-3,
    "strip": 3.5e-3,
    "delay": 4.5e-3,
    "tee": 0.4,
    "width": 53.5e-3,
    "length": 52.5e-3,
    "stack": (Layer(5.5e-3),),
}


@pytest.mark.parametrize("name", CHANGES)
def test_each_freedom_moves_the_response(dual_edge, name):
    before = sample(dual_edge(), FREQUENCIES)
    after = sample(dual_edge(**{name: CHANGES[name]}), FREQUENCIES)
    assert np.max(np.abs(after.s11 - before.s11)) > 1e-3
    assert np.max(np.abs(after.axial_ratio_db - before.axial_ratio_db)) > 0.01


def test_a_lead_in_moves_the_match_but_not_the_polarisation(dual_edge):
    before = sample(dual_edge(), FREQUENCIES)
    after = sample(dual_edge(lead=25e-3), FREQUENCIES)
    assert np.max(np.abs(after.s11 - before.s11)) > 1e-3
    assert after.axial_ratio_db == pytest.approx(before.axial_ratio_db, rel=1e-9)


def test_a_thicker_pin_has_less_reactance(dual_edge):
    layout = dual_edge()
    probe = dataclasses.replace(layout.feed.probe, diameter=3e-3)
    thick = dataclasses.replace(layout, feed=dataclasses.replace(layout.feed, probe=probe))
    change = sample(thick, FREQUENCIES).z_in - sample(layout, FREQUENCIES).z_in
    assert change.real == pytest.approx(np.zeros(41), abs=1e-9)
    assert np.all(change.imag < -5.0)


def test_without_loss_all_accepted_power_is_radiated(dual_edge, probe_fed):
    # Air and perfect copper: no surface wave, no heat. Closes the power balance of the lines,
    # the bends, the tee, the cavity and the far field.
    for layout in (dual_edge(foil=PERFECT), probe_fed(stack=(Layer(3e-3),), foil=PERFECT)):
        found = sample(layout, FREQUENCIES)
        assert found.efficiency == pytest.approx(np.ones(41), rel=1e-9)


def test_on_a_board_surface_waves_take_their_share(dual_edge):
    layout = dual_edge(stack=(Layer(1.6e-3, 4.4),), foil=PERFECT, width=29e-3, length=28e-3)
    element = element_modes(29e-3, 28e-3, layout.stack, PERFECT)
    shares = [mode.losses.surface_efficiency for mode in (element.x, element.y)]
    found = sample(layout, FREQUENCIES).efficiency
    assert np.all((found >= min(shares) - 1e-9) & (found <= max(shares) + 1e-9))


sides = st.floats(40e-3, 70e-3)
layers = st.lists(
    st.builds(Layer, st.floats(0.3e-3, 8e-3), st.floats(1.0, 5.0), st.floats(0.0, 0.05)),
    min_size=1,
    max_size=3,
).map(tuple)


@settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(
    data=st.fixed_dictionaries(
        {
            "width": sides,
            "length": sides,
            "stack": layers,
            "first": st.floats(-15e-3, 17e-3),
            "second": st.floats(-15e-3, 17e-3),
            "gap": st.floats(0.3e-3, 12e-3),
            "strip": st.floats(0.5e-3, 5e-3),
            "delay": st.floats(0.5e-3, 6e-3),
            "tee": st.floats(0.05, 0.95),
            "lead": st.floats(0.0, 40e-3),
        }
    )
)
def test_no_feed_makes_power(dual_edge, data):
    found = sample(dual_edge(**data), np.linspace(0.5e9, 4e9, 36))
    assert np.all(np.abs(found.s11) <= 1.0)
    # Exactly 1 where corners that take more off a strip than it is long give a trace of power back.
    assert np.all((found.efficiency > 0.0) & (found.efficiency <= 1.0 + 1e-12))
    assert np.all(np.isfinite(found.axial_ratio_db))


@settings(
    max_examples=40, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(
    x=st.floats(-18.9e-3, 18.9e-3),
    y=st.floats(-18.9e-3, 18.9e-3),
    diameter=st.floats(0.5e-3, 3e-3),
    stack=layers,
)
def test_no_probe_makes_power(probe_fed, x, y, diameter, stack):
    layout = probe_fed(x=x, y=y, diameter=diameter, stack=stack)
    found = sample(layout, np.linspace(0.5e9, 5e9, 31))
    assert np.all(np.abs(found.s11) <= 1.0)
    assert np.all((found.efficiency > 0.0) & (found.efficiency < 1.0))


def test_spot_is_the_sweep_at_the_briefs_frequency(dual_edge):
    layout = dual_edge(frequency=float(FREQUENCIES[17]))
    found = respond(layout, FREQUENCIES, SILENT)
    assert found.spot.s11 == pytest.approx(found.sweep.s11[17], rel=1e-9)
    assert found.frequency == FREQUENCIES[17]


def test_pattern_meets_the_power_balance_at_boresight(dual_edge):
    found = respond(dual_edge(), FREQUENCIES, SILENT)
    total = abs(found.spot.e_x) ** 2 + abs(found.spot.e_y) ** 2
    for cut in found.cuts:
        middle = np.interp(0.0, cut.theta, cut.gain_dbi)
        assert middle == pytest.approx(10 * np.log10(total), abs=1e-9)
    assert found.directivity * found.spot.efficiency == pytest.approx(total)


def test_cuts_of_a_small_element_are_those_of_a_slot_over_ground(probe_fed):
    # A short slot on an infinite ground plane: even in its E plane, cosine in its H plane.
    tiny = probe_fed(width=0.1e-3, length=0.1e-3, stack=(Layer(1e-6),), y=-0.02e-3, diameter=1e-6)
    across, along = respond(tiny, FREQUENCIES, SILENT).cuts
    # Fed along y: phi = 90 degrees is the E plane.
    level = along.gain_dbi - along.gain_dbi[90]
    assert level == pytest.approx(np.zeros(181), abs=0.01)
    fall = 10 ** ((across.gain_dbi - across.gain_dbi[90]) / 20)
    assert fall == pytest.approx(np.cos(across.theta), abs=1e-3)


def test_every_reading_has_its_trust(dual_edge):
    assert set(respond(dual_edge(), FREQUENCIES, SILENT).trust) == set(Reading)


# Published bands: thin board, so that the even charge and the higher modes hardly count.

THIN = (Layer(0.4e-3, 2.2, 0.001),)


def sides_for(frequency_x, frequency_y, stack):
    """Sides of the element whose modes resonate at two frequencies, m."""

    def misses(sides):
        element = element_modes(*sides, stack, COPPER)
        return element.x.frequency / frequency_x - 1, element.y.frequency / frequency_y - 1

    return fsolve(misses, (40e-3, 40e-3), xtol=1e-12)


def bands():
    with (PUBLISHED / "circular_patch_bands.toml").open("rb") as file:
        return tomllib.load(file)


def nearly_square(frequency):
    """Sides with modes at f0 (1 -/+ 1/(2Q)), lower along x, and that quality factor."""
    square = sides_for(frequency, frequency, THIN)
    quality = element_modes(*square, THIN, COPPER).x.losses.total
    apart = 0.5 / quality
    return *sides_for(frequency * (1 - apart), frequency * (1 + apart), THIN), quality


@pytest.fixture
def single_feed(probe_fed):
    """A nearly square element fed on its diagonal: its samples and quality factor."""
    width, length, quality = nearly_square(2.45e9)
    layout = probe_fed(width=width, length=length, stack=THIN, x=7e-3, y=7e-3)
    return sample(layout, np.linspace(2.38e9, 2.52e9, 2001)), quality


@pytest.mark.parametrize("limit", [1, 3, 6])
def test_axial_ratio_bands_of_a_single_feed(single_feed, limit):
    samples, quality = single_feed
    ratios = samples.axial_ratio_db
    best = samples.frequency[np.argmin(ratios)]
    band = band_under(samples.frequency, ratios, best, float(limit))
    expected = bands()[f"axial_ratio_{limit}db"]
    assert band.width / best * quality == pytest.approx(expected, rel=0.02)


def test_vswr_band_of_a_single_feed(single_feed):
    samples, quality = single_feed
    i = int(np.argmin(samples.axial_ratio_db))
    # Matched at the centre as the source has it: the pin's reactance tuned out there.
    z_in = samples.z_in - 1j * samples.z_in[i].imag
    reflection = np.abs((z_in - z_in[i]) / (z_in + z_in[i].conj()))
    vswr = (1 + reflection) / (1 - reflection)
    band = band_under(samples.frequency, vswr, float(samples.frequency[i]), 2.0)
    assert band.width / samples.frequency[i] * quality == pytest.approx(bands()["vswr_2"], rel=0.02)


@pytest.mark.parametrize(
    ("x", "y", "expected"),
    [(7e-3, 7e-3, Polarisation.LHCP), (-7e-3, 7e-3, Polarisation.RHCP)],
)
def test_sense_of_a_single_feed_follows_its_quadrant(probe_fed, x, y, expected):
    # Longer along x: at the centre the mode along x is above its resonance and lags, the one
    # along y leads by as much; the signs of the two follow the quadrant of the probe.
    width, length, _ = nearly_square(2.45e9)
    layout = probe_fed(width=width, length=length, stack=THIN, x=x, y=y, frequency=2.45e9)
    spot = respond(layout, FREQUENCIES, SILENT).spot
    assert sense(complex(spot.e_x), complex(spot.e_y), expected) is expected


def test_vswr_band_of_a_linear_element(probe_fed):
    side, _ = sides_for(2.45e9, 2.45e9, THIN)
    quality = element_modes(side, side, THIN, COPPER).y.losses.total
    samples = sample(
        probe_fed(width=side, length=side, stack=THIN, y=-7e-3),
        np.linspace(2.4e9, 2.5e9, 2001),
    )
    i = int(np.argmax(samples.z_in.real))
    z_in = samples.z_in - 1j * samples.z_in[i].imag
    reflection = np.abs((z_in - z_in[i]) / (z_in + z_in[i].conj()))
    vswr = (1 + reflection) / (1 - reflection)
    band = band_under(samples.frequency, vswr, float(samples.frequency[i]), 2.0)
    expected = bands()["linear_vswr_2"]
    assert band.width / samples.frequency[i] * quality == pytest.approx(expected, rel=0.03)
    assert samples.axial_ratio_db[i] > 40.0


@pytest.mark.parametrize("feed", [(), (("feed.lead_in.length", "20 mm"), ("feed.tee", "9 mm"))])
def test_the_layout_of_the_other_sense_answers_as_the_mirror_image(feed):
    design = with_texts(default_design(), feed)
    left = with_texts(design, [("brief.polarisation", "lhcp")])
    one, other = (respond(build_layout(d), FREQUENCIES, SILENT) for d in (design, left))
    assert other.sweep.s11 == pytest.approx(one.sweep.s11, rel=1e-9)
    assert other.sweep.axial_ratio_db == pytest.approx(one.sweep.axial_ratio_db, rel=1e-9)
    right = one.sweep.gain_dbi(Polarisation.RHCP)
    assert other.sweep.gain_dbi(Polarisation.LHCP) == pytest.approx(right, rel=1e-9)
    assert other.spot.efficiency == pytest.approx(one.spot.efficiency, rel=1e-9)
    assert other.beamwidth == pytest.approx(one.beamwidth, rel=1e-9)
    assert other.trust == one.trust


def test_a_layout_far_beyond_the_formulas_stays_passive():
    design = with_texts(
        default_design(),
        [
            ("feed.delay_width", "190mm"),
            ("element.width", "29.9mm"),
            ("stock.spacer", "polystyrene:21.5mm"),
        ],
    )
    layout = build_layout(design)
    response = ENGINES["live"](layout, frequency_grid(layout.frequency), SILENT)
    assert np.max(np.abs(response.sweep.s11)) <= 1.0
    assert np.max(response.sweep.efficiency) <= 1.0 + 1e-12
    assert np.all(np.isfinite(response.sweep.realised_gain_dbi(design.brief.polarisation)))
