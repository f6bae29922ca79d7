"""Charts put values where they belong."""

from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from pytest import approx

from app import theme
from app.curves.chart import polygon
from app.curves.line_plot import LinePlot
from app.curves.smith import SmithChart
from app.curves.state import ESTIMATE
from app.evaluation import evaluate
from app.presenters.curves import curves_state
from core.design.defaults import default_design
from core.design.edit import with_texts


@pytest.fixture(scope="module")
def curves():
    # A probe: with two branches the curves are estimates.
    changes = [("feed", "probe"), ("brief.polarisation", "linear")]
    design = with_texts(default_design(), changes)
    return curves_state(evaluate(design), is_stale=False, match_as="S11")


@pytest.fixture
def plot(qtbot, curves):
    widget = LinePlot("Match curve")
    qtbot.addWidget(widget)
    widget.resize(420, 300)
    widget.show_plot(curves.match)
    return widget


def test_points_keep_their_places():
    across, down = np.linspace(0, 400, 201), np.random.default_rng(1).normal(size=201)
    found = [(point.x(), point.y()) for point in polygon(across, down)]
    np.testing.assert_allclose(found, np.column_stack((across, down)), rtol=1e-15)


def pixels_of(widget, colour):
    picture = widget.grab().toImage()
    return [
        (x, y)
        for x in range(picture.width())
        for y in range(picture.height())
        if picture.pixelColor(x, y) == QColor(colour)
    ]


def test_a_flat_curve_lies_at_its_value(plot, curves):
    flat = replace(curves.match, values=np.full(201, -15.0))
    plot.show_plot(flat)
    rows = [y for _, y in pixels_of(plot, theme.LIGHT.curve)]
    area = plot.area  # -15 dB is half way between 0 and -30
    assert np.mean(rows) == approx(area.center().y(), abs=1.0)


def test_an_estimate_is_dashed(plot, curves):
    flat = replace(curves.match, values=np.full(201, -15.0))
    plot.show_plot(flat)
    whole = len({x for x, _ in pixels_of(plot, theme.LIGHT.curve)})
    plot.show_plot(replace(flat, is_estimate=True))
    dashed = len({x for x, _ in pixels_of(plot, theme.LIGHT.curve)})
    assert dashed < 0.8 * whole


def test_values_that_are_not_finite_are_painted_without_a_warning(plot, curves):
    values = np.array(curves.match.values)
    values[3], values[50] = np.inf, -np.inf
    plot.show_plot(replace(curves.match, values=values))
    assert not plot.grab().isNull()


def test_the_marker_tells_a_value_by_key(plot, qtbot, curves):
    qtbot.keyClick(plot, Qt.Key.Key_Left)
    i = int(np.searchsorted(curves.match.frequency, curves.match.brief)) - 1
    value = f"{curves.match.values[i]:.2f}".replace("-", "−")
    assert value in plot.accessibleDescription()


def test_the_marker_of_an_estimate_tells_none(plot, qtbot, curves):
    plot.show_plot(replace(curves.match, is_estimate=True, spoken=ESTIMATE))
    qtbot.keyClick(plot, Qt.Key.Key_Right)
    assert "unknown" in plot.accessibleDescription()


@pytest.mark.parametrize("spot", [0j, 1 + 0j, -1 + 0j, 1j, 0.5 - 0.5j])
def test_the_smith_chart_puts_a_reflection_in_its_plane(qtbot, curves, spot):
    """Radius and angle of the reflection, to a pixel: x across, y up, the rim at 1."""
    widget = SmithChart("Smith chart")
    qtbot.addWidget(widget)
    widget.resize(300, 320)
    trace = np.full(201, spot)
    widget.show_smith(replace(curves.smith, s11=trace, spot=spot))
    centre, radius = widget.circle
    dot = pixels_of(widget, theme.LIGHT.accent)
    middle = np.mean(dot, axis=0)
    wanted = (centre.x() + spot.real * radius, centre.y() - spot.imag * radius)
    assert middle == approx(wanted, abs=1.5)


def test_the_panel_shows_one_curve_in_a_small_window_and_all_in_a_large_one(make_window):
    small = make_window(1280, 720).curves
    assert [c.isVisible() for c in (small.match, small.ratio, small.smith, small.pattern)] == [
        True, False, False, False,
    ]  # fmt: skip
    large = make_window(2560, 1440).curves
    assert all(c.isVisible() for c in (large.match, large.ratio, large.smith, large.pattern))


def test_match_and_axial_ratio_lie_over_one_frequency_axis(make_window):
    curves = make_window(2560, 1440).curves
    assert curves.match.area.left() == curves.ratio.area.left()
    assert curves.match.width() == curves.ratio.width()
    assert curves.match.state.frequency is curves.ratio.state.frequency


def test_another_curve_can_be_chosen(window):
    window.curves.choose("axial_ratio")
    assert window.curves.ratio.isVisible()
    assert not window.curves.match.isVisible()
    assert window.settings.value("curve") == "axial_ratio"


@pytest.mark.parametrize("size", [(1280, 720), (2560, 1440)])
def test_cards_open_as_the_window_has_room(make_window, size):
    opened = [card.is_open for card in make_window(*size).cards.all_cards]
    assert sum(opened) == (1 if size[1] == 720 else 4)
