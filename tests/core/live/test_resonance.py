"""Resonance of a side against limits, published ends and the field solver."""

import numpy as np
import pytest

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT
from core.design import spelled
from core.design.feed import ProbeFeed, ProbePin
from core.design.model import Brief, Design, Element
from core.design.polarisation import Polarisation
from core.design.stock import RectangleGround, SpacerLayer, Stock
from core.engines import ENGINES
from core.layout.build import build_layout
from core.layout.model import Foil
from core.lines.discontinuities import open_end_extension_kirschning
from core.lines.microstrip import line_properties
from core.lines.network import TwoPort
from core.lines.stack import Layer
from core.live.edge import edge_pair
from core.live.element import quality_factors
from core.live.modes import element_modes
from core.live.resonance import resonant_length, side_resonance
from core.progress import SILENT

COPPER = Foil(35e-6, 5.8e7)


def test_a_long_side_is_half_a_wavelength_of_the_line_under_it():
    # Extensions of a thin spacer vanish beside half a metre.
    stack = (Layer(0.2e-3, 4.3),)
    frequency, fringing = side_resonance(0.5, 0.02, stack)
    line = line_properties(0.02, stack, [frequency])
    assert fringing.eps_eff == pytest.approx(float(line.eps_eff[0]), rel=1e-9)
    assert frequency == pytest.approx(SPEED_OF_LIGHT / np.sqrt(fringing.eps_eff), rel=1e-3)


def test_ends_in_air_are_those_of_a_strip_where_it_is_thick_and_of_an_edge_where_it_is_thin():
    found = {}
    for height in (0.3e-3, 1e-3, 9e-3, 15e-3):
        frequency, fringing = side_resonance(50e-3, 48e-3, (Layer(height),))
        published = open_end_extension_kirschning(48e-3, height, 1.0, 1.0)
        # Hammerstad and Jensen's line holds more than its area: about 48e-3 / height + 1.4.
        bare = edge_pair(48e-3, 50e-3, height, 1.0, 1.0).extension(frequency)
        found[height] = fringing.extension / published, bare / fringing.extension
    assert [found[height][0] for height in (9e-3, 15e-3)] == pytest.approx([1.0, 1.0], rel=1e-9)
    assert found[0.3e-3][0] > 1.4
    assert 1.0 < found[0.3e-3][1] < found[1e-3][1] < 1.2


def slab_reactance(height, eps_r, frequency):
    """What a slab over ground is to a TM field along it, from a shorted line of its length, ohm."""
    k0 = 2.0 * np.pi * frequency / SPEED_OF_LIGHT
    upwards = k0 * np.sqrt(eps_r - 1.0)
    wave = FREE_SPACE_IMPEDANCE * upwards / (k0 * eps_r)
    line = TwoPort(
        np.cos(upwards * height),
        1j * wave * np.sin(upwards * height),
        1j * np.sin(upwards * height) / wave,
        np.cos(upwards * height),
    )
    return (line.b / line.d).imag


@pytest.mark.parametrize("eps_r", [2.33, 4.3, 10.2])
def test_ends_on_a_board_are_those_on_a_thin_slab_that_reacts_alike(eps_r):
    stack, width = (Layer(6e-3, eps_r),), 30e-3
    frequency, fringing = side_resonance(25e-3, width, stack)
    thin = 1e-7
    per_height = slab_reactance(thin, eps_r, frequency) / thin
    height = slab_reactance(6e-3, eps_r, frequency) / per_height
    published = open_end_extension_kirschning(width, height, eps_r, fringing.eps_eff)
    assert fringing.extension == pytest.approx(published, rel=1e-6)


def test_length_and_frequency_are_one_another_s_inverse():
    stack = (Layer(5e-3, 1.067), Layer(0.5e-3, 2.7))
    length = resonant_length(2.45e9, 50e-3, stack)
    assert side_resonance(length, 50e-3, stack)[0] == pytest.approx(2.45e9, rel=1e-9)


def test_permittivities_beyond_the_line_formulas_go_on_smoothly():
    below, at, above = (
        side_resonance(20e-3, 20e-3, (Layer(1e-3, eps_r),))[0] for eps_r in (19.9, 20.0, 20.1)
    )
    assert below > at > above
    assert (at - above) / (below - at) == pytest.approx(1.0, abs=0.1)


def test_stored_energy_takes_the_effective_sides():
    # Jackson 2007: 3/16 er/(p c1) Le/We lambda/h (from memory).
    element = element_modes(60e-3, 45e-3, (Layer(6e-3),), COPPER)
    side = element.y
    physical = quality_factors(side.width, side.length, 6e-3, 1.0, side.frequency)
    ratio = side.effective_length / element.x.effective_length
    expected = physical.space * ratio / (side.length / side.width)
    assert side.losses.space == pytest.approx(expected, rel=1e-12)


SOLVED = [  # permittivity, height in wavelengths, sides over half a wavelength, how close
    (1.0006, 0.029, (0.90, 0.91), 0.02),
    (4.3, 0.015, (0.45, 0.45), 0.02),
    (2.33, 0.060, (0.50, 0.54), 0.04),
    (3.55, 0.087, (0.34, 0.34), 0.04),
]


@pytest.mark.parametrize(("eps_r", "height", "sides", "tolerance"), SOLVED)
def test_modes_are_where_the_field_solver_finds_them(eps_r, height, sides, tolerance):
    half = SPEED_OF_LIGHT / 2e9 / 2.0
    width, length = (half * side for side in sides)
    plate = 2.2 * half
    design = Design(
        "bare",
        Brief(2e9, Polarisation.LINEAR),
        Stock(
            (SpacerLayer("slab", 2.0 * half * height, eps_r, 0.0),),
            spelled.foil("copper-35"),
            RectangleGround(plate, plate),
        ),
        Element(width, length),
        ProbeFeed(0.0, -0.3 * length, ProbePin(1e-3, 2e-3, 3e-3)),
        spelled.making("photo-etch"),
    )
    layout = build_layout(design)
    expected = element_modes(width, length, layout.stack, layout.foil).y
    band = expected.frequency * np.linspace(0.85, 1.15, 31)
    solved = ENGINES["field"](layout, band, SILENT)
    found = min(solved.modes, key=lambda mode: abs(mode.frequency - expected.frequency))
    assert expected.frequency == pytest.approx(found.frequency, rel=tolerance)
    assert expected.losses.total == pytest.approx(found.quality_factor, rel=0.2)
