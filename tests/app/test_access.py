"""Everything can be named, reached and read: by screen reader, by keyboard, by day and night."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible, QColor
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractSlider,
    QApplication,
    QComboBox,
    QDialog,
    QLineEdit,
    QWidget,
)

from app import theme
from app.actions import COMMANDS
from app.curves.chart import Chart
from app.dialogs.preferences import PreferencesDialog
from app.notices import NOTICES
from app.presenters.readings import Line
from app.settings import SETTINGS
from app.views.lines import _TINTS, IconLine

INPUTS = (QLineEdit, QComboBox, QAbstractSlider, QAbstractButton, Chart)


def inputs(root):
    """Widgets of ours that take input, those hidden in folded cards included."""
    return [
        one
        for one in root.findChildren(QWidget)
        if isinstance(one, INPUTS)
        and not one.objectName().startswith("qt_")
        and type(one).__name__ not in ("QScrollBar", "QComboBoxPrivateScroller")
    ]


def open_everything(window):
    for card in window.cards.all_cards:
        card.open(True)
        card.form.show_more(True)
    window.cards.acted.emit("layer.add.1")


@pytest.mark.parametrize("feed", ["dual-edge", "probe"])
def test_every_widget_has_a_name_for_screen_readers(window, feed):
    window.cards.edited.emit("feed", feed)
    open_everything(window)
    unnamed = [
        f"{type(one).__name__} {one.objectName()}"
        for one in inputs(window)
        if not QAccessible.queryAccessibleInterface(one).text(QAccessible.Text.Name)
        and not (isinstance(one, IconLine) and one.line is None)
    ]
    assert unnamed == []


def test_names_of_fields_differ(window):
    open_everything(window)
    names = [one.accessibleName() for one in window.cards.findChildren(QLineEdit)]
    names = [name for name in names if name]
    doubles = {name for name in names if names.count(name) > 1}
    # The line inside a box that may be typed in bears the name of its box.
    boxes = {one.accessibleName() for one in window.cards.findChildren(QComboBox)}
    assert doubles <= boxes


def test_nothing_that_takes_input_refuses_the_focus(window):
    open_everything(window)
    refusing = [
        one
        for one in inputs(window)
        if one.focusPolicy() == Qt.FocusPolicy.NoFocus
        and not (isinstance(one, IconLine) and not (one.line and one.line.field))
        and one.parentWidget().objectName() != "qt_toolbar"
    ]
    assert [f"{type(one).__name__}: {one.accessibleName()}" for one in refusing] == []


def test_the_mat_speaks_the_chosen_handle(window, qtbot):
    plan = window.mat.plan
    qtbot.waitUntil(plan.hasFocus)
    qtbot.keyClick(plan, Qt.Key.Key_Tab)
    assert plan.accessibleDescription().startswith("Width 54.1")
    qtbot.keyClick(plan, Qt.Key.Key_Left, Qt.KeyboardModifier.ShiftModifier)
    assert plan.accessibleDescription().startswith("Width 55.1")


def test_tab_reaches_the_template_button(window, qtbot):
    window.mat.edge.setFocus()
    seen = set()
    for _ in range(200):
        focused = QApplication.focusWidget()
        seen.add(focused)
        if focused is window.header.template_button:
            break
        qtbot.keyClick(focused, Qt.Key.Key_Tab)
    assert window.header.template_button in seen
    assert window.mat.slider in seen


def luminance(name):
    """Relative luminance of a colour (WCAG 2.2, definition)."""
    colour = QColor(name)
    parts = [colour.redF(), colour.greenF(), colour.blueF()]
    lit = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
    return 0.2126 * lit[0] + 0.7152 * lit[1] + 0.0722 * lit[2]


def contrast(one, other):
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


THEMES = [theme.LIGHT, theme.DARK]


@pytest.mark.parametrize("shades", THEMES, ids=lambda one: one.name)
@pytest.mark.parametrize(
    ("ink", "ground", "least"),
    [  # WCAG 2.2: 4.5 for text (1.4.3), 3 for what carries meaning otherwise (1.4.11)
        ("text", "card", 4.5),
        ("text", "panel", 4.5),
        ("text", "field", 4.5),
        ("muted", "card", 4.5),
        ("muted", "panel", 4.5),
        ("muted", "plot", 4.5),
        ("bad", "card", 4.5),
        ("unknown", "plot", 4.5),
        ("on_accent", "accent", 4.5),
        ("mat_ink", "mat_halo", 4.5),
        ("ruler_ink", "ruler", 4.5),
        ("good", "card", 3.0),
        ("warn", "card", 3.0),
        ("focus", "card", 3.0),
        ("curve", "plot", 3.0),
        ("curve_second", "plot", 3.0),
        ("accent", "plot", 3.0),
        ("handle", "handle_edge", 3.0),
    ],
)
def test_colours_can_be_told_apart(shades, ink, ground, least):
    assert contrast(getattr(shades, ink), getattr(shades, ground)) >= least


@pytest.mark.parametrize("choice", ["light", "dark"])
def test_the_appearance_follows_the_setting(window, qtbot, choice):
    window.settings.set("appearance", choice)
    assert theme.theme_of(window).name == choice
    assert window.grab().toImage().pixelColor(5, window.height() - 5).lightness() == (
        pytest.approx(QColor(theme.theme_of(window).panel).lightness(), abs=30)
    )


def test_every_icon_that_lines_use_is_there(qapp):
    for name in _TINTS:
        assert not theme.pixmap(name, "#000000", 16).toImage().isNull()
        widget = IconLine()
        widget.show_line(Line(name, "words"))
        assert widget.accessibleName() == f"{name}: words"


def test_icons_of_states_differ_without_colour(qapp):
    """The meaning is in the shape: two states never look alike in one colour."""
    pictures = [theme.pixmap(name, "#000000", 32).toImage() for name in _TINTS]
    assert all(a != b for i, a in enumerate(pictures) for b in pictures[:i])


def test_every_command_does_something_and_has_a_tip(window):
    keys = [key.toString() for a in window.window_actions.values() for key in a.shortcuts()]
    assert len(keys) == len(set(keys))
    for row in COMMANDS:
        action = window.window_actions[row.id]
        assert action.text()
        assert action.toolTip()
        if row.id not in ("undo", "redo"):  # made and connected by the undo stack itself
            assert action.receivers("2triggered(bool)") > 0


@pytest.mark.parametrize("command", ["zoom-in", "zoom-out", "fit", "fit-copper", "true-size"])
def test_looking_is_no_edit(window, command):
    window.window_actions[command].trigger()
    assert window.document.stack.count() == 0


def test_menus_have_unique_mnemonics(window):
    for menu in window.header.menus.values():
        letters = [a.text()[a.text().index("&") + 1].lower() for a in menu.actions() if a.text()]
        assert len(letters) == len(set(letters)), letters


@pytest.mark.parametrize("row", SETTINGS, ids=lambda row: row.key)
def test_every_setting_is_kept_and_refuses_nonsense(settings, row):
    value = row.allowed[-1] if row.allowed else row.default
    settings.set(row.key, value)
    assert settings.value(row.key) == value
    settings._store.setValue(row.key, {"no": "sense"})
    assert settings.value(row.key) == row.default
    if row.allowed:
        with pytest.raises(ValueError, match=row.key):
            settings.set(row.key, "nonsense")


def test_preferences_show_each_setting_meant_for_people(window):
    dialog = PreferencesDialog(window.settings, window)
    assert set(dialog.editors) == {row.key for row in SETTINGS if row.shown}
    dialog.editors["match_as"].textActivated.emit("VSWR")
    assert window.curves.match.state.title == "Match, VSWR"
    dialog.editors["dimensions"].setChecked(False)
    assert not window.mat.plan.shows_dimensions
    dialog.deleteLater()


@pytest.mark.parametrize("notice", NOTICES, ids=lambda one: one)
def test_every_notice_can_be_told_and_closed(window, notice):
    words = dict.fromkeys(("reason", "folder", "names", "name", "copy", "log"), "something")
    window.notices.tell(notice, **words)
    assert window.notices.isVisible()
    assert "{" not in window.notices.words
    window.notices._close.click()
    assert not window.notices.isVisible()


def test_dialogs_are_named(window):
    window.show_preferences()
    dialog = window.findChild(QDialog)
    assert dialog.windowTitle()
    dialog.reject()
