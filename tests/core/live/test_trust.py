"""Where the instant model says that it cannot tell."""

import dataclasses

import numpy as np
import pytest

from core.design.defaults import default_design
from core.design.edit import with_texts
from core.engines import ENGINES
from core.layout.build import build_layout
from core.lines.stack import Layer
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.response.model import Reading, TrustLevel

TIED = (Reading.MATCH, Reading.AXIAL_RATIO, Reading.BANDS, Reading.GAIN)
POLARISED = (Reading.MATCH, Reading.AXIAL_RATIO, Reading.BANDS)


def trust_of(layout):
    return ENGINES["live"](layout, frequency_grid(layout.frequency, points=3), SILENT).trust


def test_two_branches_are_left_to_the_field_check_with_a_number(dual_edge):
    trust = trust_of(dual_edge())
    for reading in POLARISED:
        assert trust[reading].level is TrustLevel.UNKNOWN
        assert "typically differs by" in trust[reading].reason
        assert "field check" in trust[reading].remedy
    assert trust[Reading.GAIN].level is TrustLevel.ROUGH


def test_the_match_of_a_probe_is_rough_but_told(probe_fed):
    trust = trust_of(probe_fed(stack=(Layer(1.6e-3, 2.2),)))
    assert trust[Reading.MATCH].level is TrustLevel.ROUGH
    assert "0.12" in trust[Reading.MATCH].reason


def test_the_axial_ratio_is_told_only_where_one_mode_is_driven(probe_fed):
    on, off = (trust_of(probe_fed(stack=(Layer(1.6e-3, 2.2),), x=x)) for x in (0.3e-3, 6e-3))
    assert on[Reading.AXIAL_RATIO].level is on[Reading.BANDS].level is TrustLevel.ROUGH
    assert off[Reading.AXIAL_RATIO].level is off[Reading.BANDS].level is TrustLevel.UNKNOWN
    assert off[Reading.MATCH].level is TrustLevel.ROUGH


# At 2.5 GHz 0.008 wavelength is 0.959 mm, 0.06 wavelength 7.195 mm.
@pytest.mark.parametrize(
    ("inside", "outside", "text"), [(7.1e-3, 7.3e-3, "0.061 wave"), (1e-3, 0.9e-3, "0.0075 wave")]
)
def test_each_limit_of_thickness_turns_the_match_unknown(probe_fed, inside, outside, text):
    side = {"width": 30e-3, "length": 30e-3} if outside > 1e-3 else {}
    assert trust_of(probe_fed(stack=(Layer(inside, 2.2),), **side))[Reading.MATCH].level is (
        TrustLevel.ROUGH
    )
    trust = trust_of(probe_fed(stack=(Layer(outside, 2.2),), **side))
    for reading in (Reading.MATCH, Reading.BANDS):
        assert trust[reading].level is TrustLevel.UNKNOWN
        assert text in trust[reading].reason
        assert trust[reading].remedy
    assert trust[Reading.AXIAL_RATIO].level is TrustLevel.ROUGH


def test_a_strip_off_the_plate_is_unknown(dual_edge):
    layout = dual_edge()
    layout = dataclasses.replace(layout, feed=dataclasses.replace(layout.feed, over_ground=False))
    for reading in TIED:
        assert trust_of(layout)[reading].level is TrustLevel.UNKNOWN
    assert "not over the ground plate" in trust_of(layout)[Reading.MATCH].reason


def test_a_plate_that_does_not_even_cover_the_element_is_said_so(dual_edge):
    reason = trust_of(dual_edge(reach=-2e-3))[Reading.PATTERN].reason
    assert "element reaches 2 mm beyond the ground plate" in reason


def test_the_pattern_needs_a_wide_plate(dual_edge):
    assert trust_of(dual_edge())[Reading.PATTERN].level is TrustLevel.ROUGH
    assert trust_of(dual_edge(reach=20e-3))[Reading.PATTERN].level is TrustLevel.UNKNOWN


@pytest.mark.parametrize(
    ("height", "level", "text"),
    [(3e-3, TrustLevel.GOOD, "2 %"), (4e-3, TrustLevel.ROUGH, "4 %"), (16e-3, None, "0.133")],
)
def test_resonances_are_as_good_as_they_were_found(probe_fed, height, level, text):
    found = trust_of(probe_fed(stack=(Layer(height, 1.07),)))[Reading.RESONANCE]
    assert found.level is (level or TrustLevel.ROUGH)
    assert text in found.reason


@pytest.mark.parametrize(
    ("change", "words"),
    [
        (("brief.frequency", "5 GHz"), "too far from 5 GHz"),
        (("brief.frequency", "1.5 GHz"), "too far from 1.5 GHz"),
        (("element", "rect:150mmx52mm"), "wavelength long"),
    ],
)
def test_an_element_that_the_modes_do_not_describe_is_unknown(change, words):
    design = with_texts(default_design(), [("stock.ground", "disc:900mm"), change])
    layout = build_layout(design)
    response = ENGINES["live"](layout, [layout.frequency], SILENT)
    for reading in (Reading.MATCH, Reading.GAIN, Reading.EFFICIENCY, Reading.PATTERN):
        assert response.trust[reading].level is TrustLevel.UNKNOWN
        assert words in response.trust[reading].reason
    assert np.isfinite(response.directivity)
