"""Looking and pulling, without a window."""

from dataclasses import replace
from math import isclose

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtGui import QTransform
from pytest import approx

from app.mat.bounds import bounds, copper_bounds
from app.mat.camera import Camera, fitted, grid_steps, nice_step
from app.mat.edge import edge_handles, edge_state, spacing_key
from app.mat.handles import no_words, nudged, plan_handles, pulled, settled
from app.mat.paths import MM, region_path
from app.mat.reach import REACH, apart
from core.design import edit
from core.design.defaults import default_design
from core.layout.build import build_layout
from core.shapes.outline import Outline, Region, Vertex, circle, polygon

pixels = st.floats(-3000, 3000)
cameras = st.builds(Camera, st.floats(60, 100_000), pixels, pixels)
DESIGN = default_design()
LEFT = edit.with_text(DESIGN, "brief.polarisation", "lhcp")
PROBE = edit.with_text(DESIGN, "feed", "probe")
RECTANGLE = edit.with_text(DESIGN, "stock.ground", "rect:180mmx160mm")


@given(cameras, pixels, pixels)
def test_pixels_go_to_the_mat_and_back(camera, across, down):
    assert camera.to_screen(*camera.to_mat(across, down)) == approx((across, down), abs=1e-6)


@given(cameras, st.floats(0.2, 5), pixels, pixels)
def test_zoom_keeps_what_is_under_the_pointer(camera, factor, across, down):
    zoomed = camera.zoomed(factor, across, down)
    assert zoomed.to_mat(across, down) == approx(camera.to_mat(across, down), rel=1e-9, abs=1e-9)


def test_fit_fills_the_room_and_centres():
    camera = fitted((-0.1, -0.05, 0.1, 0.05), (20, 10, 400, 300))
    assert camera.scale == approx(2000)
    assert camera.to_screen(0, 0) == approx((220, 160))


@given(st.floats(50, 200_000))
def test_grid_lines_are_neither_crowded_nor_lost(scale):
    fine, five, ten = grid_steps(scale)
    assert fine * scale >= 3.5 or fine == 1e-4
    assert (five, ten) == approx((5 * fine, 10 * fine))


@given(st.floats(1e-6, 1e6))
def test_a_nice_step_is_1_2_or_5(least):
    step = nice_step(least)
    assert least * (1 - 1e-9) <= step < 2.6 * least
    digits = f"{step:.0e}"[0]
    assert digits in "125"


@pytest.mark.parametrize("design", [DESIGN, LEFT, PROBE, RECTANGLE])
def test_every_handle_follows_the_hand(design):
    """After a pull the handle lies where the hand is, along the way it may go."""
    for handle in plan_handles(design):
        if handle.rail or handle.name == "feed.delay_length":
            continue
        ways = [pull.way for pull in handle.pulls]
        move = tuple(2e-4 * sum(way[i] for way in ways) for i in (0, 1))
        after = pulled(design, handle, *move)
        now = next(one for one in plan_handles(after) if one.name == handle.name)
        moved = (now.x - handle.x, now.y - handle.y)
        for way in ways:
            along = moved[0] * way[0] + moved[1] * way[1]
            hand = move[0] * way[0] + move[1] * way[1]
            assert along == approx(hand, abs=1e-9), handle.name


def test_a_pull_out_makes_the_delay_strip_longer_by_both_legs():
    handle = next(one for one in plan_handles(DESIGN) if one.name == "feed.delay_length")
    way = handle.pulls[0].way
    after = pulled(DESIGN, handle, way[0] * 1e-3, way[1] * 1e-3)
    assert after.feed.delay_length == approx(DESIGN.feed.delay_length + 2e-3, abs=1e-12)


@pytest.mark.parametrize("design", [DESIGN, LEFT, PROBE, RECTANGLE])
def test_handles_lie_on_what_is_drawn(design):
    layout = build_layout(design)
    low_x, low_y, high_x, high_y = bounds(layout)
    for handle in plan_handles(design):
        assert low_x - 1e-9 <= handle.x <= high_x + 1e-9
        assert low_y - 1e-9 <= handle.y <= high_y + 1e-9


def test_left_hand_handles_mirror_right_hand_ones():
    for right, left in zip(plan_handles(DESIGN), plan_handles(LEFT), strict=True):
        assert (left.name, left.x, left.y) == (right.name, approx(-right.x), approx(right.y))


def test_an_edit_moves_only_what_it_names():
    for handle in plan_handles(DESIGN):
        inwards = -1.0 if handle.name == "feed.second.landing" else 1.0
        after = pulled(DESIGN, handle, 1e-4, inwards * 1.3e-4)
        names = {pull.key for pull in handle.pulls}
        before, now = (
            {one.key: one.value for one in edit.parameters(design)} for design in (DESIGN, after)
        )
        assert {key for key in before if before[key] != now[key]} <= names


