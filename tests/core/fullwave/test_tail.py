"""A cable behind the plate: a half-wave dipole's lower arm, and limits in which it does nothing."""

from dataclasses import replace

import numpy as np
import pytest
from board_shapes import board_dual_edge
from fullwave_shapes import probe_patch, small_ground
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components

from core.errors import InputError, ModelError, OutOfRangeError
from core.fullwave.basis import build_basis
from core.fullwave.far_field import sphere_power
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.mesh_model import Sheet
from core.fullwave.respond import respond
from core.fullwave.spacer_images import spacer_images
from core.fullwave.system import build_system, radiated_field, solve
from core.layout.build import build_layout
from core.layout.model import Foil, Role
from core.layout.tail import Tail, coax_tail
from core.lines.stack import Layer
from core.progress import SILENT
from core.shapes.outline import Region, rectangle

WAVELENGTH = 299792458.0 / 2.45e9
SMALL = build_layout(small_ground())


def solved(layout, tail=None, frequency=None, level=Level.COARSE):
    system = build_system(build_mesh(layout, level, tail), layout.foil, layout.stack)
    return system, solve(system, frequency or layout.frequency)


def reflection(solution):
    return (1.0 - 50.0 * solution.admittance) / (1.0 + 50.0 * solution.admittance)


def power_sent(system, solution):
    """Power through a large sphere over power accepted."""
    sent = sphere_power(
        lambda towards: radiated_field(system, solution.currents, solution.frequency, towards),
        solution.frequency,
        np.ptp(system.mesh.vertices, axis=0).max(),
    )
    return sent / (solution.admittance.real / 2.0)


def wire_dipole(arm, diameter, end):
    """Layout of a bare probe between copper and plate no larger than it takes."""
    layout = probe_patch(f"air:{1e3 * arm}mm", 0.05, 0.0, 0.1)
    dot = Region(rectangle(end, end, (0.0, 0.0)))
    pieces = tuple(
        piece if piece.role is Role.SPACER else replace(piece, region=dot)
        for piece in layout.pieces
    )
    return replace(
        layout,
        pieces=pieces,
        ports=(replace(layout.ports[0], diameter=diameter / 1.5),),
        holes=tuple(replace(hole, diameter=1.2 * diameter) for hole in layout.holes),
        element_width=end,
        element_length=end,
        foil=Foil(50e-6, 1e18),
    )


def test_probe_and_tail_are_the_two_arms_of_a_half_wave_dipole():
    # 73 ohm where it is half a wave long, 72 where it resonates, directivity 1.641
    # (published/cp_and_patterns.csv P50, P51); a little less wide open at 0.46 wavelength.
    arm, diameter = 28e-3, 1e-3
    layout = wire_dipole(arm, diameter, 1.4e-3)
    system = build_system(build_mesh(layout, Level.COARSE, Tail(arm, diameter)), layout.foil)
    frequencies = np.linspace(2.4e9, 2.6e9, 5)
    impedance = np.array([1.0 / solve(system, f).admittance for f in frequencies])
    resonance = np.interp(0.0, impedance.imag, frequencies)
    assert np.interp(resonance, frequencies, impedance.real) == pytest.approx(72.0, rel=0.02)
    assert 2.0 * arm * resonance / 299792458.0 == pytest.approx(0.47, abs=0.015)
    solution = solve(system, resonance)
    side = radiated_field(system, solution.currents, resonance, np.array([[1.0, 0.0, 0.0]]))
    density = 4.0 * np.pi * np.sum(np.abs(side) ** 2) / (2.0 * 376.730)
    assert density / (solution.admittance.real / 2.0) == pytest.approx(1.64, rel=0.01)
    assert power_sent(system, solution) == pytest.approx(1.0, abs=1e-4)


def test_the_shorter_the_tail_the_less_it_changes():
    _, without = solved(SMALL)
    moved = []
    for length in (24e-3, 12e-3, 3.1e-3):
        _, with_it = solved(SMALL, coax_tail(SMALL, length))
        field = np.array([with_it.e_x - without.e_x, with_it.e_y - without.e_y])
        moved.append(max(abs(reflection(with_it) - reflection(without)), np.abs(field).max()))
    # Down to the prism in the plate, which the mesh without a tail has not got.
    assert moved[0] > 2.0 * moved[1] > 4.0 * moved[2]
    assert moved[2] < 4e-3


def test_behind_a_big_plate_a_tail_changes_little():
    big = probe_patch("air:6mm", 0.055, 0.012, 0.2)
    little = probe_patch("air:6mm", 0.055, 0.012, 0.075)
    moved = []
    for layout in (big, little):
        tail = coax_tail(layout)
        found = [respond(layout, [2.4e9, 2.5e9], SILENT, Level.COARSE, t) for t in (None, tail)]
        levels = [10.0 * np.log10(one.front_to_back) for one in found]
        moved.append(abs(levels[1] - levels[0]))
    assert moved[0] < 0.3
    assert moved[1] > 3.0 * moved[0]


