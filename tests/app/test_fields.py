"""Fields take quantities as people type them, and refuse beside themselves."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QComboBox, QLabel, QLineEdit
from pytest import approx

from core.design import edit
from core.design.polarisation import Polarisation


def line_of(window, key):
    window.cards.focus_field(key)
    field = next(c.form.field(key) for c in window.cards.all_cards if c.form.field(key))
    return field.findChild(QLineEdit)


def refusal_of(line):
    label = line.parentWidget().findChild(QLabel)
    return label.text() if not label.isHidden() else ""


def type_into(qtbot, line, text):
    line.selectAll()
    qtbot.keyClicks(line, text)
    qtbot.keyClick(line, Qt.Key.Key_Return)


@pytest.mark.parametrize(
    ("key", "text", "value", "shown"),
    [
        ("element.width", "1/16 in", 0.0015875, "1.5875 mm"),
        ("element.length", '2 1/8"', 0.053975, "53.975 mm"),
        ("element.length", "5,15 cm", 0.0515, "51.5 mm"),
        ("brief.frequency", "2450MHz", 2.45e9, "2.45 GHz"),
        ("brief.frequency", "5.8", 5.8e9, "5.8 GHz"),
        ("stock.spacer.1.thickness", "250 mil", 0.00635, "6.35 mm"),
        ("brief.impedance", "75 ohm", 75.0, "75 Ω"),
    ],
)
def test_a_field_takes_what_people_type(window, qtbot, key, text, value, shown):
    line = line_of(window, key)
    type_into(qtbot, line, text)
    assert edit.value_at(window.document.design, key) == approx(value, rel=1e-12)
    assert line.text() == shown
    assert window.document.stack.count() == 1


@pytest.mark.parametrize("text", ["fuzz", "nan", "-3", "1e9 km", "", "4 GHz", "inf mm"])
def test_a_refusal_stands_at_its_field_and_changes_nothing(window, qtbot, text):
    before = window.document.design
    line = line_of(window, "element.width")
    line.clear()
    type_into(qtbot, line, text)
    assert window.document.design == before
    assert "accepted:" in refusal_of(line)
    assert line.accessibleDescription() == refusal_of(line)
    qtbot.keyClick(line, Qt.Key.Key_Escape)
    assert refusal_of(line) == ""
    assert edit.value_at(before, "element.width") == approx(
        edit.value_at(window.document.design, "element.width")
    )


def test_a_refusal_goes_when_another_edit_makes_the_field_right(window, qtbot):
    line = line_of(window, "element.width")
    type_into(qtbot, line, "fuzz")
    type_into(qtbot, line, "50 mm")
    assert refusal_of(line) == ""


def test_a_refusal_goes_when_the_old_value_is_typed_again(window, qtbot):
    line = line_of(window, "element.width")
    old = line.text()
    type_into(qtbot, line, "fuzz")
    type_into(qtbot, line, "5.416 cm")
    assert refusal_of(line) == ""
    assert line.text() == old


def test_leaving_a_field_untouched_keeps_every_digit(window, qtbot):
    design = edit.with_number(window.document.design, "element.width", 0.0512345678912)
    window.document.change(design, "Change width")
    line = line_of(window, "element.width")
    qtbot.keyClick(line, Qt.Key.Key_Return)
    window.mat.plan.setFocus()
    assert window.document.design.element.width == 0.0512345678912


@pytest.mark.parametrize(
    ("keys", "step"),
    [
        (Qt.KeyboardModifier.NoModifier, 1e-4),
        (Qt.KeyboardModifier.ShiftModifier, 1e-3),
        (Qt.KeyboardModifier.ControlModifier, 1e-5),
    ],
)
def test_the_up_key_steps_a_length(window, qtbot, keys, step):
    line, before = line_of(window, "element.width"), window.document.design.element.width
    qtbot.keyClick(line, Qt.Key.Key_Up, keys)
    assert window.document.design.element.width == approx(before + step, abs=1e-12)


def test_linear_with_two_branches_is_refused_in_one_line(window):
    window.cards.focus_field("brief.polarisation")
    before = window.document.design
    window.cards.edited.emit("brief.polarisation", "linear")
    field = window.cards.card("brief").form.field("brief.polarisation")
    assert "circular polarisation only" in field.findChild(QLabel).text()
    assert window.document.design == before
    assert field.findChild(QComboBox).currentData() == "rhcp"


def test_the_feed_card_changes_with_the_feed(window):
    window.cards.edited.emit("feed", "probe")
    assert window.cards.card("feed").header.text() == "Feed"
    assert "feed.x" in window.cards.card("feed").form.keys
    window.window_actions["undo"].trigger()
    assert window.cards.card("feed").header.text() == "Branches"


def test_a_process_loads_its_values(window):
    window.cards.edited.emit("making.process", "scissors")
    assert window.document.design.making.narrowest_strip == approx(2.5e-3)


def test_a_change_of_the_brief_moves_no_copper(window):
    before = window.document.design
    window.cards.edited.emit("brief.frequency", "2.6 GHz")
    after = window.document.design
    assert (after.element, after.feed, after.stock) == (before.element, before.feed, before.stock)


class TestLayers:
    def act(self, window, *deeds):
        window.cards.focus_field("stock.foil")
        for deed in deeds:
            window.cards.acted.emit(deed)
        return window.document.design.stock.spacer

    def test_a_layer_is_added_changed_moved_and_removed(self, window):
        assert len(self.act(window, "layer.add.1")) == 2
        window.cards.edited.emit("stock.spacer.2.material", "card")
        window.cards.edited.emit("stock.spacer.2.thickness", "1 mm")
        layers = self.act(window, "layer.down.2")
        assert [one.material for one in layers] == ["card", "polystyrene"]
        assert self.act(window, "layer.remove.1")[0].material == "polystyrene"

    def test_a_material_may_be_typed_by_its_values(self, window):
        window.cards.edited.emit("stock.spacer.1.material", "er=2.33,tan=0.001")
        layer = window.document.design.stock.spacer[0]
        assert (layer.eps_r, layer.loss_tangent) == (2.33, 0.001)

    def test_the_ground_plate_keeps_its_size_when_its_shape_changes(self, window):
        before = window.document.design.stock.ground.diameter
        window.cards.edited.emit("ground-shape", "rect")
        ground = window.document.design.stock.ground
        assert (ground.width, ground.length) == approx((before, before))
        window.cards.edited.emit("ground-shape", "disc")
        assert window.document.design.stock.ground.diameter == approx(before)


def test_a_left_hand_antenna_lands_on_the_other_side(window):
    window.cards.edited.emit("brief.polarisation", "lhcp")
    assert window.document.design.brief.polarisation is Polarisation.LHCP
    places = [one.x for one in window.mat.plan.state.handles if one.name == "feed.second.landing"]
    assert places[0] < 0
