"""Line properties against exact rows, textbook examples, scikit-rf and invariants."""

import tomllib
from itertools import product
from math import pi, sqrt
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from skrf import Frequency
from skrf.media import MLine

from core.constants import VACUUM_PERMEABILITY
from core.errors import OutOfRangeError
from core.lines.microstrip import line_properties, width_for_impedance
from core.lines.stack import Layer

PUBLISHED = Path(__file__).parents[2] / "published"


def rows(name):
    with (PUBLISHED / name).open("rb") as file:
        return tomllib.load(file)["rows"]


EXACT = rows("microstrip_quasi_static.toml")
TEXTBOOK = rows("microstrip_textbook.toml")
STILL = 1e3  # Hz: quasi-static at any size tried here

RATIOS = (0.1, 0.3, 1.0, 2.0, 5.0, 10.0, 20.0)
DENSE = (1.3, 1.5, 2.2, 3.5, 4.4, 6.15, 10.2)  # where both use the same equations throughout


@pytest.mark.parametrize("row", EXACT, ids=lambda row: row["id"])
def test_at_low_frequency_it_is_exact_within_half_a_percent(row):
    layers = (Layer(1e-3, row["eps_r"]),)
    line = line_properties(row["width_over_height"] * 1e-3, layers, STILL)
    assert line.characteristic_impedance == pytest.approx(row["impedance_ohm"], rel=0.0025)
    assert line.eps_eff == pytest.approx(row["eps_eff"], rel=0.0025)


@pytest.mark.parametrize(
    "row", [row for row in EXACT if row["id"].startswith("W")], ids=lambda row: row["id"]
)
def test_the_width_for_50_ohm_is_exact_within_half_a_percent(row):
    width = width_for_impedance(row["impedance_ohm"], (Layer(1e-3, row["eps_r"]),), STILL)
    assert width == pytest.approx(row["width_over_height"] * 1e-3, rel=0.005)


@pytest.mark.parametrize("row", TEXTBOOK, ids=lambda row: row["id"])
def test_textbook_synthesis(row):
    height = row["height_mm"] * 1e-3
    layers = (Layer(height, row["eps_r"]),)
    width = width_for_impedance(row["impedance_ohm"], layers, STILL)
    assert width / height == pytest.approx(row["width_over_height"], rel=row["width_tolerance"])
    still = line_properties(width, layers, STILL)
    assert still.eps_eff == pytest.approx(row["eps_eff"], rel=row["eps_eff_tolerance"])
    line = line_properties(width, layers, row["frequency_ghz"] * 1e9)
    length = row["phase_deg"] / 360.0 * line.guided_wavelength * 1e3
    assert length == pytest.approx(row["length_mm"], rel=row["length_tolerance"])


def test_textbook_losses():
    """The book's conductor loss leaves out the crowding of the current, here a factor 0.75."""
    row = TEXTBOOK[1]
    height, frequency = row["height_mm"] * 1e-3, row["frequency_ghz"] * 1e9
    sheet = row["sheet_resistance_ohm"]
    line = line_properties(
        row["width_over_height"] * height,
        (Layer(height, row["eps_r"], row["loss_tangent"]),),
        frequency,
        conductivity=pi * VACUUM_PERMEABILITY * frequency / sheet**2,
    )
    assert line.dielectric_attenuation == pytest.approx(
        row["dielectric_np_per_m"], rel=row["dielectric_tolerance"]
    )
    crowding = np.exp(-1.2 * (line.characteristic_impedance / 376.73) ** 0.7)
    uncrowded = line.conductor_attenuation / crowding * line.characteristic_impedance / 50.0
    assert uncrowded == pytest.approx(row["conductor_np_per_m"], rel=0.01)


def both(ratio, height, thickness, eps_r, frequency, loss_tangent):
    ours = line_properties(
        ratio * height,
        (Layer(height, eps_r, loss_tangent),),
        frequency.f,
        conductor_thickness=thickness,
        conductivity=5.8e7,
        roughness=0.5e-6,
    )
    theirs = MLine(
        frequency,
        w=ratio * height,
        h=height,
        t=thickness,
        ep_r=eps_r,
        rho=1 / 5.8e7,
        tand=loss_tangent,
        rough=0.5e-6,
        diel="frequencyinvariant",
    )
    return ours, theirs