def test_a_landing_pulled_out_draws_the_other_end_of_the_strip_in():
    """The strip keeps its length and the pulled end stays under the hand."""
    handle = next(one for one in plan_handles(DESIGN) if one.name == "feed.first.landing")
    after = pulled(DESIGN, handle, -2e-3, 0.0)
    assert after.feed.delay_length == DESIGN.feed.delay_length
    assert after.feed.first.landing == approx(DESIGN.feed.first.landing + 2e-3, abs=1e-9)
    assert after.feed.second.landing == approx(DESIGN.feed.second.landing - 2e-3, abs=1e-9)
    assert settled(after).feed.first.landing == approx(after.feed.first.landing, abs=1e-9)


def test_a_pull_back_to_the_start_is_no_change():
    short = replace(DESIGN, feed=replace(DESIGN.feed, delay_length=DESIGN.feed.delay_length - 7e-3))
    handle = next(one for one in plan_handles(short) if one.name == "feed.first.landing")
    assert pulled(short, handle, 0.0, 0.0) == short
    assert pulled(short, handle, 1e-3, 0.0) != short


def test_settling_draws_the_same_copper():
    short = replace(DESIGN, feed=replace(DESIGN.feed, delay_length=DESIGN.feed.delay_length - 7e-3))
    before, after = build_layout(short), build_layout(settled(short))
    copper = [polygon(layout.pieces[-1].region) for layout in (before, after)]
    assert copper[0].symmetric_difference(copper[1]).area < 1e-12


def test_a_nudge_changes_the_number_by_its_size():
    handle = next(one for one in plan_handles(DESIGN) if one.name == "stock.ground.diameter")
    after = nudged(DESIGN, handle, 1e-3, 0.0)
    assert after.stock.ground.diameter == DESIGN.stock.ground.diameter + 1e-3


def test_crowded_handles_give_way_to_those_that_matter_more():
    handles = plan_handles(DESIGN)
    camera = Camera(1500.0, 0.0, 0.0)
    shown = apart(handles, lambda one: camera.to_screen(one.x, one.y), frozenset())
    places = [camera.to_screen(one.x, one.y) for one in shown]
    for i, (x, y) in enumerate(places):
        for a, b in places[:i]:
            assert max(abs(x - a), abs(y - b)) >= 2 * REACH
    assert shown[0] == handles[0]
    last = handles[-1].name
    kept = apart(handles, lambda one: camera.to_screen(one.x, one.y), frozenset({last}))
    assert last in {one.name for one in kept}


def test_the_slider_sets_the_thickest_layer():
    layers = edit.with_text(DESIGN, "stock.spacer", "card:1mm + air:9mm + card:2mm")
    assert spacing_key(layers) == "stock.spacer.2.thickness"
    state = edge_state(layers, None, no_words, False)
    assert state.spacing == approx(9e-3)
    assert [z for _, _, z, _ in state.layers] == approx([0.0, 1e-3, 10e-3])
    assert [one.y for one in edge_handles(layers)] == approx([12e-3, 10e-3, 1e-3])


def test_copper_bounds_hold_the_copper():
    layout = build_layout(DESIGN)
    low_x, _, high_x, _ = copper_bounds(layout)
    half = DESIGN.element.width / 2
    assert low_x < -half
    assert half < high_x < bounds(layout)[2]


@pytest.mark.parametrize(
    "region",
    [
        Region(circle(0.2, (0.01, -0.02))),
        Region(circle(0.05), (circle(0.01),)),
        Region(
            Outline(  # a bar with two half-round ends
                (
                    Vertex(-0.02, -0.01),
                    Vertex(0.02, -0.01, 1.0),
                    Vertex(0.02, 0.01),
                    Vertex(-0.02, 0.01, 1.0),
                )
            )
        ),
    ],
)
def test_painted_outlines_enclose_the_area_of_the_region(region):
    """Painter path against the polygon that the exports use, to a thousandth."""
    finer = 50.0  # Qt flattens arcs to a fraction of a pixel, whatever a pixel is
    path = QTransform.fromScale(finer, finer).map(region_path(region))
    area = sum(
        (1 if i == 0 else -1) * _area([(p.x(), p.y()) for p in part])
        for i, part in enumerate(path.toSubpathPolygons())
    )
    assert isclose(area / (finer * MM) ** 2, polygon(region).area, rel_tol=1e-3)


def _area(points):
    pairs = zip(points, points[1:] + points[:1], strict=True)
    return abs(sum(ax * by - bx * ay for (ax, ay), (bx, by) in pairs)) / 2
