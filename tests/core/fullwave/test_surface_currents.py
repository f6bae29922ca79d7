"""The current that a response carries: continuous, conserved, and the source of its own field.

Corner values and means are formed apart from the solver's matrices; what they are held
against (port, loss, field) is not made of them.
"""

import pickle
from math import pi

import numpy as np
import pytest
from board_shapes import board_dual_edge
from fullwave_shapes import probe_patch, small_ground, thin_air

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT
from core.engines import ENGINES, LIVE
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.respond import respond
from core.fullwave.surface_currents import _density, plate_currents
from core.fullwave.system import build_system, sheet_impedance, solve
from core.layout.build import build_layout
from core.progress import SILENT
from core.response.currents import at_instant, greatest
from core.response.polarisation import circular_components

SPAN = np.linspace(2.4e9, 2.5e9, 11)
LAYOUTS = {
    "air": build_layout(thin_air()),
    "small plate": build_layout(small_ground()),
    "board": board_dual_edge(),
    "linear": probe_patch("air:6mm", 0.055, 0.008, 0.1),
}


@pytest.fixture(scope="module")
def responses():
    return {name: respond(one, SPAN, SILENT, Level.COARSE) for name, one in LAYOUTS.items()}


def edge_flows(sheet):
    """Flow out of each triangle through each of its sides, by unordered ends of the side."""
    flows = {}
    corners = sheet.vertices[sheet.triangles]
    for one, (points, density) in enumerate(zip(corners, sheet.density, strict=True)):
        for a, b in ((0, 1), (1, 2), (2, 0)):
            along = points[b] - points[a]
            out = np.array([along[1], -along[0]])
            ends = (density[a] @ out, density[b] @ out)
            key = tuple(sorted(sheet.triangles[one, [a, b]]))
            flows.setdefault(key, []).append(ends)
    return flows


def sheets_of(response):
    return [one for one in (response.currents.top, response.currents.ground) if one is not None]


def ampere_metres(sheet):
    """Integral of the current over a sheet, (2,)."""
    return np.einsum("t,tcx->x", sheet.areas, sheet.density) / 3.0


def from_pin(response, layout):
    """Current that comes out of the pin into the top copper, A."""
    top, port = response.currents.top, layout.ports[0]
    return -sum(
        (ends[0][0] + ends[0][1]) / 2.0
        for key, ends in edge_flows(top).items()
        if len(ends) == 1
        and np.hypot(*(top.vertices[list(key)].mean(axis=0) - (port.x, port.y))) < port.diameter
    )


def volts_of_one_watt(response):
    """Peak voltage at the port with 1 W accepted."""
    return np.sqrt(2.0 / (1.0 / complex(response.spot.z_in)).real)


@pytest.mark.parametrize("name", LAYOUTS)
def test_what_flows_across_an_inner_edge_is_the_same_on_both_sides(responses, name):
    for sheet in sheets_of(responses[name]):
        scale = np.abs(sheet.density).max() * np.sqrt(sheet.areas.max())
        inner = [ends for ends in edge_flows(sheet).values() if len(ends) == 2]
        apart = [abs(one[i] + two[i]) for one, two in inner for i in (0, 1)]
        # The ring of the pin's foot on the ground plate is where the pin's current comes in.
        shared = 0 if sheet is responses[name].currents.top else 2 * 8
        assert np.count_nonzero(np.array(apart) > 1e-9 * scale) <= shared


@pytest.mark.parametrize("name", LAYOUTS)
def test_nothing_flows_over_an_outer_edge_but_from_the_pin(responses, name):
    port = LAYOUTS[name].ports[0]
    for sheet in sheets_of(responses[name]):
        scale = np.abs(sheet.density).max() * np.sqrt(sheet.areas.max())
        for key, ends in edge_flows(sheet).items():
            away = np.hypot(*(sheet.vertices[list(key)].mean(axis=0) - (port.x, port.y)))
            if len(ends) == 1 and away > 1.5 * port.diameter:
                assert np.abs(ends[0]).max() < 1e-9 * scale


