"""Settling: with the live model in the solver's place, and with the solver itself."""

from dataclasses import replace

import numpy as np
import pytest
from board_shapes import board_patch

from core.design import spelled
from core.design.model import Brief, Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, Stock
from core.errors import Cancelled, ModelError
from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.fullwave.solving import Solving
from core.layout.build import build_layout
from core.live.respond import sample
from core.progress import SILENT
from core.sizing.goal import Goal
from core.sizing.seed import seed_design
from core.sizing.settle import settle
from core.sizing.tuning import in_tune


def seed(spacer="foam:6mm", frequency=2.4e9, feed="dual-edge", sense="rhcp", element=None):
    stock = Stock(spelled.spacer(spacer), spelled.foil("copper-tape"), DiscGround(0.2))
    brief = Brief(frequency, Polarisation(sense), 50.0, 1.5, 1.5)
    return seed_design("test", brief, stock, spelled.making("knife"), feed, element)


def live_spot(off=0.0):
    """The live model at another frequency: an antenna that the equations get wrong by so much."""

    def spot(layout, frequency, _level):
        one = sample(layout, np.array([frequency * (1.0 + off)])).at(0)
        return 1.0 / complex(one.z_in), complex(one.e_x), complex(one.e_y)

    return spot


@pytest.mark.parametrize(("feed", "off"), [("dual-edge", 0.03), ("probe", 0.0), ("probe", -0.05)])
def test_it_meets_the_goals_whatever_the_equations_get_wrong(feed, off):
    settling = settle(seed(feed=feed), spot=live_spot(off))
    assert settling.met
    assert settling.vswr <= 1.5
    assert settling.axial_ratio_db <= 1.5
    assert settling.level is Level.FINE
    assert 0 < settling.fine_solves < settling.solves <= 60
    # What it says is what the solver says of the design that it hands back.
    spot = live_spot(off)(build_layout(settling.design), 2.4e9, Level.FINE)
    reached = Goal(Polarisation.RHCP, 50.0, 1.5, 1.5)
    assert reached.reached(reached.missing(*spot)) == pytest.approx(
        (settling.vswr, settling.axial_ratio_db)
    )


def test_the_other_sense_gets_the_same_lengths():
    right = settle(seed(feed="probe"), spot=live_spot(0.02))
    left = settle(seed(feed="probe", sense="lhcp"), spot=live_spot(0.02))
    assert left.design.feed == right.design.feed
    assert left.design.element == right.design.element
    assert left.design.brief.polarisation is Polarisation.LHCP
    spot = live_spot(0.02)(build_layout(left.design), 2.4e9, Level.FINE)
    goal = Goal(Polarisation.LHCP, 50.0, 1.5, 1.5)
    assert goal.worst(goal.missing(*spot)) <= 1.0


def test_a_given_element_stays():
    settling = settle(seed(element=Element(53e-3, 54e-3)), keep_element=True, spot=live_spot(0.01))
    assert settling.design.element == Element(53e-3, 54e-3)
    assert settling.met


def test_what_cannot_be_met_is_told_with_what_was_reached():
    settling = settle(
        seed(feed="probe", element=Element(20e-3, 70e-3)), keep_element=True, spot=live_spot()
    )
    assert not settling.met
    assert f"has VSWR {settling.vswr:.2f}, axial ratio " in settling.reason
    assert settling.solves <= 260


def test_stricter_goals_are_kept_to():
    settling = settle(seed(feed="probe"), vswr=1.1, axial_ratio_db=0.4, spot=live_spot(0.02))
    assert settling.met
    assert settling.vswr <= 1.1
    assert settling.axial_ratio_db <= 0.4


def test_where_nothing_can_be_solved_that_is_told_and_nothing_changes():
    def spot(*_):
        raise ModelError("field solver: not this stack")

    design = seed(feed="probe")
    settling = settle(design, spot=spot)
    assert (settling.met, settling.solves, settling.design) == (False, 0, design)
    assert settling.reason.endswith("field solver: not this stack.")
    assert np.isinf(settling.vswr)


@pytest.mark.parametrize(
    ("feed", "plate"), [("probe", 0.03), ("dual-edge", 0.03), ("dual-edge", 0.05)]
)
def test_what_keeps_every_design_from_being_made_is_told(feed, plate):
    """An element for 2.4 GHz is about 50 mm wide, and the ground plate no wider."""
    design = seed(feed=feed)
    design = replace(design, stock=replace(design.stock, ground=DiscGround(plate)))
    settling = settle(design, spot=live_spot())
    assert (settling.met, settling.solves) == (False, 0)
    start, reason = settling.reason.split(". ", 1)
    assert start == "No design was found that can be made"
    assert "ground" in reason
    assert reason.endswith(".")


def test_a_shape_that_cannot_be_meshed_is_passed_over():
    calls = []

    def spot(layout, frequency, level):
        calls.append(level)
        if len(calls) == 4:
            raise ModelError("mesh: not this shape")
        return live_spot(0.02)(layout, frequency, level)

    settling = settle(seed(feed="probe"), spot=spot)
    assert settling.met
    assert settling.solves == len(calls) - 1


def test_it_can_be_cancelled():
    class Stop:
        def step(self, done, total):
            if done == 1:
                raise Cancelled

    with pytest.raises(Cancelled):
        settle(seed(feed="probe"), spot=live_spot(), progress=Stop())


@pytest.mark.parametrize("wanted", [1.0, 1.09, 0.9])
def test_a_detuned_resonator_is_scaled_into_tune(wanted):
    design = seed(feed="probe", sense="linear")
    side = design.element.length

    def solve_at(one, frequency):
        # A parallel circuit of Q 30 whose frequency goes as one over the length.
        ratio = frequency / (wanted * one.brief.frequency) * one.element.length / side
        return complex(0.02 * (1.0 + 30j * (ratio - 1.0 / ratio))), 1.0 + 0j, 0.0 + 0j

    tuned = in_tune(design, solve_at, Goal(Polarisation.LINEAR, 50.0, 1.5, 1.5))
    assert tuned.element.length == pytest.approx(wanted * side, rel=3e-3)


def test_a_small_board_settles_by_the_field_solver():
    settling = settle(seed("FR-4:1.6mm", 5.7e9, "probe", "linear"), level=Level.COARSE)
    assert settling.met
    assert settling.vswr <= 1.5
    assert settling.solves == settling.fine_solves <= 40
    layout = build_layout(settling.design)
    swept = respond(layout, np.linspace(5.5e9, 5.9e9, 5), SILENT, Level.COARSE)
    # Tables for another band and a fit between solved frequencies lie in between.
    assert float(swept.spot.vswr) == pytest.approx(settling.vswr, rel=0.02)


def test_what_antennas_share_changes_no_solution():
    one, other = (board_patch(side, side, 1.6e-3, 4.4, 5e9) for side in (12e-3, 16e-3))
    shared, alone = Solving(), Solving()
    shared(one, 5e9, Level.COARSE)
    shared(one, 5.5e9, Level.COARSE)
    together = shared(other, 5e9, Level.COARSE)
    assert together.admittance == pytest.approx(
        alone(other, 5e9, Level.COARSE).admittance, rel=1e-9
    )
    thicker = replace(other, stack=(replace(other.stack[0], thickness=2e-3),))
    assert shared(thicker, 5e9, Level.COARSE).admittance == pytest.approx(
        Solving()(thicker, 5e9, Level.COARSE).admittance, rel=1e-9
    )
