"""Equivalent layer of a stack: exact rows, limits and invariants."""

import tomllib
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.sparse import coo_array, diags_array
from scipy.sparse.linalg import spsolve

from core.constants import FREE_SPACE_IMPEDANCE
from core.errors import ConvergenceError
from core.lines import multilayer
from core.lines.multilayer import equivalent_layer
from core.lines.quasi_static import static_line
from core.lines.stack import Layer, series_loss_tangent, series_permittivity

PUBLISHED = Path(__file__).parents[2] / "published" / "microstrip_quasi_static.toml"
with PUBLISHED.open("rb") as file:
    EXACT = tomllib.load(file)["rows"]

materials = st.tuples(st.floats(1e-4, 0.02), st.floats(1.0, 10.0), st.floats(0.0, 0.05))
stacks = st.lists(materials, min_size=2, max_size=3).map(
    lambda rows: tuple(Layer(*r) for r in rows)
)
ratios = st.floats(0.02, 50.0)


def height(stack):
    return sum(layer.thickness for layer in stack)


@pytest.mark.parametrize("row", EXACT, ids=lambda row: row["id"])
def test_the_capacitance_behind_it_is_exact(row):
    """Four terms leave 2e-5 up to 20 heights; the rows are printed to 1e-6 to 1e-5."""
    width, eps_r = row["width_over_height"], row["eps_r"]
    filled = multilayer._capacitance(width, (Layer(0.4, eps_r), Layer(0.6, eps_r))).real
    air = multilayer._capacitance(width, (Layer(1.0),)).real
    assert filled / air == pytest.approx(row["eps_eff"], rel=3e-5)
    impedance = FREE_SPACE_IMPEDANCE / np.sqrt(filled * air)
    assert impedance == pytest.approx(row["impedance_ohm"], rel=3e-5)


@given(
    ratios, st.floats(1e-4, 0.02), st.floats(1.0, 10.0), st.floats(0.0, 0.05), st.floats(0.1, 0.9)
)
def test_splitting_a_layer_changes_nothing(ratio, thickness, eps_r, loss, cut):
    top = Layer(0.3 * thickness, 3.0, 0.01)
    whole = (Layer(thickness, eps_r, loss), top)
    split = (Layer(cut * thickness, eps_r, loss), Layer((1 - cut) * thickness, eps_r, loss), top)
    one, two = (equivalent_layer(ratio * height(whole), stack) for stack in (whole, split))
    assert two.eps_r == pytest.approx(one.eps_r, rel=1e-10)
    assert two.loss_tangent == pytest.approx(one.loss_tangent, rel=1e-8, abs=1e-13)


@given(ratios, st.floats(1.0, 10.0), st.floats(0.0, 0.05))
def test_nearly_equal_layers_act_as_one(ratio, eps_r, loss):
    """The solution of the layered path must meet the single layer that bypasses it."""
    stack = (Layer(1e-3, eps_r, loss), Layer(2e-3, eps_r * (1 + 1e-9), loss))
    equivalent = equivalent_layer(ratio * 3e-3, stack)
    assert equivalent.eps_r == pytest.approx(eps_r, rel=2e-9)
    assert equivalent.loss_tangent == pytest.approx(loss, rel=1e-6, abs=1e-12)


def test_air_in_layers_is_air():
    assert equivalent_layer(5e-3, (Layer(1e-3), Layer(2e-3), Layer(1e-3))).eps_r == 1.0


@given(stacks)
def test_a_very_wide_strip_sees_the_series_average(stack):
    """At 1000 heights the field outside the plates is about 1 % of the capacitance."""
    equivalent = equivalent_layer(1000.0 * height(stack), stack)
    assert equivalent.eps_r == pytest.approx(series_permittivity(stack), rel=0.02)
    assert equivalent.loss_tangent == pytest.approx(series_loss_tangent(stack), rel=0.1, abs=1e-5)


def without_loss(stack):
    return tuple(Layer(layer.thickness, layer.eps_r) for layer in stack)


@given(ratios, stacks)
def test_the_equivalent_lies_between_the_layers(ratio, stack):
    equivalent = equivalent_layer(ratio * height(stack), without_loss(stack))
    eps = [layer.eps_r for layer in stack]
    assert min(eps) * (1 - 1e-9) <= equivalent.eps_r <= max(eps) * (1 + 1e-9)