def test_the_pin_of_a_thin_antenna_brings_the_current_of_the_port():
    layout = probe_patch("air:1.5mm", 0.058, 0.009, 0.1)
    response = respond(layout, SPAN, SILENT, Level.COARSE)
    at_port = volts_of_one_watt(response) / complex(response.spot.z_in)
    # Pin and mouth shed a little displacement current, of the order of (k h)² = 0.6 %.
    assert abs(from_pin(response, layout) / at_port - 1.0) < 0.03


@pytest.mark.parametrize("name", LAYOUTS)
def test_all_that_the_pin_brings_charges_the_copper(responses, name):
    top = responses[name].currents.top
    corners = top.vertices[top.triangles]
    sides = np.roll(corners, 1, axis=1) - np.roll(corners, -1, axis=1)
    normals = np.stack([-sides[..., 1], sides[..., 0]], axis=-1)
    outflow = np.einsum("tcx,tcx->", normals, top.density) / 2.0  # integral of the divergence
    into = from_pin(responses[name], LAYOUTS[name])
    assert abs(into) > 0.05  # A
    assert abs(outflow + into) < 1e-9 * abs(into) * len(top.areas)


def test_current_along_a_strip_is_a_standing_wave():
    # A strip over air carries a wave of free space's wavelength: equally spaced cross-sections
    # obey I(x-d) + I(x+d) = 2 cos(k d) I(x). The element beside it and what it radiates take
    # some per cent.
    layout, step = LAYOUTS["air"], 8e-3
    system = build_system(build_mesh(layout, Level.FINE), layout.foil, layout.stack)
    sheet = plate_currents(system, solve(system, layout.frequency)).top
    across = np.linspace(-31e-3, -28e-3, 4001)
    one, two, three = (
        sheet.at(np.column_stack([np.full(4001, x), across]))[1][:, 0].sum()
        for x in (9e-3, 9e-3 + step, 9e-3 + 2 * step)
    )
    turned = np.cos(2 * pi * LAYOUTS["air"].frequency / SPEED_OF_LIGHT * step)
    assert abs((one + three) / two / 2.0 - turned) < 0.06


@pytest.mark.parametrize("name", ["air", "linear"])
def test_heat_of_the_drawn_current_is_the_solvers_loss(name):
    layout = LAYOUTS[name]
    system = build_system(build_mesh(layout, Level.COARSE), layout.foil, layout.stack)
    solution = solve(system, layout.frequency)
    basis = system.moments.basis
    density = _density(basis, solution.currents)  # of 1 V
    # Of a function linear over a triangle: A/12 (sum of squares + square of the sum).
    squares = np.sum(np.abs(density) ** 2, axis=(1, 2))
    squares += np.sum(np.abs(density.sum(axis=1)) ** 2, axis=1)
    resistance = sheet_impedance(layout.foil, layout.frequency).real
    heat = resistance / 2.0 * float(basis.areas / 12.0 @ squares)
    assert heat == pytest.approx(solution.lost * solution.admittance.real / 2.0, rel=1e-9)


def test_sheets_hold_all_the_heat_but_the_pins(responses):
    layout, response = LAYOUTS["linear"], responses["linear"]
    heat = 0.0
    for sheet in sheets_of(response):
        squares = np.sum(np.abs(sheet.density) ** 2, axis=(1, 2))
        squares += np.sum(np.abs(sheet.density.sum(axis=1)) ** 2, axis=1)
        heat += sheet_impedance(layout.foil, layout.frequency).real / 24.0 * (sheet.areas @ squares)
    lost = 1.0 - float(response.spot.efficiency)
    assert 0.7 * lost < heat < lost


