"""The field check runs by itself, tells what it knows of the very design, and nothing else."""

from dataclasses import replace

import pytest
from PySide6.QtGui import QAccessible

from app.curves.legend import engine_words
from app.dialogs.export import ExportDialog
from app.field_check import KIND, FieldCheck
from app.jobs.runner import JobRunner
from app.jobs.solver_process import SolverProcess
from app.main_window import MainWindow
from app.presenters.check_words import CANCEL, CHECK_NOW, TRY_CABLE
from app.tail_check import KIND as TAIL
from app.window import dress
from core.design import edit
from core.design.defaults import default_design
from core.engines import ENGINES, LIVE
from core.errors import ModelError
from core.progress import SILENT
from core.response.model import Reading, Trust, TrustLevel


class FakeSolver:
    """Answers like a field solver, from the live model; may refuse, or say what it is asked."""

    def __init__(self):
        self.levels, self.tails = [], []
        self.behind = 20.0
        self.refusal = self.refused = ""
        self.frequencies = 6
        self.drops = 0

    def close(self): ...

    def drop(self):
        self.drops += 1

    def solve(self, layout, frequencies, progress, level, tail=None):
        self.levels.append(level)
        self.tails.append(tail)
        for done in range(self.frequencies):
            progress.step(done, 7)
        if level == self.refused:
            raise ModelError("this mesh is too coarse")
        if self.refusal:
            raise ModelError(self.refusal)
        known = Trust(TrustLevel.GOOD, "solved")
        trust = dict.fromkeys(Reading, known)
        answer = ENGINES[LIVE](layout, frequencies, SILENT)
        return replace(answer, engine="field", trust=trust, front_to_back=self.behind)


@pytest.fixture
def solver():
    return FakeSolver()


@pytest.fixture
def open_window(qtbot, qapp, settings, asker, tmp_path, solver, monkeypatch):
    windows = []
    monkeypatch.setattr("app.field_check.REST", 1)

    def make(runner, solver=solver):
        settings.set("field_check", True)
        dress(qapp, settings)
        window = MainWindow(settings, runner, tmp_path / "state", asker, solver)
        windows.append(window)
        window.resize(1280, 720)
        with qtbot.waitExposed(window):
            window.show()
        return window

    yield make
    for window in windows:
        window.document.stack.setClean()
        window.close()
        window.deleteLater()


@pytest.fixture
def window(open_window, runner, qtbot):
    """A window whose first design is about to be solved."""
    found = open_window(runner)
    qtbot.waitUntil(lambda: KIND in runner.waiting)
    return found


def engine(window):
    return window.readings._engine.text()


def widen(window, width="52 mm"):
    window.cards.edited.emit("element.width", width)


def at_rest(window, runner, qtbot):
    qtbot.waitUntil(lambda: KIND in runner.waiting)
    runner.run()


def run_all(runner):
    while runner.waiting:
        runner.run()


def test_readings_switch_to_what_is_solved_and_say_so(window, runner):
    assert engine(window) == "live estimate, by equations"
    run_all(runner)
    assert engine(window) == "field solver, normal mesh, 6 frequencies"
    assert window.readings.check.words.startswith("Sheets will say: field-checked, normal mesh")


def test_an_edit_makes_the_answer_stale_and_readings_live(window, runner):
    runner.run()
    before = window.curves.match.state
    assert (before.engine, before.is_stale, before.beside.engine) == ("field", False, LIVE)
    widen(window)
    after = window.curves.match.state
    assert engine(window) == "live estimate, by equations"
    assert (after.engine, after.beside.engine, after.beside.is_stale) == (LIVE, "field", True)
    assert "Solved before this edit: VSWR" in window.readings.check.before
    assert window.field.current is None


def test_undo_brings_the_answer_back(window, runner, qtbot):
    runner.run()
    solved = window.field.current
    widen(window)
    window.window_actions["undo"].trigger()
    assert window.field.current is solved
    assert engine(window).startswith("field solver")


