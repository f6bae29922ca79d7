"""Steps of settling: the constrained least squares, and the room that designs leave."""

from dataclasses import replace

import numpy as np
import pytest
from sample_designs import tape_design
from scipy.optimize import lsq_linear

from core.design.feed import LeadIn, ProbeFeed, ProbePin
from core.design.model import Element
from core.design.stock import DiscGround, RectangleGround
from core.findings import has_refusal
from core.layout.build import build_layout
from core.sizing.descent import best_move, made_buildable, room_left
from core.sizing.freedoms import freedoms
from core.sizing.knobs import on_grid
from core.sizing.room import margins


def roomy():
    design = tape_design()
    return replace(design, stock=replace(design.stock, ground=DiscGround(0.4)))


@pytest.mark.parametrize("reach", [0.2, 1.0])
def test_a_move_is_the_bounded_least_squares_solution(reach):
    free = freedoms(roomy())
    rng = np.random.default_rng(1)
    count = len(free.steps)
    slope, value = rng.normal(size=(4, count)), rng.normal(size=4)

    def model(turns):
        moved = (turns - free.start) / (reach * free.steps)
        return value + slope @ moved, slope / (reach * free.steps)

    moved = (best_move(free, free.start, reach, model) - free.start) / (reach * free.steps)
    # The same with the small damping as further rows; the plate leaves room for any of it.
    damping = np.sqrt(0.05) * np.eye(count)
    low = np.maximum(-1.0, -free.start / (reach * free.steps))
    expected = lsq_linear(
        np.vstack([slope, damping]),
        np.concatenate([-value, np.zeros(count)]),
        (low, np.ones(count)),
    )
    cost = np.sum((value + slope @ moved) ** 2) + 0.05 * moved @ moved
    assert cost == pytest.approx(2.0 * expected.cost, rel=0.05)
    assert np.abs(moved).max() <= 1.0 + 1e-9


def test_a_design_with_room_stays_where_it_is():
    free = freedoms(roomy())
    assert room_left(free, free.start) > 0.0
    assert made_buildable(free) == pytest.approx(free.start)


def test_strips_beyond_the_rim_are_drawn_onto_the_plate():
    design = tape_design()
    small = replace(design, stock=replace(design.stock, ground=DiscGround(0.092)))
    free = freedoms(small)
    assert room_left(free, np.clip(free.start, 0.0, 1.0)) < 0.0
    turns = made_buildable(free)
    made = free.box.design(turns, on_grid)
    codes = {finding.code for finding in build_layout(made).findings}
    assert room_left(free, turns) >= 0.0
    assert "strip-off-ground" not in codes
    assert not has_refusal(build_layout(made).findings)


@pytest.mark.parametrize("side", [60e-3, 80e-3])
def test_room_round_a_probe_fed_element_is_what_is_left_of_the_plate(side):
    design = tape_design()
    plate = RectangleGround(side, 100e-3)
    fed = replace(
        design,
        stock=replace(design.stock, ground=plate),
        feed=ProbeFeed(5e-3, -8e-3, ProbePin(1.27e-3, 3e-3, 4.1e-3)),
    )
    least = margins(fed)
    edge = design.making.edge_margin
    assert least[0] == pytest.approx((side - 54e-3) / 2 - edge, abs=1e-9)
    assert least[2:] == pytest.approx([27e-3 - 5e-3 - 1.5e-3, 27e-3 - 8e-3 - 1.5e-3], abs=1e-9)


def test_freedoms_start_from_the_design_itself():
    for design in (roomy(), with_lead(), with_probe()):
        free = freedoms(design)
        rebuilt = free.box.design(free.start, on_grid)
        assert rebuilt.element == design.element
        assert rebuilt.feed == design.feed
        assert free.start.shape == free.steps.shape


def test_a_kept_element_is_no_freedom():
    free = freedoms(roomy(), keep_element=True)
    assert {"width", "length"}.isdisjoint(knob.label for knob in free.box.knobs)
    moved = free.box.design(np.clip(free.start + free.steps, 0.0, 1.0), on_grid)
    assert moved.element == Element(54e-3, 54e-3)


def with_lead():
    design = roomy()
    return replace(design, feed=replace(design.feed, lead_in=LeadIn(12e-3, 5e-3)))


def with_probe():
    return replace(roomy(), feed=ProbeFeed(9e-3, 7e-3, ProbePin(1.27e-3, 3e-3, 4.1e-3)))
