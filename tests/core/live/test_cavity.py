"""The cavity against a brute sum of modes, mirror images and published probes."""

import dataclasses
import tomllib
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.special import hankel2

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, VACUUM_PERMEABILITY
from core.layout.model import Foil, Landing
from core.lines.stack import Layer
from core.live.cavity import X_MODE, Y_MODE, Contact, build_cavity, contact_of
from core.live.element import QualityFactors
from core.live.modes import ElementModes, SideMode, element_modes
from core.response.polarisation import axial_ratio_db, circular_components

PUBLISHED = Path(__file__).parents[2] / "published"
COPPER = Foil(35e-6, 5.8e7)


def closed_box(width, length, height, eps_r=1.0, loss_tangent=0.0):
    """A cavity with true magnetic walls: no fringing, no loss but the dielectric's."""
    losses = QualityFactors(1e30, 1.0, np.inf, 1.0 / loss_tangent if loss_tangent else np.inf)
    speed = SPEED_OF_LIGHT / np.sqrt(eps_r)
    x_mode = SideMode(width, length, speed / (2 * width), eps_r, width, losses)
    y_mode = SideMode(length, width, speed / (2 * length), eps_r, length, losses)
    return ElementModes(x_mode, y_mode, Layer(height, eps_r, loss_tangent))


def brute_sum(one, other, element, omega, terms=1500):
    """The same impedance by adding modes until nothing changes, ohm."""
    m, n = np.arange(terms)[:, None], np.arange(terms)[None, :]
    steps = 2 * np.pi * element.x.frequency, 2 * np.pi * element.y.frequency
    squares = (m * steps[0]) ** 2 + (n * steps[1]) ** 2
    chi = np.where(m > 0, 2, 1) * np.where(n > 0, 2, 1)

    def shape(contact):
        across = np.cos(np.pi * m * contact.x) * np.sinc(m * contact.width_x / 2)
        return across * np.cos(np.pi * n * contact.y) * np.sinc(n * contact.width_y / 2)

    total = np.sum(chi * shape(one) * shape(other) / (squares - omega**2))
    return omega * total / element.capacitance


BOTTOM = Contact(0.7, 0.0, 0.08, 0.0)
RIGHT = Contact(1.0, 0.3, 0.0, 0.06)
INSIDE = Contact(0.35, 0.3, 0.09, 0.0)
TOP = Contact(0.45, 1.0, 0.05, 0.0)


@pytest.mark.parametrize("pair", [(BOTTOM, RIGHT), (BOTTOM, TOP), (RIGHT, RIGHT), (INSIDE, BOTTOM)])
def test_impedances_converge_to_the_brute_sum(pair):
    element = closed_box(50e-3, 46e-3, 6e-3)
    omega = 2 * np.pi * 2.6e9
    found = build_cavity(pair, element).impedance(np.array([omega]))[0]
    for i, one in enumerate(pair):
        for j, other in enumerate(pair):
            # The brute sum still lacks a few parts in ten thousand of a self-impedance.
            expected = brute_sum(one, other, element, omega)
            assert found[i, j].imag == pytest.approx(expected, rel=5e-3, abs=0.05)
    assert np.max(np.abs(found.real)) < 1e-9


def image_sum(x, y, box, radius, frequency, reach):
    """Impedance of a thin probe between magnetic walls, by its mirror images, ohm."""
    width, length, substrate = box.x.length, box.y.length, box.substrate
    wavenumber = 2 * np.pi * frequency / SPEED_OF_LIGHT
    k = wavenumber * np.sqrt(substrate.eps_r * (1 - 1j * substrate.loss_tangent))
    cells = np.arange(-reach, reach + 1)
    xs = np.concatenate([2 * width * cells, 2 * width * cells - 2 * x])
    ys = np.concatenate([2 * length * cells, 2 * length * cells - 2 * y])
    distances = np.hypot(xs[:, None], ys[None, :])
    distances[distances < radius] = radius
    omega = 2 * np.pi * frequency
    return omega * VACUUM_PERMEABILITY * substrate.thickness / 4 * hankel2(0, k * distances).sum()


def test_probe_is_the_sum_of_its_mirror_images():
    # Cylindrical waves of scipy's Hankel function: another way to the whole impedance, the
    # logarithm of the probe's own radius included.
    box = closed_box(50e-3, 46e-3, 3e-3, eps_r=2.2, loss_tangent=0.1)
    x, y, diameter, frequency = 19e-3, 15e-3, 1.3e-3, 1.75e9
    landing = Landing(x - 25e-3, y - 23e-3, diameter, "")
    cavity = build_cavity((contact_of(landing, box),), box)
    found = cavity.impedance(np.array([2 * np.pi * frequency]))[0, 0, 0]
    expected = image_sum(x, y, box, diameter / 2, frequency, reach=60)
    assert found.real == pytest.approx(expected.real, rel=0.005)
    assert found.imag == pytest.approx(expected.imag, rel=0.002)


