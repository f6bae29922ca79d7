"""Mesh and current on the Mat: what is drawn was solved, moves as it does, and ends with it."""

from dataclasses import replace
from math import pi

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QImage, QPainter
from pytest import approx

from app import theme
from app.evaluation import evaluate
from app.field_check import Checked
from app.mat.camera import Camera
from app.mat.current import DECADES, Scale, Shows, flows, scale_of, ticks_on
from app.mat.current_paint import paint_ticks
from core.design.defaults import default_design
from core.design.feed import ProbeFeed, ProbePin
from core.design.polarisation import Polarisation
from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.progress import SILENT
from core.response.currents import greatest

WHOLE = (-1.0, -1.0, 1.0, 1.0)


def linear_design():
    design = default_design()
    brief = replace(design.brief, polarisation=Polarisation.LINEAR)
    return replace(design, brief=brief, feed=ProbeFeed(0.0, 0.008, ProbePin()))


def left_hand_design():
    design = default_design()
    return replace(design, brief=replace(design.brief, polarisation=Polarisation.LHCP))


DESIGNS = {"right": default_design(), "left": left_hand_design(), "linear": linear_design()}


@pytest.fixture(scope="module")
def answers():
    """Each design as the field check has it, solved at few frequencies."""
    found = {}
    for name, design in DESIGNS.items():
        evaluation = evaluate(design)
        span = design.brief.frequency * np.array([0.99, 1.01])
        response = respond(evaluation.layout, span, SILENT, Level.COARSE)
        found[name] = Checked(replace(evaluation, response=response), "coarse", 6, True)
    return found


@pytest.fixture
def bench(window, answers):
    """A window whose first design has been solved."""
    give(window, answers["right"])
    return window


def give(window, checked):
    window.field.last = checked
    window.field.changed.emit()


def picture(window):
    view = window.mat.plan
    image = QImage(view.size(), QImage.Format.Format_RGB32)
    view.render(image)
    return image


def test_copper_is_shown_first(bench):
    assert bench.mat.shown.chooser.currentText() == "Copper"
    assert not bench.mat.shown.legend.isVisible()
    assert bench.mat.plan.current.state.currents is None


@pytest.mark.parametrize("name", list(Shows))
def test_menu_chooser_and_setting_say_the_same(bench, qtbot, name):
    keys = {"copper": Qt.Key.Key_F5, "mesh": Qt.Key.Key_F6}
    keys |= {"current": Qt.Key.Key_F7, "ground": Qt.Key.Key_F8}
    bench.settings.set("mat_shows", "copper" if name == "mesh" else "mesh")
    qtbot.keyClick(bench, keys[name])
    assert bench.settings.value("mat_shows") == name
    assert bench.mat.shown.chooser.currentData() == name
    ticked = [one for one in Shows if bench.window_actions[f"show-{one}"].isChecked()]
    assert ticked == [name]
    # What is chosen already stays chosen.
    bench.window_actions[f"show-{name}"].trigger()
    assert bench.window_actions[f"show-{name}"].isChecked()


def test_chooser_sets_what_is_shown(bench):
    chooser = bench.mat.shown.chooser
    chooser.activated.emit(chooser.findData("mesh"))
    assert bench.settings.value("mat_shows") == "mesh"
    assert "coarse mesh" in bench.mat.shown.legend.words


def test_arrow_keys_on_the_chooser_move_no_copper(bench, qtbot):
    bench.mat.plan.hand.choose("element.width")
    bench.mat.shown.chooser.setFocus()
    before = bench.document.design
    for key in (Qt.Key.Key_Left, Qt.Key.Key_Right, Qt.Key.Key_Down):
        qtbot.keyClick(bench.mat.shown.chooser, key)
    assert bench.document.design == before


