"""Tabulated kernels against closed forms and brute-force Sommerfeld integrals.

Tolerance 1e-5 of the value, the solver's goal, unless said otherwise; measured errors are in
docs/models/fullwave-layered.md.
"""

import numpy as np
import pytest
from layered_reference import scalar_spectrum, sommerfeld, vector_spectrum
from numpy.testing import assert_allclose
from scipy.integrate import quad

from core.errors import OutOfRangeError
from core.fullwave.kernel_spectra import kernel_spectra
from core.fullwave.kernel_table import plan_tables
from core.fullwave.sommerfeld import sommerfeld_rule
from core.fullwave.static_images import image_potential
from core.fullwave.table_grid import looked_up
from core.lines.stack import Layer

K0 = 2.0 * np.pi  # wavelength 1 m
DISTANCES = np.array([1e-4, 1e-3, 1e-2, 0.1, 0.5, 1.0, 2.0])
STACKS = {
    "thin foam": (Layer(0.005, 1.03),),
    "thin ceramic": (Layer(0.005, 10.0, 0.002),),
    "board": (Layer(0.02, 4.4, 0.02),),
    "thick": (Layer(0.1, 2.2),),
    "thick ceramic": (Layer(0.1, 10.0),),
    "card on foam": (Layer(0.05, 1.05, 0.0005), Layer(0.0025, 2.5, 0.05)),
    "card on film on foam": (Layer(0.02, 1.05), Layer(0.0005, 3.0), Layer(0.003, 2.5, 0.05)),
    "low on high": (Layer(0.02, 10.0), Layer(0.01, 1.1, 0.001)),
    "three": (Layer(0.01, 2.2), Layer(0.03, 1.1, 0.001), Layer(0.02, 6.0, 0.01)),
}
stacks = pytest.mark.parametrize("layers", STACKS.values(), ids=STACKS.keys())


def height(layers):
    return sum(layer.thickness for layer in layers)


def brute(layers, spectrum, distances=DISTANCES, k0=K0):
    densest = k0 * max(layer.eps_r for layer in layers) ** 0.5
    return [sommerfeld(spectrum, rho, k0, densest, 2.0 * height(layers)) for rho in distances]


def tables_of(layers, near=0.02, profiles=0, k0=K0, plan_k0=K0, reach=2.0):
    return plan_tables(layers, plan_k0, reach, near, profiles).tables(np.array([k0]))


def vector(tables, distance):
    known = image_potential(tables.current_images, distance)
    return looked_up(tables.vector[0], tables.step, distance) + known


def scalar(tables, distance):
    known = image_potential(tables.charge_images, distance)
    return looked_up(tables.scalar[0], tables.step, distance) + known


def probe(tables, distance, i=0, j=0):
    log = tables.probe_log[i, j, 0] * np.log(distance / tables.step)
    return looked_up(tables.probe[i, j, 0], tables.step, distance) - log


@stacks
def test_horizontal_kernels_by_brute_force(layers):
    tables = tables_of(layers)
    found = vector(tables, DISTANCES)
    assert_allclose(found, brute(layers, lambda k: vector_spectrum(layers, K0, k)), rtol=1e-5)
    found = scalar(tables, DISTANCES)
    assert_allclose(found, brute(layers, lambda k: scalar_spectrum(layers, K0, k)), rtol=1e-5)


@pytest.mark.parametrize("name", ["board", "card on foam", "three"])
@pytest.mark.parametrize("i, j", [(0, 0), (0, 1), (2, 2)])
def test_vertical_kernels_by_brute_force(name, i, j):
    """The spectra have their own tests; here the integral is worked out on another path.

    Down to four steps of the table for higher profiles, whose charges bend more sharply.
    """
    layers = STACKS[name]
    tables = tables_of(layers, profiles=3)
    distances = np.array([4.0 * tables.step if j else 1e-3, 1e-2, 0.1, 0.7])

    def spectrum(k):
        return kernel_spectra(layers, np.array([K0]), k, 3)

    expected = brute(layers, lambda k: spectrum(k).probe[i, j, 0], distances)
    assert_allclose(probe(tables, distances, i, j), expected, rtol=1e-5)
    expected = brute(layers, lambda k: spectrum(k).coupling[j, 0], distances)
    found = looked_up(tables.coupling[j, 0], tables.step, distances)
    # where it crosses zero and just beside the source it counts against the scalar kernel
    size = abs(scalar(tables, distances))
    assert np.all(abs(found - expected) < 1e-5 * abs(np.array(expected)) + 1e-7 * size)


