"""Two-port algebra against scikit-rf, closed forms and a textbook example."""

import tomllib
from math import pi, sqrt
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose
from skrf import Frequency
from skrf.media import DefinedGammaZ0
from skrf.network import a2s, s2a

from core.lines.microstrip import line_properties, width_for_impedance
from core.lines.network import (
    cascade,
    line_two_port,
    series_two_port,
    shunt_two_port,
)
from core.lines.stack import Layer

PUBLISHED = Path(__file__).parents[2] / "published" / "quarter_wave.toml"
FREQUENCY = np.linspace(2e9, 3e9, 11)
LINE = line_properties(
    3e-3, (Layer(1.6e-3, 4.4, 0.02),), FREQUENCY, conductor_thickness=35e-6, conductivity=5.8e7
)


def matrix(two_port):
    parts = np.broadcast_arrays(two_port.a, two_port.b, two_port.c, two_port.d)
    return np.moveaxis(np.array(parts, dtype=complex).reshape(2, 2, -1), -1, 0)


def input_impedance(two_port, load):
    return (two_port.a * load + two_port.b) / (two_port.c * load + two_port.d)


def pieces():
    omega = 2j * pi * FREQUENCY
    return (
        line_two_port(LINE, 0.02),
        series_two_port(omega * 1e-9),
        shunt_two_port(omega * 1e-12),
        line_two_port(LINE, 0.005),
    )


def test_a_cascade_is_the_matrix_product():
    one, two, three, four = (matrix(piece) for piece in pieces())
    count = len(FREQUENCY)
    whole = matrix(cascade(*pieces()))
    assert whole.shape == (count, 2, 2)
    assert_allclose(whole, np.broadcast_to(one, whole.shape) @ two @ three @ four, rtol=1e-12)


def test_parts_may_be_cascaded_in_groups():
    one, two, three, four = pieces()
    grouped = cascade(cascade(one, two), cascade(three, four))
    assert_allclose(matrix(grouped), matrix(cascade(one, two, three, four)), rtol=1e-10)


def test_a_line_agrees_with_scikit_rf():
    media = DefinedGammaZ0(
        Frequency.from_f(FREQUENCY, unit="Hz"),
        gamma=LINE.propagation_constant,
        z0=LINE.characteristic_impedance,
        z0_port=50.0,
    )
    expected = s2a(media.line(0.02, "m").s, 50.0)
    assert_allclose(matrix(line_two_port(LINE, 0.02)), expected, rtol=1e-9)


def test_line_taken_away_undoes_line_added():
    back = matrix(cascade(line_two_port(LINE, 0.03), line_two_port(LINE, -0.03)))
    assert_allclose(back, np.broadcast_to(np.eye(2), back.shape), atol=1e-12)


def test_a_lossless_cascade_is_reciprocal_and_keeps_all_power():
    lossless = line_properties(3e-3, (Layer(1.6e-3, 4.4),), FREQUENCY)
    two_port = cascade(line_two_port(lossless, 0.02), shunt_two_port(2j * pi * FREQUENCY * 1e-12))
    assert_allclose(two_port.a * two_port.d - two_port.b * two_port.c, 1.0, rtol=1e-12)
    scattering = a2s(matrix(two_port))
    assert_allclose(np.sum(abs(scattering) ** 2, axis=1), 1.0, rtol=1e-9)


def test_open_and_shorted_lines():
    lossless = line_properties(3e-3, (Layer(1.6e-3, 4.4),), FREQUENCY)
    two_port = line_two_port(lossless, 0.01)
    phase = lossless.propagation_constant.imag * 0.01
    impedance = lossless.characteristic_impedance
    assert_allclose(input_impedance(two_port, 0.0), 1j * impedance * np.tan(phase), rtol=1e-9)
    assert_allclose(input_impedance(two_port, 1e15), -1j * impedance / np.tan(phase), rtol=1e-9)


def test_textbook_quarter_wave_transformer():
    """A line in air, so that its impedance is the same over the band."""
    with PUBLISHED.open("rb") as file:
        (row,) = tomllib.load(file)["rows"]
    air, centre = (Layer(1e-3),), 3e9
    source, load, swr = row["source_ohm"], row["load_ohm"], row["standing_wave_ratio"]
    assert sqrt(source * load) == pytest.approx(row["transformer_ohm"], rel=1e-3)
    width = width_for_impedance(row["transformer_ohm"], air, centre)
    half = 0.5 * row["fractional_bandwidth"]
    frequency = centre * np.array([1.0 - half, 1.0, 1.0 + half])
    line = line_properties(width, air, frequency)
    length = 0.25 * float(line.guided_wavelength[1])
    seen = input_impedance(line_two_port(line, length), load)
    reflection = abs((seen - source) / (seen + source))
    found = (1.0 + reflection) / (1.0 - reflection)
    assert found[1] == pytest.approx(1.0, abs=1e-3)
    assert_allclose(found[[0, 2]], swr, rtol=0.01)  # two digits are printed
