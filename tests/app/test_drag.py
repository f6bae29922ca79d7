"""A handle follows the hand: the design changes by exactly pixels over scale."""

from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from pytest import approx

from core.design import edit
from core.design.defaults import default_design
from core.layout.build import build_layout

MOVE = (14.0, -9.0)  # pixels across and down

# Parameter, its change for a metre of hand across and up, right-hand antenna.
PULLS = [
    ("element.width", (-2, 0)),
    ("element.width right", (2, 0)),
    ("element.length", (0, 2)),
    ("feed.first.landing", (-1, 0)),
    ("feed.second.landing", (0, 1)),
    ("feed.first.gap", (0, -1)),
    ("feed.second.gap", (1, 0)),
    ("feed.first.width", (-2, 0)),
    ("feed.second.width", (0, 2)),
    ("feed.delay_width", (1, 0)),
    ("stock.ground.diameter", (2 * 0.5**0.5, 2 * 0.5**0.5)),
]


def number(window, name):
    return edit.value_at(window.document.design, name.split(" ")[0])


@pytest.mark.parametrize(("name", "gain"), PULLS)
def test_a_drag_changes_the_design_by_pixels_over_scale(window, hand, name, gain):
    window.mat.plan.zoom(16.0)
    before, scale = number(window, name), window.mat.plan.camera.scale
    expected = before + (gain[0] * MOVE[0] + gain[1] * -MOVE[1]) / scale
    hand(window.mat.plan).press(name).move(MOVE[0] / 2, 0).move(MOVE[0] / 2, MOVE[1]).release()
    assert number(window, name) == approx(expected, abs=1e-10)


@pytest.mark.parametrize(("name", "gain"), PULLS)
def test_a_left_hand_antenna_is_dragged_in_the_mirror(window, hand, name, gain):
    window.cards_presenter.edit("brief.polarisation", "lhcp")
    window.mat.plan.zoom(16.0)
    before, scale = number(window, name), window.mat.plan.camera.scale
    expected = before + (-gain[0] * MOVE[0] + gain[1] * -MOVE[1]) / scale
    hand(window.mat.plan).press(name).move(*MOVE).release()
    assert number(window, name) == approx(expected, abs=1e-10)


def test_the_dragged_side_stays_under_the_hand(window, hand):
    plan = window.mat.plan
    mouse = hand(plan).press("element.width").move(-20, 0)
    handle = next(one for one in plan.state.handles if one.name == "element.width")
    assert plan.pixels(handle)[0] == approx(mouse.place.x(), abs=1e-6)


def test_a_drag_is_one_undo_step(window, hand):
    before = window.document.design
    mouse = hand(window.mat.plan).press("element.length")
    for _ in range(7):
        mouse.move(0, -3)
    mouse.release()
    assert window.document.stack.count() == 1
    window.window_actions["undo"].trigger()
    assert window.document.design == before
    assert not window.document.is_modified


def test_two_drags_of_a_handle_are_two_undo_steps(window, hand):
    for _ in range(2):
        hand(window.mat.plan).press("element.length").move(0, -5).release()
    assert window.document.stack.count() == 2


def test_escape_puts_a_drag_back(window, hand, qtbot):
    before = window.document.design
    mouse = hand(window.mat.plan).press("feed.second.gap").move(6, 0)
    assert window.document.design != before
    qtbot.keyClick(window.mat.plan, Qt.Key.Key_Escape)
    assert window.document.design == before
    assert window.document.stack.count() == 0
    mouse.move(9, 9).release()
    assert window.document.design == before


def test_a_drag_that_ends_where_it_began_is_no_edit(window, hand):
    hand(window.mat.plan).press("element.width").move(11, 0).move(-11, 0).release()
    assert window.document.stack.count() == 0


def test_a_drag_stops_at_the_end_of_the_range(window, hand):
    window.mat.plan.zoom(4.0)
    hand(window.mat.plan).press("feed.first.width").move(60, 0).release()
    assert 20e-6 <= window.document.design.feed.first.width < 4e-3


def test_a_slid_landing_point_moves_from_where_it_is_drawn(window, hand):
    design = default_design()
    feed = replace(design.feed, delay_length=design.feed.delay_length - 8e-3)
    window.document.change(replace(design, feed=feed), "Shorten")
    plan = window.mat.plan
    plan.zoom(4.0)
    drawn = [one for one in build_layout(window.document.design).feed.landings if one.side == "y"]
    slid = window.document.design.element.width / 2 - drawn[0].x
    assert slid < window.document.design.feed.first.landing - 1e-3
    hand(plan).press("feed.first.landing").move(5, 0).release()
    moved = 5 / plan.camera.scale
    assert window.document.design.feed.first.landing == approx(slid - moved, abs=1e-9)


def test_the_tee_slides_along_its_strip(window, hand):
    plan, before = window.mat.plan, window.document.design.feed.tee
    plan.zoom(4.0)
    handle = next(one for one in plan.state.handles if one.name == "feed.tee")
    on_first_leg = handle.y == approx(handle.rail[0][1])
    hand(plan).press("feed.tee").move(-4 if on_first_leg else 0, 0 if on_first_leg else 4).release()
    assert window.document.design.feed.tee == approx(before - 4 / plan.camera.scale, abs=1e-9)


def test_the_probe_is_dragged_both_ways(window, hand):
    design = window.document.design
    window.document.change(edit.with_text(design, "feed", "probe"), "Probe")
    before, scale = window.document.design.feed, window.mat.plan.camera.scale
    hand(window.mat.plan).press("feed.x").move(7, -5).release()
    after = window.document.design.feed
    assert (after.x, after.y) == approx((before.x + 7 / scale, before.y + 5 / scale), abs=1e-10)


def test_the_spacing_is_dragged_edge_on(window, hand):
    edge, before = window.mat.edge, window.document.design.stock.height
    scale = edge.side_camera().scale
    hand(edge).press("stock.spacer.1.thickness").move(0, -13).release()
    assert window.document.design.stock.height == approx(before + 13 / scale, abs=1e-10)
    assert window.document.stack.count() == 1


def test_the_slider_sets_the_spacing_in_one_step(window):
    slider = window.mat.slider
    slider.setSliderDown(True)
    for value in (130, 140, 150):
        slider.setValue(value)
    slider.setSliderDown(False)
    assert window.document.design.stock.height == approx(150 * 5e-5, abs=1e-12)
    assert window.document.stack.count() == 1


@pytest.mark.parametrize(
    ("modifier", "step"),
    [
        (Qt.KeyboardModifier.NoModifier, 1e-4),
        (Qt.KeyboardModifier.ShiftModifier, 1e-3),
        (Qt.KeyboardModifier.ControlModifier, 1e-5),
    ],
)
def test_arrow_keys_nudge_the_chosen_handle(window, qtbot, modifier, step):
    plan, before = window.mat.plan, window.document.design.element.width
    qtbot.waitUntil(plan.hasFocus)
    qtbot.keyClick(plan, Qt.Key.Key_Tab)
    qtbot.keyClick(plan, Qt.Key.Key_Left, modifier)
    assert window.document.design.element.width == approx(before + step, abs=1e-12)


def test_tab_goes_through_all_handles_and_out(window, qtbot):
    plan = window.mat.plan
    qtbot.waitUntil(plan.hasFocus)
    qtbot.keyClick(plan, Qt.Key.Key_Tab)
    seen = []
    while plan.hasFocus() and len(seen) < 50:
        seen.append(plan.hand.shown_handle.name)
        qtbot.keyClick(plan, Qt.Key.Key_Tab)
    assert seen == [one.name for one in plan.state.handles]