def test_an_edit_stops_what_is_being_solved(window, runner):
    widen(window)
    assert KIND not in runner.waiting
    assert "when the hand rests" in window.readings.check.words


def test_an_answer_for_an_older_design_is_not_current(window, runner):
    request = runner.waiting[KIND]
    widen(window)
    runner.waiting[KIND] = request  # as if it had been answered just then
    runner.run()
    assert window.field.current is None
    assert engine(window).startswith("live")


def test_the_hand_gets_a_quick_mesh_and_the_chosen_one_when_it_lets_go(
    window, runner, qtbot, hand, solver
):
    runner.run()
    window.settings.set("mesh_level", "fine")
    at_rest(window, runner, qtbot)
    mouse = hand(window.mat.plan).press("element.width").move(6, 0)
    assert (
        window.readings.check.words == "The field check follows the hand on a quick, coarse mesh."
    )
    mouse.move(6, 0)  # while the first step is being solved
    assert len(runner.waiting) == 1
    runner.run()
    assert window.field.current is None
    runner.run()
    assert "quick mesh" in engine(window)
    assert window.readings.check.words.startswith("Solved on a quick mesh; the chosen one follows")
    assert window.field.current.mark == ""  # nothing to put on a sheet
    mouse.release()
    at_rest(window, runner, qtbot)
    runner.run()
    # And then on the next coarser mesh, to tell how far the two differ; not while the hand drags.
    assert solver.levels == ["normal", "fine", "quick", "quick", "fine", "normal"]
    assert window.field.current.evaluation.response.spread.against == "normal"
    assert "fine mesh" in engine(window)


def test_the_hand_is_followed_past_a_shape_that_is_refused(window, runner, hand, solver):
    runner.run()
    mouse = hand(window.mat.plan).press("element.width").move(6, 0)
    solver.refusal = "field solver: an outline crosses itself; accepted: it may not"
    runner.run()
    assert window.readings.check.words.startswith("No field check: an outline crosses itself")
    solver.refusal = ""
    mouse.move(6, 0)
    runner.run()
    assert "quick mesh" in engine(window)
    mouse.release()


def test_while_the_hand_moves_what_was_solved_is_greyed(window, runner, hand):
    runner.run()
    mouse = hand(window.mat.plan).press("element.width").move(6, 0)
    runner.run()
    mouse.move(6, 0)
    assert engine(window) == "live estimate, by equations"
    shown = window.curves.match.state
    assert (shown.engine, shown.beside.engine, shown.beside.is_stale) == (LIVE, "field", True)
    assert window.readings.check.before.endswith("(quick mesh).")
    mouse.release()


def test_progress_is_told_and_can_be_cancelled(window, runner):
    check = window.readings.check
    assert check.words == "Preparing the field check…"
    runner.waiting[KIND].stepped(3, 7)
    assert check.words == "Field check: 3 of about 7 frequencies"
    assert check.button.text() == CANCEL
    check.button.click()
    assert KIND not in runner.waiting
    assert check.button.text() == CHECK_NOW
    check.button.click()
    runner.run()
    assert engine(window).startswith("field solver")


def test_what_is_not_covered_is_told_in_one_line_and_live_stays(window, runner, solver):
    solver.refusal = "field solver: the spacer's mean permittivity is 4.30; accepted: up to 1.5"
    runner.run()
    words = window.readings.check.words
    assert words == "No field check: the spacer's mean permittivity is 4.30; accepted: up to 1.5"
    assert engine(window).startswith("live")
    assert window.curves.match.state.engine == LIVE


def test_it_can_be_switched_off(window, runner, qtbot):
    runner.run()
    window.window_actions["field-check"].trigger()
    assert not window.settings.value("field_check")
    assert not window.readings.check.isVisible()
    assert engine(window) == "live model, by equations"
    assert window.curves.match.state.beside is None
    widen(window)
    assert KIND not in runner.waiting
    window.window_actions["field-check"].trigger()
    at_rest(window, runner, qtbot)
    assert engine(window).startswith("field solver")