@pytest.mark.parametrize("drop", [None, 15e-3])
def test_power_in_is_power_out_with_foam_and_card_too(drop):
    layout = probe_patch("er=1.06:5mm + er=3:1mm", 0.05, 0.012, 0.1)
    layout = replace(layout, foil=Foil(50e-6, 1e18))
    system, solution = solved(layout, coax_tail(layout, drop=drop))
    assert power_sent(system, solution) == pytest.approx(1.0, abs=1e-2)


STACK = (Layer(5e-3, 1.06, 0.0), Layer(1e-3, 3.0, 0.02))


def potential(images, observer, source, heights):
    """Of a unit charge, a centimetre beside it."""
    here, there = heights
    total = images.direct[observer, source] / np.hypot(0.01, here - there)
    for i in range(images.starts[observer, source], images.stops[observer, source]):
        place = images.turns[i] * there + images.shifts[i]
        total += images.weights[i] / np.hypot(0.01, here - place)
    return total


@pytest.mark.parametrize(
    ("sheet", "height"),
    [(Sheet.GROUND, 0.0), (Sheet.PROBE, 2e-3), (Sheet.PROBE, 6e-3), (Sheet.TOP, 6e-3)],
)
def test_a_tail_feels_the_spacer_as_the_plate_does_where_it_leaves_it(sheet, height):
    images = spacer_images(STACK)
    at_plate = potential(images, Sheet.GROUND, sheet, (0.0, height))
    assert potential(images, Sheet.TAIL, sheet, (0.0, height)) == pytest.approx(at_plate)
    below = potential(images, Sheet.TAIL, sheet, (-7e-3, height))
    assert potential(images, sheet, Sheet.TAIL, (height, -7e-3)) == pytest.approx(below)
    assert abs(below) < abs(at_plate)


def test_all_that_a_tail_sees_is_at_the_plate_or_above():
    """Below the plate there is air: the potential has no source there but the tail itself."""
    images = spacer_images(STACK)
    for sheet, heights in ((Sheet.GROUND, [0.0]), (Sheet.PROBE, [0.0, 6e-3]), (Sheet.TOP, [6e-3])):
        own = slice(images.starts[Sheet.TAIL, sheet], images.stops[Sheet.TAIL, sheet])
        places = np.outer(heights, images.turns[own]) + images.shifts[own]
        assert places.shape[1] > 1
        assert places.min() >= 0.0


def test_far_below_a_tail_feels_no_spacer():
    images = spacer_images(STACK)
    bare = np.hypot(0.01, 0.0)
    assert potential(images, Sheet.TAIL, Sheet.TAIL, (-2.0, -2.0)) * bare == pytest.approx(
        1.0, abs=1e-3
    )


def test_a_bent_tail_runs_where_it_is_told_to():
    tail = coax_tail(SMALL, 50e-3, 3e-3, 20e-3, np.pi / 2)
    mesh = build_mesh(SMALL, Level.COARSE, tail)
    vertices = mesh.vertices[np.unique(mesh.triangles[mesh.sheet == Sheet.TAIL])]
    port, reach = SMALL.ports[0], 2e-3
    assert vertices[:, 1].max() == pytest.approx(port.y + 30e-3, abs=1e-9)
    assert vertices[:, 2].min() == pytest.approx(-20e-3, abs=reach)
    assert np.abs(vertices[:, 0] - port.x).max() < reach
    basis = build_basis(mesh.vertices, mesh.triangles, mesh.sheet)
    t = basis.triangles
    links = coo_matrix((np.ones(basis.count), (basis.plus % t, basis.minus % t)), (t, t))
    assert connected_components(links, directed=False)[0] == 1


def test_the_plate_keeps_its_area_under_a_tail():
    def plate(tail):
        mesh = build_mesh(SMALL, Level.COARSE, tail)
        return (
            build_basis(mesh.vertices, mesh.triangles, mesh.sheet)
            .areas[mesh.sheet == Sheet.GROUND]
            .sum()
        )

    assert plate(coax_tail(SMALL)) == pytest.approx(plate(None), rel=1e-9)


def test_half_a_wavelength_if_nothing_is_said():
    tail = coax_tail(SMALL)
    assert tail.length == pytest.approx(WAVELENGTH / 2.0)
    assert (tail.diameter, tail.drop) == (3e-3, None)


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ({"length": 0.6}, r"length of 600 mm is out of range; accepted: 3 mm to 489 mm"),
        ({"length": 1e-3}, "its length of 1 mm"),
        ({"diameter": 1e-3}, "its thickness of 1 mm"),
        ({"drop": 60e-3}, "its drop before the bend of 60 mm"),
    ],
)
def test_a_tail_that_cannot_be_is_refused(words, told):
    with pytest.raises(OutOfRangeError, match=f"coax tail: .*{told}"):
        coax_tail(SMALL, **words)


def test_a_tail_over_the_rim_is_refused():
    with pytest.raises(ModelError, match="over the rim of the ground plate"):
        build_mesh(wire_dipole(28e-3, 1e-3, 2e-3), Level.COARSE, Tail(28e-3, 4e-3))


def test_a_board_over_an_endless_ground_is_refused():
    layout = board_dual_edge()
    with pytest.raises(InputError, match="ground plane is solved as endless") as refused:
        respond(layout, [2.4e9, 2.5e9], SILENT, Level.COARSE, coax_tail(layout))
    assert "accepted: a spacer of air, foam or card" in str(refused.value)