@pytest.mark.parametrize("ratio", [0.1, 1.0, 10.0])
def test_each_layer_loses_with_its_filling_factor(ratio):
    """Loss is the permittivity's imaginary part, so it follows from differences of the real."""
    stack = (Layer(0.5, 1.05, 2e-4), Layer(0.3, 2.2, 1e-3), Layer(0.2, 4.4, 2e-2))
    lost = 0.0
    for i, layer in enumerate(stack):
        up, down = (
            without_loss((*stack[:i], Layer(layer.thickness, layer.eps_r * k), *stack[i + 1 :]))
            for k in (1.001, 0.999)
        )
        slope = (equivalent_layer(ratio, up).eps_r - equivalent_layer(ratio, down).eps_r) / 0.002
        lost += slope * layer.loss_tangent
    equivalent = equivalent_layer(ratio, stack)
    assert equivalent.eps_r * equivalent.loss_tangent == pytest.approx(lost, rel=1e-3)


@given(ratios, stacks, st.floats(0.01, 100.0))
def test_scaling_all_lengths_changes_nothing(ratio, stack, factor):
    scaled = tuple(Layer(f.thickness * factor, f.eps_r, f.loss_tangent) for f in stack)
    width = ratio * height(stack)
    one, two = equivalent_layer(width, stack), equivalent_layer(width * factor, scaled)
    assert two.eps_r == pytest.approx(one.eps_r, rel=1e-10)


def test_a_search_that_does_not_settle_is_an_error(monkeypatch):
    monkeypatch.setattr(multilayer, "_NEWTON_STEPS", 1)
    with pytest.raises(ConvergenceError, match="2 layers did not settle") as error:
        equivalent_layer(1.2345, (Layer(0.5), Layer(0.5, 9.0)))
    assert error.value.iterations == 1
    assert error.value.residual > 0.0


def graded(inner, outer):
    """Grid lines: even to `inner`, then each step 12 % longer, to `outer`."""
    lines = list(np.linspace(0.0, inner, 41))
    while lines[-1] < outer:
        lines.append(lines[-1] + 1.12 * (lines[-1] - lines[-2]))
    return np.array(lines)


def grid_capacitance(half_width, stack):
    """Capacitance over vacuum permittivity of half a strip, on a grid in space.

    Boxes of constant permittivity between the grid lines, potential at their corners,
    conductances along their edges; the strip and the ground plane are held, the far walls
    insulate.
    """
    x = graded(2.0 * half_width, 40.0)
    y = graded(2.0, 40.0)  # the stack is 1 high: its surfaces lie on grid lines
    tops = np.cumsum([layer.thickness for layer in stack])
    middle = 0.5 * (y[1:] + y[:-1])
    eps = np.append([layer.eps_r for layer in stack], 1.0)[np.searchsorted(tops, middle)]
    dx, dy = np.diff(x), np.diff(y)
    box_x, box_y = np.append(0.0, dx) + np.append(dx, 0.0), np.append(0.0, eps * dy)
    along_x = 0.5 * (box_y + np.append(eps * dy, 0.0)) / dx[:, None]
    along_y = 0.5 * box_x[:, None] * eps / dy
    node = np.arange(x.size * y.size).reshape(x.size, y.size)
    pairs = [(node[:-1], node[1:], along_x), (node[:, :-1], node[:, 1:], along_y)]
    rows, columns, values = (np.concatenate([p[i].ravel() for p in pairs]) for i in range(3))
    mesh = coo_array((values, (rows, columns)), shape=(node.size, node.size))
    mesh = (mesh + mesh.T).tocsr()
    laplacian = (diags_array(mesh.sum(axis=0)) - mesh).tocsr()
    potential = np.zeros(node.size)
    strip = node[x <= half_width * (1 + 1e-9), np.argmin(abs(y - tops[-1]))]
    potential[strip] = 1.0
    free = np.setdiff1d(node, np.append(strip, node[:, 0]))
    potential[free] = spsolve(laplacian[free][:, free], -(laplacian @ potential)[free])
    return potential @ laplacian @ potential


@pytest.mark.parametrize(
    "stack",
    [
        (Layer(0.8), Layer(0.2, 4.4)),
        (Layer(0.2, 4.4), Layer(0.8)),
        (Layer(0.5, 1.05), Layer(0.3, 2.2), Layer(0.2, 6.15)),
    ],
    ids=["board on air", "air on board", "three layers"],
)
@pytest.mark.parametrize("ratio", [0.5, 2.0])
def test_a_grid_in_space_gives_the_same_permittivity(ratio, stack):
    """The grid's own error, twenty steps per height, is below 1 % in the ratio to air."""
    filled = grid_capacitance(0.5 * ratio, stack)
    air = grid_capacitance(0.5 * ratio, tuple(Layer(layer.thickness) for layer in stack))
    line = static_line(ratio, equivalent_layer(ratio, stack).eps_r, 0.0)
    assert line.eps_eff == pytest.approx(filled / air, rel=0.01)