@pytest.mark.parametrize("name", ["air", "small plate", "linear"])
def test_current_in_free_space_makes_the_gain(responses, name):
    # C. A. Balanis, Antenna Theory, sec. 3.7 (from memory): radiation vector and gain. The pin
    # stands along the line of sight; what runs round it is left out.
    layout, response = LAYOUTS[name], responses[name]
    k = 2 * pi * layout.frequency / SPEED_OF_LIGHT
    moments = ampere_metres(response.currents.top) * np.exp(1j * k * layout.height)
    moments = moments + ampere_metres(response.currents.ground)
    field = k * FREE_SPACE_IMPEDANCE / (4 * pi) * np.abs(moments)
    gain = 4 * pi * field**2 / (2 * FREE_SPACE_IMPEDANCE)
    told = np.abs([complex(response.spot.e_x), complex(response.spot.e_y)]) ** 2
    assert gain == pytest.approx(told, rel=5e-3, abs=1e-4)


def test_current_on_a_board_makes_the_gain(responses):
    # By reciprocity: a wave from the front leaves 2 Z / (Z + eta) of its field on a grounded
    # slab, Z = j eta1 tan(k1 h) (Pozar, Microwave Engineering, ch. 2, from memory).
    layout, response = LAYOUTS["board"], responses["board"]
    k = 2 * pi * layout.frequency / SPEED_OF_LIGHT
    (layer,) = layout.stack
    index = np.sqrt(layer.eps_r * (1 - 1j * layer.loss_tangent))
    slab = 1j * FREE_SPACE_IMPEDANCE / index * np.tan(k * index * layer.thickness)
    left = 2 * slab / (slab + FREE_SPACE_IMPEDANCE)
    moments = ampere_metres(response.currents.top) * left
    gain = 4 * pi * (k / (4 * pi) * np.abs(moments)) ** 2 * FREE_SPACE_IMPEDANCE / 2
    told = np.abs([complex(response.spot.e_x), complex(response.spot.e_y)]) ** 2
    assert gain == pytest.approx(told, rel=0.01)


@pytest.mark.parametrize("name", LAYOUTS)
def test_current_turns_as_the_wave_does(responses, name):
    response = responses[name]
    x, y = ampere_metres(response.currents.top)
    far = circular_components(complex(response.spot.e_x), complex(response.spot.e_y))
    steps = np.array([at_instant(np.array([x, y]), turn) for turn in 2 * pi * np.arange(24) / 24])
    angle = np.unwrap(np.arctan2(steps[:, 1], steps[:, 0]))
    if name == "linear":
        across = np.abs(steps @ (steps[0, ::-1] * (-1, 1)) / np.linalg.norm(steps[0]))
        assert across.max() < 0.05 * np.linalg.norm(steps, axis=1).max()
    else:
        # From the front, a right-hand wave turns anticlockwise (IEEE Std 145).
        assert np.sign(angle[-1] - angle[0]) == (1 if abs(far[0]) > abs(far[1]) else -1)
        assert abs(angle[-1] - angle[0]) > pi


def test_greatest_is_the_longest_of_a_period(responses):
    density = responses["air"].currents.top.at_vertices
    turns = np.linspace(0, pi, 721)
    sizes = [np.linalg.norm(at_instant(density, turn), axis=1) for turn in turns]
    assert greatest(density) == pytest.approx(np.max(sizes, axis=0), rel=1e-4)


def test_a_place_reads_what_is_there(responses):
    top = responses["air"].currents.top
    middles = top.vertices[top.triangles].mean(axis=1)
    places = np.concatenate([middles[:5], [[1.0, 1.0]], top.vertices[:3]])
    which, density = top.at(places)
    assert list(which) == [0, 1, 2, 3, 4, 6, 7, 8]
    means = top.at_vertices[top.triangles[:5]].mean(axis=1)
    assert density == pytest.approx(np.concatenate([means, top.at_vertices[:3]]), rel=1e-9)


def test_it_goes_through_to_another_process(responses):
    there = pickle.loads(pickle.dumps(responses["air"]))
    assert np.array_equal(there.currents.top.density, responses["air"].currents.top.density)
    assert np.array_equal(
        there.currents.ground.at_vertices, responses["air"].currents.ground.at_vertices
    )


def test_only_a_solver_has_currents(responses):
    assert responses["board"].currents.ground is None
    assert ENGINES[LIVE](LAYOUTS["air"], SPAN, SILENT).currents is None
