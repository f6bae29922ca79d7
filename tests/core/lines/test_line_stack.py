"""Series averages of a stack against capacitors in series."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import InputError, OutOfRangeError
from core.lines.stack import Layer, series_loss_tangent, series_permittivity, total_thickness

layers = st.builds(Layer, st.floats(1e-5, 0.05), st.floats(1.0, 12.0), st.floats(0.0, 0.1))


@given(st.lists(layers, min_size=1, max_size=4).map(tuple))
def test_averages_are_those_of_capacitors_in_series(stack):
    elastance = sum(
        layer.thickness / (layer.eps_r * (1 - 1j * layer.loss_tangent)) for layer in stack
    )
    eps = total_thickness(stack) / elastance
    assert series_permittivity(stack) == pytest.approx(eps.real, rel=0.02)  # 1 + tan^2 <= 1.01
    lossless = tuple(Layer(layer.thickness, layer.eps_r) for layer in stack)
    exact = total_thickness(stack) / sum(layer.thickness / layer.eps_r for layer in lossless)
    assert series_permittivity(stack) == pytest.approx(exact, rel=1e-12)
    assert series_loss_tangent(stack) == pytest.approx(-eps.imag / eps.real, rel=0.02, abs=1e-12)


def test_a_thin_card_hardly_changes_a_thick_gap_of_air():
    assert series_permittivity((Layer(9e-3), Layer(1e-3, 2.0))) == pytest.approx(10.0 / 9.5)


@pytest.mark.parametrize(
    ("field", "values"),
    [
        ("thickness", (0.0, 2.0, 0.0)),
        ("thickness", (float("nan"), 2.0, 0.0)),
        ("eps_r", (1e-3, 0.9, 0.0)),
        ("eps_r", (1e-3, float("inf"), 0.0)),
        ("loss_tangent", (1e-3, 2.0, -0.1)),
        ("loss_tangent", (1e-3, 2.0, 1.0)),
    ],
)
def test_an_impossible_layer_is_refused(field, values):
    with pytest.raises(OutOfRangeError, match="it must be") as error:
        Layer(*values)
    assert error.value.field == field


def test_a_stack_without_layers_is_refused():
    with pytest.raises(InputError, match="at least one"):
        series_permittivity(())