@pytest.mark.parametrize("eps_r", DENSE)
def test_agrees_with_scikit_rf_where_the_equations_are_the_same(eps_r):
    """Same published equations, so only rounding is left; the issue asks for 0.5 %."""
    frequency = Frequency(0.2, 6.0, 12, "GHz")  # from 0.2 GHz the foil is over 3 skin depths
    for ratio, height, thickness in product(RATIOS, (0.5e-3, 1.6e-3, 5e-3), (18e-6, 70e-6)):
        ours, theirs = both(ratio, height, thickness, eps_r, frequency, 0.0)
        assert_allclose(ours.characteristic_impedance, theirs.z0_characteristic.real, rtol=1e-6)
        assert_allclose(ours.eps_eff, theirs.ep_reff_f.real, rtol=1e-6)
        assert_allclose(ours.conductor_attenuation, theirs.alpha_conductor, rtol=1e-6)


@pytest.mark.parametrize("eps_r", (1.05, 1.2, *DENSE))
def test_dielectric_loss_agrees_with_scikit_rf(eps_r):
    """It carries the loss in a complex permittivity, a difference of the second order."""
    frequency = Frequency(0.2, 6.0, 12, "GHz")
    for ratio in RATIOS:
        ours, theirs = both(ratio, 1.6e-3, 35e-6, eps_r, frequency, 0.002)
        assert_allclose(ours.dielectric_attenuation, theirs.alpha_dielectric, rtol=1e-4)


@pytest.mark.parametrize("eps_r", (1.0 + 1e-12, 1.05, 1.1, 1.2))
def test_over_foam_and_card_it_agrees_with_scikit_rf_at_low_frequency(eps_r):
    """Up to 1.6 GHz mm, before the published rise of the impedance goes astray there."""
    frequency = Frequency(0.2, 1.0, 5, "GHz")
    for ratio in RATIOS:
        ours, theirs = both(ratio, 1.6e-3, 35e-6, eps_r, frequency, 0.0)
        assert_allclose(ours.characteristic_impedance, theirs.z0_characteristic.real, rtol=0.003)
        assert_allclose(ours.eps_eff, theirs.ep_reff_f.real, rtol=1e-6)


def test_the_rise_of_impedance_has_no_step_where_its_model_changes():
    frequency = np.linspace(1e9, 8e9, 8)
    below, above = (
        line_properties(5e-3, (Layer(5e-3, eps_r),), frequency, conductor_thickness=35e-6)
        for eps_r in (1.3 - 1e-9, 1.3 + 1e-9)
    )
    assert_allclose(below.characteristic_impedance, above.characteristic_impedance, rtol=1e-8)


widths, heights = st.floats(3e-4, 0.02), st.floats(3e-4, 0.02)
permittivities = st.floats(1.0, 10.2)


@given(
    widths,
    heights,
    permittivities,
    st.floats(0.0, 1e-4),
    st.floats(1e8, 1e10),
    st.floats(0.01, 100),
)
def test_scaling_lengths_up_and_frequency_down_changes_nothing(
    width, height, eps_r, thickness, frequency, factor
):
    one = line_properties(width, (Layer(height, eps_r),), frequency, conductor_thickness=thickness)
    two = line_properties(
        width * factor,
        (Layer(height * factor, eps_r),),
        frequency / factor,
        conductor_thickness=thickness * factor,
    )
    for name in ("characteristic_impedance", "eps_eff"):
        assert_allclose(getattr(two, name), getattr(one, name), rtol=1e-12)
    assert_allclose(two.propagation_constant * factor, one.propagation_constant, rtol=1e-12)


@given(widths, heights, st.floats(1e8, 1e10))
def test_in_air_waves_travel_at_the_speed_of_light(width, height, frequency):
    line = line_properties(width, (Layer(height),), np.array([frequency, 1e6]))
    assert_allclose(line.eps_eff, 1.0, rtol=1e-14)
    assert_allclose(line.characteristic_impedance, line.characteristic_impedance[1], rtol=1e-14)