def test_curves_name_their_engine_in_words(window, runner):
    runner.run()
    state = window.curves.match.state
    assert [engine_words(one) for one in (state, state.beside)] == [
        "field solver",
        "live, estimate",
    ]
    spoken = window.curves.match.accessibleDescription()
    assert spoken.startswith("field solver: Match")
    assert "; live, estimate: Match" in spoken
    widen(window)
    assert "solved before: Match" in window.curves.match.accessibleDescription()


def test_solved_and_live_curves_differ_without_colour(window, runner, qtbot):
    """The pens differ in dash and width, whatever the colours."""
    runner.run()
    chart = window.curves.match
    solved, live = (chart.curve_pen(one, "#000000") for one in (chart.state, chart.state.beside))
    assert not solved.dashPattern()
    assert live.dashPattern()
    assert live.widthF() < solved.widthF()


@pytest.mark.parametrize("name", ["match", "axial_ratio", "smith", "pattern"])
def test_every_chart_paints_both_engines(window, runner, name):
    window.curves.choose(name)
    alone = window.curves._charts[name].grab().toImage()
    runner.run()
    assert window.curves._charts[name].grab().toImage() != alone


def test_sheets_say_how_the_very_design_was_checked(window, runner):
    runner.run()
    window.show_export()
    dialog = window.findChild(ExportDialog)
    mark = dialog.request.options.field_check
    assert mark.startswith("Field-checked: normal mesh, Kerfwave ")
    dialog.reject()
    widen(window)
    window.show_export()
    dialog = window.findChildren(ExportDialog)[-1]
    assert dialog.request.options.field_check == ""
    dialog.reject()


def test_the_line_is_named_for_screen_readers(window, runner):
    button = window.readings.check.button
    runner.waiting[KIND].stepped(1, 7)
    assert button.isVisible()
    name = QAccessible.queryAccessibleInterface(button).text(QAccessible.Text.Name)
    assert name == "Cancel: field check"


def test_a_tiny_design_is_solved_beside_the_window(open_window, qtbot):
    """One true solution in a thread: the answer comes back, and the window ends cleanly."""
    runner = JobRunner()
    window = open_window(runner, SolverProcess())
    window.settings.set("mesh_level", "coarse")
    small = edit.with_texts(
        default_design(),
        {"feed": "probe", "brief.polarisation": "linear", "stock.ground": "rect:80mmx80mm"}.items(),
    )
    window.document.start(small, None)
    qtbot.waitUntil(lambda: window.field.current is not None, timeout=300_000)
    response = window.field.current.evaluation.response
    assert response.engine == "field"
    # A lossless antenna radiates all it takes but what the foil turns to heat.
    assert 0.5 < float(response.spot.efficiency) <= 1.0
    assert engine(window).startswith("field solver, coarse mesh")


def test_the_chosen_mesh_is_shown_first_and_then_its_plus_and_minus(window, runner, solver):
    runner.run()
    assert solver.levels == ["normal"]
    first = window.field.current
    assert first.evaluation.response.spread is None
    assert first.mark.startswith("Field-checked: normal mesh")
    check = window.readings.check
    assert check.words == "Solved on the normal mesh; now on the coarse one, for the ±."
    assert check.button.text() == CANCEL
    assert not any("±" in line.words for line in window.readings._state.lines)
    runner.run()
    assert solver.levels == ["normal", "coarse"]
    assert window.field.current.evaluation.response.spread.against == "coarse"
    assert window.field.current.solved == first.solved
    assert any("±" in line.words for line in window.readings._state.lines)
    assert not runner.waiting


def test_an_edit_supersedes_the_coarser_solve(window, runner, solver):
    runner.run()
    widen(window)
    assert not runner.waiting
    assert solver.drops == 1
    assert window.field.current is None


def test_an_answer_stands_where_its_plus_and_minus_is_cancelled(window, runner):
    runner.run()
    check = window.readings.check
    check.button.click()
    assert not runner.waiting
    assert check.words.startswith("Sheets will say: field-checked, normal mesh")
    assert check.button.text() == TRY_CABLE


