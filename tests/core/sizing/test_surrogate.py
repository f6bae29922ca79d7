"""The stand-in for solved residuals: through what is known, with true slopes."""

import numpy as np
import pytest
from scipy.optimize import approx_fprime

from core.sizing.surrogate import fitted, linearised, nothing

STEPS = np.array([0.1, 0.05, 0.2])
SLOPE = np.array([[5.0, -8.0, 2.0], [-3.0, 10.0, 1.0]])


def straight(turns):
    return SLOPE @ turns + [0.4, -0.2]


def bent(turns):
    return straight(turns) + np.array([np.sin(9.0 * turns[0]), np.cos(14.0 * turns[1])])


@pytest.fixture
def places():
    return np.random.default_rng(4).uniform(0.3, 0.5, size=(8, 3))


def test_it_goes_through_what_was_solved_but_for_the_noise_of_meshes(places):
    solved = np.array([bent(place) for place in places])
    model = fitted(nothing(2, 3), places, solved, STEPS, 1.0)
    for place, value in zip(places, solved, strict=True):
        assert model(place)[0] == pytest.approx(value, abs=0.05)


def test_slopes_are_those_of_its_values(places):
    base = linearised(straight, places[0], STEPS)
    model = fitted(base, places, np.array([bent(place) for place in places]), STEPS, 0.5)
    at = np.array([0.41, 0.37, 0.33])
    for i in range(2):
        by_differences = approx_fprime(at, lambda turns, i=i: model(turns)[0][i], 1e-7)
        assert model(at)[1][i] == pytest.approx(by_differences, rel=1e-4, abs=1e-4)


def test_a_base_that_is_right_is_not_corrected(places):
    base = linearised(straight, places[0], STEPS)
    model = fitted(base, places, np.array([straight(place) for place in places]), STEPS, 1.0)
    at = np.array([0.6, 0.2, 0.7])
    assert model(at)[0] == pytest.approx(straight(at), abs=1e-9)
    assert model(at)[1] == pytest.approx(SLOPE)


def test_without_a_base_a_slope_is_found_from_one_look_at_each_freedom():
    centre = np.full(3, 0.4)
    places = np.array([centre, *(centre + way for way in np.diag(0.4 * STEPS))])
    steep = np.array([2.0 + 10.0 * SLOPE @ (place - centre) for place in places])
    model = fitted(nothing(2, 3), places, steep, STEPS, 1.0)
    # It expects bends of about 4 in a step, which leave slopes over 0.4 of it open by 0.8.
    assert model(centre)[1] * STEPS == pytest.approx(10.0 * SLOPE * STEPS, abs=0.8)


def test_a_shift_of_the_base_is_learnt_from_one_solution():
    # Space mapping: a coarse model that is wrong by a constant is put right by one fine value.
    centre = np.full(3, 0.4)
    base = linearised(straight, centre, STEPS)
    model = fitted(base, centre[None], straight(centre)[None] + 0.7, STEPS, 0.5)
    near = centre + 0.2 * STEPS
    assert model(near)[0] == pytest.approx(straight(near) + 0.7, abs=0.05)