def test_colours_are_those_of_the_scale(bench, answers):
    settings, view = bench.settings, bench.mat.plan
    settings.set("animate", False)
    settings.set("mat_shows", "current")
    view.zoom(3.0)
    image, top = picture(bench), answers["right"].evaluation.response.currents.top
    scale, shades = scale_of(top), theme.theme_of(view)
    ramp = np.array([QColor(one).getRgb()[:3] for _, one in theme.current_stops(shades)])
    middles = top.vertices[top.triangles].mean(axis=1)
    values = scale.shares(greatest(top.at_vertices))[top.triangles].mean(axis=1)
    near = []
    large = top.areas * view.camera.scale**2 > 150.0  # in pixels
    shares = np.clip(values, 0.0, 1.0)
    for place, share in zip(middles[large], shares[large], strict=True):
        across, down = (round(one) for one in view.pixels(FakeHandle(*place)))
        if not view.area.contains(across, down):
            continue
        shade = [np.interp(share, [0.0, 0.5, 1.0], ramp[:, i]) for i in range(3)]
        seen = QColor(image.pixel(across, down)).getRgb()[:3]
        near.append(np.abs(np.array(seen) - shade).max() < 8)
    # Ticks, handles and dimensions lie over some places.
    assert len(near) > 30
    assert np.mean(near) > 0.7


class FakeHandle:
    def __init__(self, x, y):
        self.x, self.y = x, y


@pytest.mark.parametrize("name", ["current", "ground", "mesh"])
def test_what_was_solved_is_to_be_seen(bench, name):
    bench.settings.set("animate", False)
    plain = picture(bench)
    bench.settings.set("mat_shows", name)
    assert picture(bench) != plain
    bench.settings.set("mat_shows", "copper")
    assert picture(bench) == plain


def turning(answer):
    """Share (n,) of a full round circle that each tick's tip goes round, anticlockwise > 0."""
    top = answer.evaluation.response.currents.top
    ticks = ticks_on(top, scale_of(top), 4e-3, WHOLE)
    steps = np.array([flows(ticks, phase) for phase in np.linspace(0, 2 * pi, 49)])
    one, two = steps[:-1], steps[1:]
    areas = (one[..., 0] * two[..., 1] - one[..., 1] * two[..., 0]).sum(axis=0) / 2.0
    inside = (np.abs(ticks.places) < (0.02, 0.02)).all(axis=1)
    assert inside.sum() > 60
    return (areas / (pi * np.sum(steps**2, axis=2).max(axis=0)))[inside]


@pytest.mark.parametrize(("name", "way"), [("right", 1), ("left", -1)])
def test_circular_current_turns_as_its_wave_does(answers, name, way):
    # A right-hand wave comes towards the eye turning anticlockwise (IEEE Std 145).
    turned = way * turning(answers[name])
    assert np.mean(turned > 0.2) > 0.9
    assert turned.mean() > 0.4


def test_linear_current_does_not_turn(answers):
    turned = turning(answers["linear"])
    # What spreads from the probe goes a little round, as much one way as the other.
    assert abs(turned.mean()) < 0.01
    assert np.median(np.abs(turned)) < 0.15


@pytest.mark.parametrize("name", DESIGNS)
def test_the_arrow_tells_the_sense_of_the_wave(window, answers, name):
    window.document.change(DESIGNS[name], "try")
    window.settings.set("mat_shows", "current")
    give(window, answers[name])
    expected = {"right": Polarisation.RHCP, "left": Polarisation.LHCP}
    assert window.mat.plan.current.state.sense is expected.get(name, Polarisation.LINEAR)


@pytest.mark.parametrize("ahead", [(14.0, 0.0), (0.0, 14.0), (-14.0, 0.0), (0.0, -14.0)])
def test_a_tick_points_where_the_current_flows(qapp, ahead):
    image = QImage(60, 60, QImage.Format.Format_RGB32)
    image.fill(Qt.GlobalColor.white)
    painter = QPainter(image)
    camera = Camera(1.0, 30.0, 30.0)
    paint_ticks(painter, np.zeros((1, 2)), np.array([ahead]), camera, theme.LIGHT)
    painter.end()
    dark = np.array(
        [
            (x - 29.5, 29.5 - y)
            for x in range(60)
            for y in range(60)
            if QColor(image.pixel(x, y)).lightness() < 120
        ]
    )
    way = np.array(ahead) / 14.0
    along, across = dark @ way, dark @ (-way[1], way[0])
    assert along.max() > 10.0
    # The tip is thin, the tail broad.
    assert np.ptp(across[along > 7.0]) < 0.7 * np.ptp(across[along < -7.0])