def test_the_hand_puts_the_plus_and_minus_off(window, runner, qtbot, hand):
    runner.run()
    mouse = hand(window.mat.plan).press("element.width")
    assert not runner.waiting
    mouse.release()
    at_rest(window, runner, qtbot)
    assert window.field.current.evaluation.response.spread.against == "coarse"


def test_a_coarser_answer_of_the_same_design_is_not_solved_again(window, runner, qtbot, solver):
    window.settings.set("mesh_level", "coarse")
    at_rest(window, runner, qtbot)
    assert solver.levels == ["coarse"]
    assert not runner.waiting  # nothing is coarser, but the quick mesh, which tells too little
    window.settings.set("mesh_level", "normal")
    at_rest(window, runner, qtbot)
    assert solver.levels == ["coarse", "normal"]
    assert window.field.current.evaluation.response.spread.against == "coarse"
    assert not runner.waiting


def test_where_only_the_finer_mesh_will_do_there_is_no_plus_and_minus(window, runner, solver):
    solver.refused = "coarse"
    runner.run()
    runner.run()
    assert solver.levels == ["normal", "coarse"]
    assert window.field.current.evaluation.response.spread is None
    assert window.readings.check.words.startswith("Sheets will say: field-checked, normal mesh")
    assert not runner.waiting


def test_a_cable_is_solved_when_it_is_asked_for(window, runner, solver):
    run_all(runner)
    check = window.readings.check
    assert check.button.text() == TRY_CABLE
    check.button.click()
    assert check.button.text() == CANCEL
    runner.run()
    tail = solver.tails[-1]
    assert tail.length == pytest.approx(0.5 * 299792458 / window.document.design.brief.frequency)
    assert check.cable.startswith("With ")
    assert "of cable: VSWR" in check.cable
    assert not check.button.isVisible()
    widen(window)
    assert check.cable == ""
    window.window_actions["undo"].trigger()
    assert check.cable.startswith("With ")


def test_an_edit_stops_the_cable(window, runner, solver):
    run_all(runner)
    window.readings.check.button.click()
    assert TAIL in runner.waiting
    widen(window)
    assert TAIL not in runner.waiting
    assert solver.drops == 1
    assert not window.tail.is_busy


def test_the_cable_can_be_cancelled_and_tried_again(window, runner, solver):
    run_all(runner)
    check = window.readings.check
    check.button.click()
    check.button.click()
    assert not runner.waiting
    assert solver.drops == 1
    assert check.button.text() == TRY_CABLE
    check.button.click()
    run_all(runner)
    assert "of cable: VSWR" in check.cable


def test_the_field_check_goes_before_the_cable(window, runner, qtbot, solver):
    """The solver answers one question at a time: neither drops what the other has asked."""
    run_all(runner)
    check = window.readings.check
    check.button.click()
    window.settings.set("mesh_level", "fine")
    assert solver.drops == 0
    assert TAIL in runner.waiting
    qtbot.waitUntil(lambda: KIND in runner.waiting)
    assert TAIL not in runner.waiting
    assert solver.drops == 1
    run_all(runner)
    widen(window)
    at_rest(window, runner, qtbot)
    assert KIND in runner.waiting  # the coarser mesh
    window.tail.start()
    assert TAIL not in runner.waiting
    run_all(runner)
    assert check.button.text() == TRY_CABLE


def test_a_board_over_an_endless_ground_offers_no_cable(window, runner, solver):
    solver.behind = None
    runner.run()
    assert window.readings.check.button.text() != TRY_CABLE


def test_a_cable_that_cannot_be_solved_says_why(window, runner, solver):
    run_all(runner)
    window.readings.check.button.click()
    solver.refusal = "coax tail: the cable reaches over the rim"
    runner.run()
    assert window.readings.check.cable == (
        "No answer with a cable: coax tail: the cable reaches over the rim"
    )


def test_a_check_is_for_one_design_only(window, runner):
    runner.run()
    assert isinstance(window.field, FieldCheck)
    window.cards.edited.emit("brief.frequency", "2.4 GHz")
    assert window.field.current is None