@given(widths, heights, permittivities, st.floats(0.0, 0.05))
def test_a_passive_line_slows_and_weakens_with_frequency(width, height, eps_r, loss_tangent):
    frequency = np.linspace(1e8, 39e6 / height, 60)
    layers = (Layer(height, eps_r, loss_tangent),)
    line = line_properties(width, layers, frequency, conductivity=5.8e7)
    assert np.all(np.diff(line.eps_eff) >= -1e-12)
    assert np.all((line.eps_eff >= 1.0) & (line.eps_eff <= eps_r * (1 + 1e-12)))
    assert np.all(line.propagation_constant.real > 0.0)
    assert np.all(line.dielectric_attenuation >= 0.0)


def test_air_that_loses_is_no_division_by_zero():
    """Just above 1 the filling factor is a quotient, at 1 its limit without dispersion."""
    one, two = (
        line_properties(5e-3, (Layer(1e-2, eps_r, 0.01),), 1e8).dielectric_attenuation
        for eps_r in (1.0, 1.0 + 2e-6)
    )
    assert one == pytest.approx(two, rel=1e-3)


@given(
    st.floats(0.05, 50.0), heights, st.floats(1.0, 10.2), st.floats(0.0, 7e-5), st.floats(1e8, 6e9)
)
def test_width_and_impedance_undo_each_other(ratio, height, eps_r, thickness, frequency):
    """Within the range of the dispersion, 0.13 wavelength of height."""
    frequency = min(frequency, 39e6 / height)
    layers = (Layer(height, eps_r),)
    line = line_properties(ratio * height, layers, frequency, conductor_thickness=thickness)
    width = width_for_impedance(
        float(line.characteristic_impedance), layers, frequency, conductor_thickness=thickness
    )
    assert width == pytest.approx(ratio * height, rel=1e-6)


@pytest.mark.parametrize("impedance", [1.0, 600.0])
def test_an_impedance_out_of_reach_names_the_range(impedance):
    with pytest.raises(OutOfRangeError, match=r"\d+ ohm can be reached") as error:
        width_for_impedance(impedance, (Layer(1.6e-3, 4.4),), 2.45e9)
    low, high = (float(text) for text in error.value.allowed.removesuffix(" ohm").split(" to "))
    for reached in (low * 1.01, high * 0.99):
        assert width_for_impedance(reached, (Layer(1.6e-3, 4.4),), 2.45e9) > 0.0


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"width": 0.0}, "line width is 0.0"),
        ({"width": float("nan")}, "line width is nan"),
        ({"width": 1e-6}, "width over spacer height is 0.001"),
        ({"frequency": 0.0}, "line frequency"),
        ({"frequency": [1e9, float("inf")]}, "line frequency"),
        ({"conductor_thickness": -1e-6}, "line conductor thickness"),
        ({"conductivity": 0.0}, "line conductivity"),
        ({"roughness": float("nan")}, "line roughness"),
        ({"layers": (Layer(1e-3, 50.0),)}, "relative permittivity is 50"),
    ],
)
def test_what_cannot_be_is_refused(change, message):
    arguments = {"width": 2e-3, "layers": (Layer(1e-3, 2.2),), "frequency": 1e9} | change
    with pytest.raises(OutOfRangeError, match=message):
        line_properties(**arguments)


def test_results_cannot_be_written_to():
    line = line_properties(2e-3, (Layer(1e-3, 2.2),), [1e9, 2e9])
    with pytest.raises(ValueError, match="read-only"):
        line.eps_eff[0] = 1.0


def test_rough_copper_loses_up_to_twice():
    """Limits of the correction: none for smooth copper, double for very rough copper."""
    smooth, rough, rougher = (
        line_properties(2e-3, (Layer(1e-3, 2.2),), 1e10, conductivity=5.8e7, roughness=size)
        for size in (0.0, 1e-6, 1e-3)
    )
    depth = 1.0 / sqrt(pi * VACUUM_PERMEABILITY * 1e10 * 5.8e7)
    expected = 1.0 + 2.0 / pi * np.arctan(1.4 * (1e-6 / depth) ** 2)
    assert rough.conductor_attenuation / smooth.conductor_attenuation == pytest.approx(expected)
    assert rougher.conductor_attenuation / smooth.conductor_attenuation == pytest.approx(2.0, 1e-3)