def test_ticks_stay_on_their_copper_and_apart(answers):
    currents = answers["right"].evaluation.response.currents
    scale, step = scale_of(currents.top), 4e-3
    ticks = ticks_on(currents.top, scale, step, WHOLE)
    assert len(currents.top.at(ticks.places)[0]) == len(ticks.places)
    gaps = np.linalg.norm(ticks.places[:, None] - ticks.places, axis=2)
    assert gaps[gaps > 0].min() > 0.999 * step
    assert (greatest(ticks.currents) < 0.5).all()
    strips = ticks.places[(ticks.places[:, 0] > 0.03) | (ticks.places[:, 1] < -0.028)]
    assert len(strips) > 6
    below = ticks_on(currents.ground, scale, step, WHOLE, currents.top)
    assert len(currents.top.at(below.places)[0]) == 0
    assert len(below.places) > 20


def test_scale_lies_about_what_flows_in_the_middle(answers):
    sheet = answers["right"].evaluation.response.currents.top
    scale = scale_of(sheet)
    means = greatest(sheet.at_vertices)[sheet.triangles].mean(axis=1)
    ends = scale.top * 10.0 ** (-DECADES * np.array([0.75, 0.25]))
    low, high = (sheet.areas @ (means < end) / sheet.areas.sum() for end in ends)
    assert low < 0.5 < high  # half of the copper lies in the middle half of the scale
    assert scale.shares(np.array([scale.top, scale.top / 10**DECADES])) == approx([1.0, 0.0])
    assert scale.shares(np.array([0.0])) < 0.0


def test_scale_is_marked_in_round_numbers():
    assert Scale(30.0).marks[0] == (approx(0.0), "≤ 0.3")
    assert [words for _, words in Scale(100.0).marks] == ["≤ 1", "3", "10", "30", "≥ 100"]
    assert [words for _, words in Scale(1e3).marks] == ["≤ 10", "30", "100", "300", "≥ 1000"]


def test_both_sheets_have_the_scale_of_the_copper(bench):
    legend = bench.mat.shown.legend
    bench.settings.set("mat_shows", "current")
    copper = legend.accessibleDescription()
    bench.settings.set("mat_shows", "ground")
    assert legend.accessibleDescription() == copper
    assert bench.mat.plan.current.state.sheet is bench.mat.plan.current.state.currents.ground


def test_legend_is_spoken_with_its_unit(bench):
    bench.settings.set("mat_shows", "current")
    spoken = bench.mat.shown.legend.accessibleDescription()
    assert spoken.startswith("Peak A/m with 1 W accepted: ≤")
    assert bench.mat.shown.legend.isVisible()


def test_the_clock_runs_while_there_is_something_to_see(bench, qtbot):
    layer, settings = bench.mat.plan.current, bench.settings
    assert not layer.is_moving
    settings.set("mat_shows", "current")
    assert layer.is_moving
    before = layer.phase
    qtbot.waitUntil(lambda: layer.phase != before)
    for name in ("copper", "mesh"):
        settings.set("mat_shows", name)
        assert not layer.is_moving
    settings.set("mat_shows", "ground")
    assert layer.is_moving
    bench.mat.hide()
    assert not layer.is_moving
    bench.mat.show()
    assert layer.is_moving


