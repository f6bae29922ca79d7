"""Far field over a layered stack: closed forms, images, and all power of a real current."""

import numpy as np
import pytest
from numpy.polynomial import legendre
from numpy.testing import assert_allclose

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.kernel_table import plan_tables
from core.fullwave.layered_radiation import layered_radiation
from core.fullwave.surface_waves import launched_power, surface_waves
from core.fullwave.table_grid import looked_up
from core.lines.stack import Layer

K0 = 2.0 * np.pi
THETA = np.radians([0.0, 20.0, 45.0, 70.0, 89.0])


def test_grounded_slab_closed_form():
    """Element on a slab by reciprocity, D. R. Jackson, N. G. Alexopoulos 1991; from memory."""
    d, eps = 0.06, 3.4
    field = layered_radiation((Layer(d, eps),), np.array([K0]), THETA)
    n1 = np.sqrt(eps - np.sin(THETA) ** 2)
    tan, cos = np.tan(K0 * d * n1), np.cos(THETA)
    free = -1j * K0 * FREE_SPACE_IMPEDANCE / (4.0 * np.pi) * np.exp(1j * K0 * d * cos)
    along = 2.0 * cos * tan / (tan - 1j * eps / n1 * cos)
    across = 2.0 * tan / (tan - 1j * n1 / cos)
    assert_allclose(field.along[0], free * along, rtol=1e-9)
    assert_allclose(field.across[0], free * across, rtol=1e-9)


def test_air_is_free_space_with_an_image():
    h = 0.07
    field = layered_radiation((Layer(h, 1.0),), np.array([K0]), THETA, 2)
    cos, scale = np.cos(THETA), K0 * FREE_SPACE_IMPEDANCE / (4.0 * np.pi)
    image = 2j * np.sin(K0 * h * cos)
    assert_allclose(field.along[0], -1j * scale * cos * image, rtol=1e-8)
    assert_allclose(field.across[0], -1j * scale * image, rtol=1e-8)
    z, w = legendre.leggauss(40)
    z, w = 0.5 * h * (1.0 + z), 0.5 * h * w
    for m in (0, 1):
        moments = 2.0 * np.cos(K0 * np.outer(cos, z)) @ (w * np.cos(m * np.pi * z / h))
        expected = 1j * scale * np.sin(THETA) * moments
        assert_allclose(field.vertical[m, 0], expected, rtol=1e-7, atol=1e-12)


@pytest.mark.parametrize(
    "layers",
    [
        (Layer(0.03, 4.4),),
        (Layer(0.05, 1.05), Layer(0.01, 2.5)),
    ],
    ids=["board", "card on foam"],
)
def test_power_of_a_strip_fed_by_a_probe(layers):
    """From the tables of kernels on one side, from far field and surface waves on the other.

    A probe with a uniform current feeds a strip along x whose current falls off to zero.
    """
    length, steps = 0.2, 24
    x, w = legendre.leggauss(steps)
    x, w = 0.5 * length * (1.0 + x), 0.5 * length * w
    current, slope = (
        np.cos(0.5 * np.pi * x / length),
        -0.5 * np.pi / length * np.sin(0.5 * np.pi * x / length),
    )
    tables = plan_tables(layers, K0, 0.5, 0.0, 1).tables(np.array([K0]))
    away = abs(x[:, None] - x)
    # Images and logarithms of a lossless stack are real: they drop out of what is radiated.
    assert all(image.weight.imag == 0.0 for image in tables.charge_images)
    assert np.all(tables.probe_log.imag == 0.0)

    def radiated(table, distance):
        return looked_up(table, tables.step, distance.ravel()).imag.reshape(distance.shape)

    vector = radiated(tables.vector[0], away)
    scalar = radiated(tables.scalar[0], away)
    coupling = radiated(tables.coupling[0, 0], x)
    probe = radiated(tables.probe[0, 0, 0], np.zeros(1))[0]
    charge = w * slope
    reaction = charge @ scalar @ charge + 2.0 * charge @ coupling + probe
    # Re(j w mu A) and Re(B/(j w eps)) of imaginary parts
    resistance = FREE_SPACE_IMPEDANCE * (
        -K0 * (w * current) @ vector @ (w * current) + reaction / K0
    )
    assert_allclose(0.5 * resistance, far_and_surface(layers, x, w * current), rtol=1e-6)


def far_and_surface(layers, x, moments):
    turn = 2.0 * np.pi * np.arange(128) / 128
    t, w = legendre.leggauss(80)
    theta = 0.25 * np.pi * (1.0 + t)
    field = layered_radiation(layers, np.array([K0]), theta, 1)

    def transform(k):
        return np.exp(1j * np.multiply.outer(np.asarray(k), x)) @ moments

    strip = transform(K0 * np.outer(np.sin(theta), np.cos(turn)))
    e_theta = field.along[0][:, None] * np.cos(turn) * strip + field.vertical[0, 0][:, None]
    e_phi = -field.across[0][:, None] * np.sin(turn) * strip
    density = (abs(e_theta) ** 2 + abs(e_phi) ** 2).mean(axis=1)
    power = 0.25 * np.pi**2 / FREE_SPACE_IMPEDANCE * (w * np.sin(theta)) @ density
    for wave in surface_waves(layers, K0, 1):
        along = -np.sin(turn) if wave.transverse_electric else np.cos(turn)
        strip = transform(wave.wavenumber * np.cos(turn))
        power += launched_power(wave, K0, wave.horizontal * along * strip + wave.vertical[0])
    return power