def test_published_probe_reactance_is_what_a_probe_adds():
    with (PUBLISHED / "probe_reactance.toml").open("rb") as file:
        row = tomllib.load(file)
    k = 2 * np.pi * row["frequency"] / SPEED_OF_LIGHT * np.sqrt(row["eps_r"])
    omega = 2 * np.pi * row["frequency"]
    alone = omega * VACUUM_PERMEABILITY * row["height"] / 4 * hankel2(0, k * row["radius"])
    assert alone.imag == pytest.approx(row["reactance"], rel=0.01)
    # Inside a box a thicker probe changes the whole by the published logarithm.
    box = closed_box(37e-3, 33e-3, row["height"], row["eps_r"])
    values = []
    for diameter in (row["radius"] / 2, row["radius"]):
        contact = contact_of(Landing(3e-3, 5e-3, diameter, ""), box)
        values.append(build_cavity((contact,), box).impedance(np.array([omega]))[0, 0, 0].imag)
    step = FREE_SPACE_IMPEDANCE / (2 * np.pi) * omega / SPEED_OF_LIGHT * row["height"] * np.log(2)
    assert values[0] - values[1] == pytest.approx(step, rel=0.01)


positions = st.floats(0.1, 0.9)
widths = st.floats(0.02, 0.2)


@settings(max_examples=50)
@given(positions, positions, widths, widths, st.floats(1e9, 4e9))
def test_the_matrix_is_reciprocal_and_passive(x, y, width_x, width_y, frequency):
    element = element_modes(53e-3, 47e-3, (Layer(6e-3, 1.05, 3e-4),), COPPER)
    contacts = (Contact(x, 0.0, width_x, 0.0), Contact(1.0, y, 0.0, width_y))
    impedance = build_cavity(contacts, element).impedance(np.array([2 * np.pi * frequency]))[0]
    assert impedance[0, 1] == pytest.approx(impedance[1, 0], rel=1e-12)
    assert np.linalg.eigvalsh(impedance.real).min() >= -1e-9 * np.abs(impedance).max()


def test_edge_resistance_at_resonance_is_that_of_the_quality_factor():
    # R = (4/pi) eta (L/W) (h/lambda) Q, Jackson 2007 (from memory), with effective sides.
    element = element_modes(30e-3, 41e-3, (Layer(0.4e-3, 2.2, 1e-3),), COPPER)
    mode = element.y
    contact = Contact(0.5, 0.0, 0.05, 0.0)
    cavity = build_cavity((contact,), element)
    impedance = cavity.impedance(np.array([2 * np.pi * mode.frequency]))[0, 0, 0]
    ratio = mode.effective_length / element.x.effective_length
    height = element.substrate.thickness * mode.frequency / SPEED_OF_LIGHT
    # eps_eff of the two modes differ by 0.3 %, and the higher modes add a little.
    expected = 4 / np.pi * FREE_SPACE_IMPEDANCE * ratio * height * mode.losses.total
    assert impedance.real == pytest.approx(expected, rel=0.01)


@pytest.mark.parametrize(
    ("amplitude_db", "phase_deg", "ratio_db"),
    [(0.0, 0.0, 0.0), (1.0, 0.0, 1.0), (0.0, 10.0, 1.5237), (3.0, 10.0, 3.3783)],
)
def test_quadrature_currents_at_mid_sides_are_circular(amplitude_db, phase_deg, ratio_db):
    # Rows P01, P05 and P12 of the outside data.
    element = element_modes(53e-3, 53e-3, (Layer(6e-3),), COPPER)
    contacts = (Contact(0.5, 0.0, 0.05, 0.0), Contact(1.0, 0.5, 0.0, 0.05))
    cavity = build_cavity(contacts, element)
    later = 10 ** (amplitude_db / 20) * np.exp(-1j * np.deg2rad(90 + phase_deg))
    currents = np.array([[1.0, later]], dtype=complex)
    voltages = cavity.mode_voltages(np.array([2 * np.pi * 2.4e9]), currents)
    e_x, e_y = -voltages[X_MODE, 0], -voltages[Y_MODE, 0]
    assert axial_ratio_db(e_x, e_y) == pytest.approx(ratio_db, abs=1e-4)
    right, left = circular_components(e_x, e_y)
    assert abs(right) > abs(left)


def test_loss_of_the_modes_is_the_power_that_goes_in():
    element = element_modes(53e-3, 47e-3, (Layer(6e-3, 1.05, 3e-4),), COPPER)
    cavity = build_cavity((BOTTOM, RIGHT), element)
    omega = 2 * np.pi * np.array([2.3e9, 2.5e9])
    currents = np.array([[1.0, 0.5j], [0.3 - 0.2j, 1.0]])
    impedance = cavity.impedance(omega)
    power_in = 0.5 * np.real(np.einsum("ni,nij,nj->n", currents.conj(), impedance, currents))
    voltages = cavity.mode_voltages(omega, currents)
    conductances = cavity.capacitances[:, None] * (
        (cavity.space_damping + cavity.other_damping)[:, None] + omega * cavity.loss_tangent
    )
    lost = np.sum(0.5 * conductances * np.abs(voltages) ** 2, axis=0)
    assert lost == pytest.approx(power_in, rel=1e-12)
    assert np.all(cavity.space_powers(voltages).sum(axis=0) < lost)


def test_contacts_that_hang_over_a_side_are_moved_onto_it():
    element = element_modes(53e-3, 53e-3, (Layer(6e-3),), COPPER)
    landing = Landing(26e-3, -26.5e-3, 10e-3, "y")
    contact = contact_of(landing, element)
    assert contact.x + contact.width_x / 2 == pytest.approx(1.0)
    assert (contact.y, contact.width_y) == (0.0, 0.0)
    wide = contact_of(dataclasses.replace(landing, width=1.0), element)
    assert (wide.x, wide.width_x) == (0.5, 1.0)