def test_the_pause_button_holds_the_instant(bench, qtbot):
    bench.settings.set("mat_shows", "current")
    bar, layer = bench.mat.shown, bench.mat.plan.current
    bar.pause.setFocus()
    qtbot.keyClick(bar.pause, Qt.Key.Key_Space)
    assert not bench.settings.value("animate")
    assert not layer.is_moving
    assert layer.state.currents is not None
    assert bar.play.isVisible()
    assert not bar.pause.isVisible()
    assert bar.play.hasFocus()
    bench.window_actions["animate"].trigger()
    assert layer.is_moving
    assert bar.pause.isVisible()


def test_a_period_is_a_round_of_even_steps(bench):
    bench.settings.set("animate", False)
    layer = bench.mat.plan.current
    phases = [layer.step() or layer.phase for _ in range(50)]
    assert np.diff(phases[:-1]) == approx(2 * pi / 50)
    assert phases[-1] == 0.0


def test_an_edit_takes_the_current_away_and_says_so(bench, answers):
    bench.settings.set("mat_shows", "current")
    bench.cards.edited.emit("element.width", "52 mm")
    layer = bench.mat.plan.current
    assert layer.state.currents is None
    assert not layer.is_moving
    assert bench.mat.shown.legend.words == "No current: the field check is off"
    assert not bench.mat.shown.pause.isVisible()
    bench.window_actions["undo"].trigger()
    assert layer.state.currents is answers["right"].evaluation.response.currents


def test_it_says_what_it_waits_for(window):
    window.settings.set("mat_shows", "mesh")
    window.settings.set("field_check", True)
    assert window.mat.shown.legend.words == "The mesh waits for the field check"
    window.field.stop()
    assert window.mat.shown.legend.words == "No mesh: the field check is stopped"


def test_a_board_has_no_ground_current_to_show(bench, answers):
    whole = answers["right"].evaluation
    currents = replace(whole.response.currents, ground=None)
    board = replace(whole, response=replace(whole.response, currents=currents))
    give(bench, Checked(board, "coarse", 6, True))
    bench.settings.set("mat_shows", "ground")
    assert bench.mat.plan.current.state.currents is None
    assert "endless" in bench.mat.shown.legend.words
    for name in ("mesh", "current"):
        bench.settings.set("mat_shows", name)
        assert bench.mat.plan.current.state.currents is currents
        picture(bench)


def test_the_pointer_reads_the_current(bench, answers):
    bench.settings.set("mat_shows", "current")
    currents = answers["right"].evaluation.response.currents
    _, there = currents.top.at(np.array([[0.003, 0.004]]))
    bench.mat.plan.pointed.emit((0.003, 0.004))
    assert f"copper: up to {float(greatest(there)[0]):.3g} A/m" in bench.place.text()
    bench.mat.plan.pointed.emit((0.05, 0.05))
    assert "Current on the ground plate" in bench.place.text()
    bench.settings.set("mat_shows", "ground")
    bench.mat.plan.pointed.emit((0.003, 0.004))
    assert "Current on the ground plate" in bench.place.text()
    bench.mat.plan.pointed.emit((1.0, 1.0))
    assert "Current" not in bench.place.text()
    bench.settings.set("mat_shows", "copper")
    bench.mat.plan.pointed.emit((0.003, 0.004))
    assert "Current" not in bench.place.text()


@pytest.mark.parametrize("size", [(1000, 600), (1280, 720), (2560, 1440)])
def test_the_control_keeps_to_the_plan_view(make_window, answers, size):
    window = make_window(*size)
    give(window, answers["right"])
    view, bar = window.mat.plan, window.mat.shown
    # Words of the view's own stand in the lower left corner.
    words = view.area.left() + view.fontMetrics().horizontalAdvance("Seen from the front") + 16
    for name in Shows:
        window.settings.set("mat_shows", str(name))
        assert view.geometry().contains(bar.geometry())
        legend = bar.legend.geometry().translated(bar.pos() - view.pos())
        above = view.height() - 3.5 * view.fontMetrics().height()
        assert name is Shows.COPPER or legend.left() > words or legend.bottom() < above
