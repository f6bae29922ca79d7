"""Goals of settling against closed forms of match and polarisation."""

import numpy as np
import pytest

from core.design.polarisation import Polarisation
from core.sizing.goal import Goal, cross_field

RIGHT = Goal(Polarisation.RHCP, 50.0, 1.5, 1.5)
AT_GOAL = 10 ** (1.5 / 20)


@pytest.mark.parametrize("ohms", [75.0, 50.0 / 1.5])
def test_a_load_of_the_goal_vswr_is_at_the_goal(ohms):
    missing = RIGHT.missing(1 / ohms, 1.0, -1j)
    assert RIGHT.worst(missing) == pytest.approx(1.0, rel=1e-12)
    assert RIGHT.reached(missing) == pytest.approx((1.5, 0.0), abs=1e-9)


@pytest.mark.parametrize("turn", [0.0, 1.0, 2.5])
@pytest.mark.parametrize("longer", [AT_GOAL, 1 / AT_GOAL])
def test_an_ellipse_of_the_goal_axial_ratio_is_at_the_goal(longer, turn):
    # y a quarter period after x: right-hand by IEEE Std 145; axes as 1 to `longer`, any phase.
    phase = np.exp(1j * turn)
    missing = RIGHT.missing(1 / 50.0, phase, -1j * longer * phase)
    assert RIGHT.worst(missing) == pytest.approx(1.0, rel=1e-12)
    assert RIGHT.reached(missing) == pytest.approx((1.0, 1.5), rel=1e-9)


def test_the_mirror_image_misses_as_much_of_the_other_sense():
    left = Goal(Polarisation.LHCP, 50.0, 1.5, 1.5)
    one, other = RIGHT.missing(0.02, 1.0, 0.3 - 0.8j), left.missing(0.02, 1.0, -0.3 + 0.8j)
    assert RIGHT.reached(one) == pytest.approx(left.reached(other))
    assert RIGHT.worst(left.missing(0.02, 1.0, -1j)) > 10.0


def test_the_wrong_sense_is_bounded_and_far():
    assert abs(complex(cross_field(1.0, 1j, Polarisation.RHCP))) == pytest.approx(20.0)


def test_a_linear_antenna_is_asked_for_its_match_alone():
    goal = Goal(Polarisation.LINEAR, 50.0, 1.5, 1.5)
    missing = goal.missing(1 / 100.0, 1.0, 0.0)
    assert missing.shape == (goal.residuals,) == (2,)
    assert goal.reached(missing) == pytest.approx((2.0, 0.0))
    assert goal.worst(missing) == pytest.approx((1 / 3) / 0.2)
