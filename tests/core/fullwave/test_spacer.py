"""Dielectric spacers in free space: images, power, and the layered solver on infinite ground."""

from dataclasses import replace
from math import pi

import numpy as np
import pytest
from fullwave_shapes import probe_patch

from core.fullwave.board_kernels import BoardKernels
from core.fullwave.far_field import sphere_power
from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.layered_system import build_layered_system, solve_layered
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.mesh_model import Sheet
from core.fullwave.spacer_images import spacer_images, upright_arm
from core.fullwave.system import build_system, radiated_field, solve
from core.layout.model import Foil, Role
from core.lines.microstrip import line_properties
from core.lines.stack import Layer, series_permittivity, total_thickness
from core.shapes.outline import Region, rectangle

PERFECT = Foil(50e-6, 1e15)
FOAM = (Layer(6e-3, 1.05),)
DENSE = (Layer(6e-3, 1.5),)
CARD_ON_TOP = (Layer(5e-3, 1.07), Layer(1e-3, 3.0))
THREE = (Layer(1e-3, 2.5), Layer(5e-3, 1.0), Layer(0.5e-3, 2.8))
STACKS = [FOAM, DENSE, CARD_ON_TOP, THREE]


def static_faces(layers, k):
    """Potential of a charge on the top, there and on the bottom, over that in air.

    A static line: the flux that enters the stack over the potential, layer by layer.
    """
    flux, way_down = 1.0, []
    for layer in layers:
        turn = np.tanh(k * layer.thickness)
        way_down.append((flux, layer, turn))
        flux = layer.eps_r * (flux + layer.eps_r * turn) / (layer.eps_r + flux * turn)
    top = bottom = 2.0 / (1.0 + flux)
    for below, layer, _ in reversed(way_down):
        across = np.cosh(k * layer.thickness) + below / layer.eps_r * np.sinh(k * layer.thickness)
        bottom = bottom / across
    return top, bottom


def seen(images, observer, source, k, height):
    """What the images say of the same."""
    at = {Sheet.GROUND: 0.0, Sheet.TOP: height}
    total = images.direct[observer, source] * np.exp(-k * abs(at[observer] - at[source]))
    for i in range(images.starts[observer, source], images.stops[observer, source]):
        place = images.turns[i] * at[source] + images.shifts[i]
        total += images.weights[i] * np.exp(-k * abs(place - at[observer]))
    return total


@pytest.mark.parametrize("layers", STACKS)
@pytest.mark.parametrize("kh", [0.01, 0.3, 1.0, 4.0])
def test_images_are_the_static_field(layers, kh):
    height, images = total_thickness(layers), spacer_images(layers)
    top, bottom = static_faces(layers, kh / height)
    upside_down, _ = static_faces(layers[::-1], kh / height)
    pairs = [(Sheet.TOP, Sheet.TOP), (Sheet.GROUND, Sheet.TOP), (Sheet.GROUND, Sheet.GROUND)]
    for (observer, source), expected in zip(pairs, (top, bottom, upside_down), strict=True):
        found = seen(images, observer, source, kh / height, height)
        assert found == pytest.approx(expected, rel=3e-4)


@pytest.mark.parametrize("layers", STACKS)
def test_no_charge_is_made_or_lost(layers):
    images = spacer_images(layers)
    for observer, source in np.ndindex(3, 3):
        own = slice(images.starts[observer, source], images.stops[observer, source])
        total = images.direct[observer, source] + images.weights[own].sum()
        assert total == pytest.approx(1.0, abs=1e-3)


def test_single_layer_has_the_published_series():
    # P. Silvester, Proc. IEE 115, 1968: reflections (er - 1)/(er + 1) each 2 h further; from
    # memory, here without a ground plane.
    images, g = spacer_images(DENSE), 0.2
    assert images.direct[Sheet.TOP, Sheet.TOP] == pytest.approx(1.0 - g)
    first = images.starts[Sheet.TOP, Sheet.TOP]
    assert images.weights[first] == pytest.approx((1 - g) * g * (1 + g), rel=1e-3)
    assert images.shifts[first] == pytest.approx(6e-3 - 12e-3)


def test_air_has_no_images():
    for layers in ((), (Layer(6e-3, 1.0),)):
        images = spacer_images(layers)
        assert len(images.weights) == 0
        np.testing.assert_array_equal(images.direct, np.ones((4, 4)))
        assert upright_arm(layers) == 0.0