def test_air_is_free_space_with_an_image():
    h = 0.05
    tables = tables_of((Layer(0.02, 1.0), Layer(h - 0.02, 1.0)), profiles=1)

    def wave(r):
        return np.exp(-1j * K0 * r) / (4.0 * np.pi * r)

    exact = wave(DISTANCES) - wave(np.hypot(DISTANCES, 2.0 * h))
    assert_allclose(vector(tables, DISTANCES), exact, rtol=1e-6)
    assert_allclose(scalar(tables, DISTANCES), exact, rtol=1e-6)
    # Current and image from -h to h, potential along the upper half.
    line = [
        quad(
            lambda s, rho=rho: (2.0 * h - s) * wave(np.hypot(rho, s)),
            0.0,
            2.0 * h,
            points=[rho],
            limit=400,
            complex_func=True,
        )[0]
        for rho in (1e-3, 1e-2, 0.1)
    ]
    found = probe(tables, np.array([1e-3, 1e-2, 0.1]))
    assert_allclose(found, -(K0**2) * np.array(line), rtol=1e-5)
    assert abs(tables.coupling).max() < 1e-7 * abs(found).max()


def test_five_wavelengths_out():
    layers, distance = STACKS["board"], np.array([0.01, 1.3, 2.6, 5.0])
    found = scalar(tables_of(layers, reach=5.0), distance)
    expected = brute(layers, lambda k: scalar_spectrum(layers, K0, k), distance)
    assert_allclose(found, expected, rtol=1e-5)


def test_lower_end_of_the_band():
    layers = STACKS["board"]
    tables = tables_of(layers, k0=0.5 * K0)
    expected = brute(layers, lambda k: scalar_spectrum(layers, 0.5 * K0, k), k0=0.5 * K0)
    assert_allclose(scalar(tables, DISTANCES), expected, rtol=1e-5)


def test_outside_the_band_is_refused():
    plan = plan_tables(STACKS["board"], K0, 1.0, 0.01)
    with pytest.raises(OutOfRangeError, match="the plan holds for"):
        plan.tables(np.array([K0, 1.1 * K0]))


@stacks
def test_deep_and_faint_images_move_into_the_table(layers):
    few, many = tables_of(layers, near=0.0), tables_of(layers, near=1.0)
    assert len(few.charge_images) < len(many.charge_images)
    distance = np.array([0.05, 0.3, 1.0])
    assert_allclose(scalar(few, distance), scalar(many, distance), rtol=1e-6)


@stacks
def test_kinks_at_the_source(layers):
    """Second order of the spectra of a half space for large wavenumbers, worked out by hand.

    With alpha_i = k - k_i²/(2k): 1/(alpha_0 + alpha_1) = 1/(2k) + (k0² + k1²)/(8k³) and
    (alpha_0 alpha_1/(alpha_1 + eps alpha_0) + k0²/(alpha_0 + alpha_1))/k² = 1/((1 + eps)k)
    + k0² eps/((1 + eps)² k³) + ... ; 1/k³ is the spectrum of -distance/(2 pi).
    """
    eps = layers[-1].eps_r * (1.0 - 1j * layers[-1].loss_tangent)
    tables = tables_of(layers)
    # 2e-4: fitted beyond the end of the path
    vector_slope = -(K0**2) * (1.0 + eps) / (16.0 * np.pi)
    assert_allclose(tables.vector_kink, vector_slope, rtol=2e-4)
    scalar_slope = -(K0**2) * eps / (1.0 + eps) ** 2 / (2.0 * np.pi)
    assert_allclose(tables.scalar_kink, scalar_slope, rtol=2e-4)


def test_lookup_is_exact_for_cubics():
    x = np.linspace(0.0, 0.9, 37)
    table = (1.0 + 0.1 * np.arange(11)) ** 3 + 0j
    assert_allclose(looked_up(table, 0.1, x), (1.0 + x) ** 3, rtol=1e-13)


@pytest.mark.parametrize("distance", [1e-4, 1e-2, 0.3, 2.0])
def test_rule_on_sommerfelds_identity(distance):
    """exp(-jkR)/(4 pi R) at height 0.02 from its spectrum."""
    rule = sommerfeld_rule(np.array([distance]), K0, K0, 500.0 * K0)
    alpha = np.sqrt(rule.k_rho**2 - K0**2)
    r = np.hypot(distance, 0.02)
    found = rule.integrate(np.exp(-0.02 * alpha) / (2.0 * alpha))
    assert_allclose(found, [np.exp(-1j * K0 * r) / (4.0 * np.pi * r)], rtol=1e-7)
