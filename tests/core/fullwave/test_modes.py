"""Natural modes: poles of circuits that have them in closed form."""

import numpy as np
import pytest

from core.fullwave.modes import natural_modes
from core.fullwave.rational import fit_rational
from core.fullwave.sweep import Sweep

FREQUENCIES = np.linspace(0.9, 1.1, 11)
REACTANCE = 20j  # of a probe, ohm at the brief's frequency


def resonator(frequency, quality, resistance=100.0):
    """Impedance of a parallel resonator: its pole is as long as its frequency, exactly."""
    turned = FREQUENCIES / frequency - frequency / FREQUENCIES
    return resistance / (1.0 + 1j * quality * turned)


def swept(along_x, along_y):
    """Sweep of resonators in series behind a probe, each of which sends its own polarisation."""
    admittance = 1.0 / (along_x + along_y + REACTANCE * FREQUENCIES)
    values = np.column_stack([admittance, along_x * admittance, along_y * admittance])
    return Sweep(FREQUENCIES, values, fit_rational(FREQUENCIES, values, 8), 0.0)


def test_two_resonators_are_told_apart_with_frequency_and_quality():
    first, second = natural_modes(swept(resonator(0.97, 30.0), resonator(1.02, 50.0)), 1.0)
    assert (first.name, second.name) == ("along x", "along y")
    told = first.frequency, first.quality_factor, second.frequency, second.quality_factor
    assert told == pytest.approx((0.97, 30.0, 1.02, 50.0), rel=1e-6)


def test_a_resonance_far_from_the_brief_is_no_mode_of_the_element():
    found = natural_modes(swept(resonator(1.4, 30.0), resonator(1.02, 50.0)), 1.0)
    assert [mode.name for mode in found] == ["along y"]


def test_where_nothing_resonates_there_is_no_mode():
    flat = np.full(len(FREQUENCIES), 50.0 + 0j)
    assert natural_modes(swept(flat, flat / 2.0), 1.0) == ()
