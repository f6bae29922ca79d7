"""Readings tell what is known, and never call the unknown met."""

from dataclasses import replace

import pytest
from pytest import approx

from app.curves.state import ESTIMATE
from app.evaluation import evaluate
from app.presenters.curves import curves_state
from app.presenters.readings import readings_state
from core.design import edit
from core.design.defaults import default_design
from core.errors import LayoutError
from core.findings import Severity
from core.response.model import Reading, TrustLevel
from core.sizing.size import size

THICK = {"stock.spacer.1.thickness": "14 mm"}
SMALL = {"stock.ground.diameter": "130 mm"}


def evaluated(**changes):
    return evaluate(edit.with_texts(default_design(), changes.items()))


def matched():
    """Linear antenna with a probe, sized: what equations tell."""
    changes = {"feed": "probe", "brief.polarisation": "linear"}
    return size(edit.with_texts(default_design(), changes.items())).design


def lines(evaluation):
    return readings_state(evaluation, evaluation).lines


@pytest.mark.parametrize("changes", [THICK, SMALL])
def test_what_equations_cannot_tell_is_unknown_and_not_met(changes):
    evaluation = evaluated(**changes)
    assert evaluation.response.trust[Reading.MATCH].level is TrustLevel.UNKNOWN
    words = [one.words for one in lines(evaluation) if one.icon == "unknown"]
    assert any("atch" in one for one in words)
    assert any("xial ratio" in one for one in words)
    for one in lines(evaluation):
        assert one.icon != "met"
        assert "VSWR" not in one.words


def test_a_reason_is_told_once():
    words = [one.words for one in lines(evaluated(**SMALL))]
    assert sum("Match and bands unknown" in one for one in words) == 1
    assert sum("strips uncoupled" in one for one in words) == 1


@pytest.mark.parametrize("changes", [THICK, SMALL])
def test_curves_of_the_unknown_are_estimates_and_tell_no_value(changes):
    state = curves_state(evaluated(**changes), is_stale=False, match_as="S11")
    for chart in (state.match, state.axial_ratio, state.smith):
        assert chart.is_estimate
        assert ESTIMATE in chart.spoken


def test_known_curves_tell_their_value_at_the_frequency():
    state = curves_state(evaluate(matched()), is_stale=False, match_as="VSWR")
    assert not state.match.is_estimate
    assert state.match.spoken.startswith("Match, VSWR: 1.0")
    assert "2.32 GHz" in state.match.spoken


def test_the_match_target_is_that_of_the_brief():
    # VSWR 2 is a reflection of 1/3, a return loss of 9.54 dB (definition).
    state = curves_state(evaluated(), is_stale=False, match_as="S11")
    assert state.match.target == approx(-9.542, abs=1e-3)
    assert state.smith.target == approx(1 / 3)


def test_a_linear_antenna_has_no_axial_ratio_curve():
    changes = {"feed": "probe", "brief.polarisation": "linear"}
    state = curves_state(evaluated(**changes), is_stale=False, match_as="S11")
    assert not state.has_axial_ratio


def test_a_missed_brief_offers_sizing_and_a_met_one_does_not():
    missed = evaluated(**{"brief.frequency": "2.6 GHz"})
    assert readings_state(missed, missed).can_size
    met = evaluate(matched())
    assert not readings_state(met, met).can_size


def test_what_cannot_be_made_comes_first_and_names_its_field():
    evaluation = evaluated(**{"feed.first.width": "0.5 mm"})
    finding = readings_state(evaluation, evaluation).findings[0]
    assert finding.icon == Severity.REFUSAL.value
    assert finding.field == "feed.first.width"


@pytest.mark.parametrize(
    ("changes", "topics"),
    [
        ({}, {"Foam", "Cutting"}),
        ({"stock.spacer": "card:3mm"}, {"Damp", "Cutting"}),
        ({"making.process": "toner-etch", "stock.spacer": "FR-4:1.6mm"}, {"Etching"}),
    ],
)
def test_cautions_follow_process_and_stock(changes, topics):
    evaluation = evaluated(**changes)
    found = {one.words.split(":")[0] for one in readings_state(evaluation, evaluation).cautions}
    assert topics <= found
    assert ("Etching" in found) == ("Etching" in topics)


def test_a_finding_leads_to_its_field(window):
    window.cards.edited.emit("feed.first.width", "0.5 mm")
    window.readings.findings.shown[0].click()
    assert window.cards.card("feed").is_open
    assert window.cards.card("feed").form.field("feed.first.width").is_in_use


def test_readings_and_curves_follow_an_edit(window):
    before = [one.line.words for one in window.readings.lines.shown]
    curve = window.curves.match.state
    window.cards.edited.emit("element.width", "52 mm")
    assert [one.line.words for one in window.readings.lines.shown] != before
    assert window.curves.match.state is not curve


def test_a_layout_that_cannot_be_drawn_keeps_the_last_one_greyed(window, monkeypatch):
    def refuse(design):
        raise LayoutError("the strip crosses itself", field="feed.delay_length")

    monkeypatch.setattr("app.evaluation.build_layout", refuse)
    window.cards.edited.emit("element.width", "52 mm")
    assert window.mat.plan.state.is_stale
    assert window.curves.match.state.is_stale
    assert window.readings.findings.shown[0].line.words == "the strip crosses itself"
    monkeypatch.undo()
    window.cards.edited.emit("element.width", "53 mm")
    assert not window.mat.plan.state.is_stale


def test_engine_is_named(window):
    assert "live model" in readings_state(window.pipeline.current, window.pipeline.current).engine


def test_sizing_shows_a_ghost_first_and_is_one_undo_step(window):
    missed = edit.with_text(default_design(), "brief.frequency", "2.45 GHz")
    window.document.start(missed, None)
    window.window_actions["size"].trigger()
    assert window.document.design == missed
    assert window.mat.plan.state.ghost
    proposed = window.sizing.proposed
    window.readings.accepted.emit()
    assert window.document.design == proposed
    assert window.mat.plan.state.ghost == ()
    window.window_actions["undo"].trigger()
    assert window.document.design == missed


def test_a_proposal_can_be_left(window):
    before = window.document.design
    window.window_actions["size"].trigger()
    window.readings.discarded.emit()
    assert window.document.design == before
    assert window.mat.plan.state.ghost == ()
    assert window.document.stack.count() == 0


def test_an_edit_overtakes_a_proposal(window):
    window.window_actions["size"].trigger()
    window.cards.edited.emit("element.width", "50 mm")
    assert window.sizing.proposed is None
    assert window.mat.plan.state.ghost == ()


def test_the_proposal_of_an_unknown_is_called_an_estimate(window):
    thick = edit.with_text(default_design(), "stock.spacer.1.thickness", "12 mm")
    window.document.start(replace(thick, name="Thick"), None)
    window.window_actions["size"].trigger()
    assert "not to cut by" in window.readings.offer.words
    assert "VSWR" not in window.readings.offer.words
