"""A board's whole Response: what it holds, and what it says of its rim."""

from dataclasses import replace
from math import pi

import numpy as np
import pytest
from board_shapes import board_dual_edge, board_patch

from core.constants import SPEED_OF_LIGHT
from core.fullwave.layered_trust import rim_doubts
from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.response.model import Reading, TrustLevel

FREQUENCIES = np.linspace(2.3e9, 2.6e9, 61)


class Counted:
    """Progress that counts."""

    def __init__(self):
        self.steps = 0

    def step(self, done, total):
        self.steps += 1


@pytest.fixture(scope="module")
def patch():
    layout = board_patch(29e-3, 29e-3, 1.6e-3, 4.3, 2.42e9, feed=0.2, tan=0.018)
    progress = Counted()
    response = respond(layout, FREQUENCIES, progress, Level.COARSE)
    return layout, response, progress


def test_mode_along_the_probe(patch):
    _, response, progress = patch
    # A square's other mode, at the same frequency, is hardly excited: told or not.
    (mode,) = (mode for mode in response.modes if mode.name == "along y")
    assert all(abs(one.frequency / mode.frequency - 1.0) < 2e-3 for one in response.modes)
    # E. Hammerstad 1975 (from memory): length, fringing and permittivity of such a patch.
    width, height, eps = 29e-3, 1.6e-3, 4.3
    slowed = (eps + 1) / 2 + (eps - 1) / 2 / np.sqrt(1 + 12 * height / width)
    reach = 0.412 * height * (slowed + 0.3) / (slowed - 0.258)
    reach *= (width / height + 0.264) / (width / height + 0.8)
    closed = SPEED_OF_LIGHT / (2 * (29e-3 + 2 * reach) * np.sqrt(slowed))
    assert mode.frequency == pytest.approx(closed, rel=0.03)
    # Loss tangent 0.018 alone makes 56.
    assert 20.0 < mode.quality_factor < 1 / 0.018
    assert 5 <= progress.steps <= 15


def test_gain_over_the_half_space_is_the_efficiency(patch):
    # Both cuts hold the pattern's quarter; a broad pattern is their mean in between.
    _, response, _ = patch
    power = [np.abs(cut.e_theta) ** 2 + np.abs(cut.e_phi) ** 2 for cut in response.cuts]
    theta = response.cuts[0].theta
    around = 0.5 * (power[0] + power[1])
    sent = np.trapezoid(around * np.abs(np.sin(theta)), theta) * pi / (4 * pi)
    assert sent == pytest.approx(float(response.spot.efficiency), rel=0.02)


def test_cuts_run_on_through_boresight(patch):
    _, response, _ = patch
    for cut in response.cuts:
        middle = len(cut.theta) // 2
        for field in (cut.e_theta, cut.e_phi):
            ends = field[middle - 1] + field[middle + 1]
            assert abs(ends - 2.0 * field[middle]) < 5e-3 * np.sqrt(response.directivity)
        assert np.degrees(cut.theta[-1]) < 89.0


def test_no_behind_of_an_endless_ground(patch):
    assert patch[1].front_to_back is None


def test_nearby_rim_makes_the_resonance_rough(patch):
    layout, response, _ = patch
    assert response.trust[Reading.RESONANCE].level is TrustLevel.ROUGH  # coarse mesh
    near = replace(layout, ground_reach=2.0 * layout.height)
    doubts = rim_doubts(0.04, 0.4, near)
    assert doubts[Reading.RESONANCE].level is TrustLevel.ROUGH
    assert "2.0 board heights" in doubts[Reading.RESONANCE].reason
    far = rim_doubts(1e-4, 0.9, layout)
    assert set(far) == {Reading.PATTERN}


def test_surface_waves_make_the_gain_rough(patch):
    # A tenth of the power sent on in phase: 20 log(1 + sqrt(0.1)) = 2.4 dB.
    doubts = rim_doubts(0.05, 0.5, patch[0])
    assert "2.4 dB at boresight" in doubts[Reading.GAIN].reason
    assert Reading.EFFICIENCY not in doubts  # 0.4 dB more at most
    assert "3.0 dB more" in rim_doubts(0.5, 0.5, patch[0])[Reading.EFFICIENCY].reason


def test_dual_edge_board_has_both_components():
    layout = board_dual_edge()
    response = respond(layout, FREQUENCIES, Counted(), Level.COARSE)
    gain = abs(response.spot.e_x) ** 2 + abs(response.spot.e_y) ** 2
    assert response.directivity == pytest.approx(gain / float(response.spot.efficiency))
    assert min(abs(response.spot.e_x), abs(response.spot.e_y)) > 0.2 * np.sqrt(gain)
    assert np.all(np.abs(response.sweep.s11) < 1.0)
