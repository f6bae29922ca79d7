"""Cards show every parameter, and say the design in a line while they are closed."""

import pytest

from app.document import Document
from app.presenters.cards import cards
from app.presenters.cards_presenter import CardsPresenter
from app.presenters.rows import Choice, Field
from core.design import edit
from core.design.defaults import default_design

DESIGNS = [
    {},
    {"feed": "probe"},
    {"stock.ground": "rect:180mmx160mm", "stock.spacer": "card:1mm + air:9mm"},
    {"brief.polarisation": "lhcp"},
]
# Shown as a part of a whole: the foil by its name, bends in one line.
IN_ANOTHER = ("stock.foil.name", "feed.lead_in.bends.")


def design_of(changes):
    return edit.with_texts(default_design(), changes.items())


class FakeView:
    """Remembers what it is told."""

    def __init__(self):
        self.states, self.refusals = (), []

    def show_state(self, states):
        self.states = states

    def show_refusal(self, key, message):
        self.refusals.append((key, message))


@pytest.mark.parametrize("changes", DESIGNS)
def test_every_parameter_has_its_field(changes):
    design = design_of(changes)
    shown = {
        row.key for card in cards(design) for row in card.rows if isinstance(row, Field | Choice)
    }
    missing = [
        one.key
        for one in edit.parameters(design)
        if one.key not in shown and not one.key.startswith(IN_ANOTHER)
    ]
    assert missing == []


@pytest.mark.parametrize("changes", DESIGNS)
def test_every_field_takes_back_what_it_shows(changes):
    """A field's own text, typed again, is taken and changes no more than its last digit."""
    design = design_of(changes)
    for card in cards(design):
        for row in card.rows:
            if isinstance(row, Field):
                after = edit.with_text(design, row.key, row.text)
                if not row.key.endswith("bends"):
                    old, new = edit.value_at(design, row.key), edit.value_at(after, row.key)
                    assert new == old or new == pytest.approx(old, rel=1e-3)  # four digits


def test_closed_cards_say_the_design_in_a_line():
    said = {card.id: card.summary for card in cards(default_design())}
    assert said["brief"] == "2.32 GHz, right-hand, 50 Ω"
    assert said["stock"] == "6 mm polystyrene, 210 mm disc"
    assert "knife" in said["making"]


def test_the_feed_card_is_named_for_its_feed():
    titles = [cards(design_of(changes))[3].title for changes in DESIGNS[:2]]
    assert titles == ["Branches", "Feed"]


def test_a_linear_antenna_has_no_axial_ratio_to_ask_for():
    keys = {
        row.key
        for row in cards(design_of({"feed": "probe", "brief.polarisation": "linear"}))[0].rows
    }
    assert "brief.axial_ratio_db" not in keys


class TestPresenter:
    @pytest.fixture
    def view(self):
        return FakeView()

    @pytest.fixture
    def presenter(self, qapp, view):
        self.document = Document(default_design())
        return CardsPresenter(self.document, view)

    def test_a_refusal_names_its_field_once(self, presenter, view):
        presenter.edit("element.width", "fuzz")
        ((key, message),) = view.refusals
        assert key == "element.width"
        assert message.startswith("'fuzz' is not a length")
        assert self.document.stack.count() == 0

    def test_a_held_key_is_one_undo_step_and_a_new_press_another(self, presenter):
        for held in (False, True, True, False, True):
            presenter.step("element.width", 1.0, held)
        assert self.document.stack.count() == 2

    def test_undo_says_what_it_takes_back(self, presenter):
        presenter.edit("feed.first.gap", "8 mm")
        assert self.document.stack.undoText() == "Change gap"
        presenter.act("layer.add.1")
        assert self.document.stack.undoText() == "Add a layer"

    def test_undo_keeps_far_more_steps_than_anyone_takes_back(self, presenter):
        for i in range(250):
            presenter.edit("element.width", f"{50 + i / 100} mm")
        assert self.document.stack.count() == 250
