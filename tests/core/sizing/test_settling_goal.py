"""What settling aims for, and that it can be stopped while it sizes by equations."""

from dataclasses import replace

import pytest

from core.design.defaults import default_design
from core.design.polarisation import Polarisation
from core.errors import Cancelled
from core.sizing.settle import settle, settling_goal

BRIEF = default_design().brief


@pytest.mark.parametrize(
    ("asked", "solved"),
    [
        (Polarisation.RHCP, Polarisation.RHCP),
        (Polarisation.LHCP, Polarisation.RHCP),  # its mirror image
        (Polarisation.LINEAR, Polarisation.LINEAR),
    ],
)
def test_the_mirror_image_of_the_left_hand_is_solved(
    asked: Polarisation, solved: Polarisation
) -> None:
    assert settling_goal(replace(BRIEF, polarisation=asked)).polarisation is solved


@pytest.mark.parametrize(
    ("brief", "given", "goals"),
    [
        ((2.0, 3.0), (None, None), (1.5, 1.5)),
        ((1.3, 1.0), (None, None), (1.3, 1.0)),
        ((1.3, 1.0), (2.0, 3.0), (2.0, 3.0)),
    ],
)
def test_goals_are_those_given_or_the_stricter(
    brief: tuple[float, float],
    given: tuple[float | None, float | None],
    goals: tuple[float, float],
) -> None:
    goal = settling_goal(replace(BRIEF, vswr=brief[0], axial_ratio_db=brief[1]), *given)
    assert (goal.vswr, goal.axial_ratio_db) == goals


class StopBetween:
    """Stops the work when a step is told with nothing solved since the one before."""

    def __init__(self) -> None:
        self.told: list[int] = []

    def step(self, done: int, _total: int) -> None:
        if done and done in self.told:
            raise Cancelled
        self.told.append(done)


def test_it_can_be_stopped_while_it_sizes_by_equations() -> None:
    """A spot that is always far off: after the first solution the design is sized."""
    stop = StopBetween()
    with pytest.raises(Cancelled):
        settle(default_design(), spot=lambda *_: (1e-4 + 0j, 1 + 0j, 1j), progress=stop)
    assert stop.told == [0, 1]