def patch(layers, disc=0.105, foil=PERFECT):
    height = 1e3 * total_thickness(layers)
    layout = probe_patch(f"air:{height:.4f}mm", 0.0525, 0.0063, disc)
    return replace(layout, stack=layers, foil=foil)


@pytest.mark.parametrize("layers", STACKS)
@pytest.mark.parametrize("place", [0.85, 1.0])
def test_power_in_is_power_out(layers, place):
    layout = patch(layers)
    system = build_system(build_mesh(layout, Level.COARSE), layout.foil, layers)
    frequency = place * 2.4e9 / series_permittivity(layers) ** 0.5
    solution = solve(system, frequency)
    assert solution.lost < 1e-4
    assert power_sent(system, solution) == pytest.approx(1.0, abs=1e-2)


def power_sent(system, solution):
    """Power through a large sphere over power accepted."""
    frequency = solution.frequency
    sent = sphere_power(
        lambda towards: radiated_field(system, solution.currents, frequency, towards),
        frequency,
        np.ptp(system.mesh.vertices, axis=0).max(),
    )
    return sent / (solution.admittance.real / 2.0)


def test_lossy_card_takes_what_is_not_sent():
    layers = (CARD_ON_TOP[0], Layer(1e-3, 3.0, 0.05))
    layout = patch(layers)
    system = build_system(build_mesh(layout, Level.COARSE), layout.foil, layers)
    solution = solve(system, 2.15e9)
    assert 0.04 < solution.lost < 0.25
    assert power_sent(system, solution) + solution.lost == pytest.approx(1.0, abs=5e-3)


def pole(solved, frequency):
    """Complex resonance of the input impedance near a frequency: real part and Q."""
    for spread in (0.05, 0.02):
        x = spread * np.cos(pi * (2 * np.arange(7) + 1) / 14)
        z = np.array([1.0 / solved(frequency * (1.0 + one)).admittance for one in x])
        rows = np.column_stack([np.ones(7), x, x**2, -z * x, -z * x**2])
        *_, first, second = np.linalg.lstsq(rows, z, rcond=None)[0]
        roots = np.roots([second, first, 1.0])
        root = frequency * (1.0 + roots[np.argmin(np.abs(roots))])
        frequency = root.real
    return root.real, root.real / (2.0 * abs(root.imag))


@pytest.mark.parametrize(
    ("layers", "tolerance"),
    [((Layer(6e-3, 1.0),), 1e-3), (FOAM, 1e-3), (CARD_ON_TOP, 3e-3), (THREE, 3e-3)],
)
def test_wide_plate_is_the_infinite_ground_of_the_layered_solver(layers, tolerance):
    # Another kernel, another feed, no plate: they share the mesh of the patch alone.
    layout = patch(layers, disc=0.22)
    guess = 2.42e9 / series_permittivity(layers) ** 0.5
    system = build_system(build_mesh(layout, Level.COARSE), layout.foil, layers)
    board = build_board_mesh(layout, Level.COARSE)
    layered = build_layered_system(board, BoardKernels(layers, layout.foil, 1.1 * guess))
    finite, quality = pole(lambda f: solve(system, f), guess)
    infinite, other = pole(lambda f: solve_layered(layered, f), guess)
    assert finite == pytest.approx(infinite, rel=tolerance)
    assert quality == pytest.approx(other, rel=0.05)


def strip_capacitance(layers, length):
    """Capacitance of a strip 4 mm wide, probe-fed in its middle, from a low frequency."""
    layout = patch(layers, disc=0.3)
    strip = Region(rectangle(4e-3, length, (0.0, 0.0063)))
    pieces = tuple(
        replace(piece, region=strip) if piece.role is Role.TOP_COPPER else piece
        for piece in layout.pieces
    )
    layout = replace(layout, pieces=pieces, frequency=1e9)
    system = build_system(build_mesh(layout, Level.COARSE), layout.foil, layers)
    return solve(system, 20e6).admittance.imag / (2 * pi * 20e6)


@pytest.mark.parametrize("layers", [FOAM, DENSE])
def test_strip_has_the_effective_permittivity_of_microstrip(layers):
    # Hammerstad and Jensen 1980 through core.lines; two lengths leave out ends and probe.
    air = (Layer(6e-3, 1.0),)
    gained = [strip_capacitance(one, 0.12) - strip_capacitance(one, 0.06) for one in (layers, air)]
    expected = line_properties(4e-3, layers, 20e6).eps_eff
    assert gained[0] / gained[1] == pytest.approx(float(expected), rel=5e-3)
