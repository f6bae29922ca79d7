"""A coax mouth under a stack, against the field of a ring of magnetic current on a plane."""

import numpy as np
import pytest
from numpy.polynomial import legendre
from numpy.testing import assert_allclose
from scipy.integrate import quad
from scipy.special import ellipe, ellipkm1

from core.constants import VACUUM_PERMITTIVITY
from core.fullwave.coax_mouth import mouth_capacitance, mouth_voltages
from core.fullwave.kernel_table import plan_tables
from core.lines.stack import Layer

INNER, OUTER, HEIGHT = 0.65e-3, 2.05e-3, 5e-3
K0 = 120.0  # 5.7 GHz
AIR = (Layer(0.002, 1.0), Layer(HEIGHT - 0.002, 1.0))


def voltages(layers, distance, profiles=2):
    tables = plan_tables(layers, K0, 0.1, 0.01, profiles).tables(np.array([K0]))
    return mouth_voltages(tables, INNER, OUTER, np.asarray(distance))


@pytest.mark.parametrize("m", [0, 1])
def test_field_on_the_axis(m):
    """Ring of 1 V: L. L. Tsai, IEEE Trans. AP 20 (5), 1972, on the axis; from memory."""

    def field(z):
        near, far = np.hypot(z, INNER), np.hypot(z, OUTER)
        waves = np.exp(-1j * K0 * near) / near - np.exp(-1j * K0 * far) / far
        return waves / np.log(OUTER / INNER) * np.cos(m * np.pi * z / HEIGHT)

    expected = quad(field, 0.0, HEIGHT, complex_func=True, epsrel=1e-10)[0]
    on_divergence, on_vertical = voltages(AIR, [0.0])
    # the vertical current's reaction includes that of its end, which feeds the top
    found = on_vertical[m, 0, 0] - (-1) ** m * on_divergence[0, 0]
    assert_allclose(found, expected, rtol=1e-5)


@pytest.mark.parametrize("start, stop", [(0.0, 1e-3), (1e-3, 3e-3), (3e-3, 10e-3)])
def test_potential_at_the_top(start, stop):
    """Radial field of the ring and its image, by quadrature over the ring."""
    x, w = legendre.leggauss(40)
    turn, turn_weight = 0.5 * np.pi * (1.0 + x), 0.5 * np.pi * w
    radius = 0.5 * (INNER + OUTER) + 0.5 * (OUTER - INNER) * x[:, None]
    radius_weight = 0.5 * (OUTER - INNER) * w[:, None]

    def radial(rho):
        r = np.sqrt(rho**2 + radius**2 - 2.0 * rho * radius * np.cos(turn) + HEIGHT**2)
        steepness = -(1.0 + 1j * K0 * r) * HEIGHT / r**3 * np.exp(-1j * K0 * r)
        ring = radius_weight * turn_weight * np.cos(turn) * steepness
        return -ring.sum() / (np.pi * np.log(OUTER / INNER))

    expected = quad(radial, start, stop, complex_func=True)[0]
    on_divergence, _ = voltages(AIR, [start, stop])
    assert_allclose(on_divergence[0, 0] - on_divergence[0, 1], expected, rtol=1e-4, atol=1e-8)


@pytest.mark.parametrize(
    "layers",
    [
        (Layer(1.6e-3, 4.4, 0.02),),
        (Layer(6e-3, 1.05), Layer(0.3e-3, 2.5, 0.05)),
    ],
    ids=["board", "card on foam"],
)
def test_one_volt_along_the_inner_conductor(layers):
    """Statically the pin sees the whole voltage, whatever the stack."""
    tables = plan_tables(layers, 1e-2, 0.1, 0.01, 1).tables(np.array([1e-2]))
    _, on_vertical = mouth_voltages(tables, INNER, OUTER, np.array([INNER, 30e-3]))
    top = sum(layer.thickness for layer in layers)
    near, far = on_vertical[0, 0]
    # what the pin's upper end misses is the mouth's field that spreads past it
    assert abs(near - 1.0) < (OUTER / top) ** 2 / 4.0
    assert abs(far) < 1e-3


def test_capacitance_of_a_mouth_in_a_plane():
    """Rings of magnetic current over their images: mutual inductances of coaxial loops.

    Maxwell's formula with complete elliptic integrals, as in any text on electromagnetics. A
    dielectric that fills all above the plane multiplies it.
    """

    def loops(one, two):
        m1 = ((one - two) / (one + two)) ** 2
        k = np.sqrt(1.0 - m1)
        first, second = ellipkm1(m1), ellipe(1.0 - m1)
        return ((2.0 / k - k) * first - 2.0 / k * second) / np.sqrt(one * two)

    def with_all(one):
        return quad(lambda two: loops(one, two), INNER, OUTER, points=[one])[0]

    rings = quad(with_all, INNER, OUTER, epsrel=1e-6)[0]
    expected = 2.0 * VACUUM_PERMITTIVITY * rings / np.log(OUTER / INNER) ** 2
    for eps in (1.0, 3.0):
        found = mouth_capacitance((Layer(10.0, eps),), INNER, OUTER)
        assert_allclose(found, eps * expected, rtol=1e-4)
