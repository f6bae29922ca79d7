"""Spectra of a layered stack against closed forms and another way of working them out."""

import numpy as np
import pytest
from layered_reference import Lines, points_across, scalar_spectrum, vector_spectrum
from numpy.testing import assert_allclose

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.kernel_spectra import kernel_spectra, line_charge_weights
from core.fullwave.spectral import line_response
from core.lines.stack import Layer

K0 = 2.0 * np.pi  # wavelength 1 m
K_RHO = K0 * np.array([0.1, 0.7 + 0.2j, 1.3 + 0.1j, 2.5, 8.0, 40.0], dtype=complex)
STACKS = {
    "board": (Layer(0.02, 4.4, 0.02),),
    "card on foam": (Layer(0.05, 1.05), Layer(0.003, 2.5, 0.05)),
    "three": (Layer(0.01, 2.2), Layer(0.03, 1.1, 0.001), Layer(0.02, 10.0, 0.01)),
}
stacks = pytest.mark.parametrize("layers", STACKS.values(), ids=STACKS.keys())


def spectra(layers, k_rho=K_RHO, profiles=3, ground_impedance=0.0):
    return kernel_spectra(layers, np.array([K0]), k_rho, profiles, ground_impedance)


def test_grounded_slab_closed_form():
    """The two dispersion functions of a grounded slab, as in any text on printed antennas."""
    d, eps = 0.02, 4.4
    found = spectra((Layer(d, eps),))
    air, slab = np.sqrt(K_RHO**2 - K0**2), np.sqrt(K_RHO**2 - eps * K0**2)
    te = air + slab / np.tanh(slab * d)
    tm = eps * air + slab * np.tanh(slab * d)
    scalar = (air + slab * np.tanh(slab * d)) / (te * tm)
    assert_allclose(found.vector[0], 1.0 / te, rtol=1e-12)
    assert_allclose(found.scalar[0], scalar, rtol=1e-10)


@stacks
def test_horizontal_kernels_of_formulation_c(layers):
    found = spectra(layers)
    assert_allclose(found.vector[0], vector_spectrum(layers, K0, K_RHO), rtol=1e-11)
    assert_allclose(found.scalar[0], scalar_spectrum(layers, K0, K_RHO), rtol=1e-9)


@stacks
def test_coupling_is_the_vertical_potential_of_formulation_c(layers):
    """Uniform current: k0² times G_zx = (I_h - I_e)/(j k_rho), integrated over the stack."""
    found, top = spectra(layers), sum(layer.thickness for layer in layers)
    for i, k_rho in enumerate(K_RHO):
        tm, te = (Lines(layers, K0, k_rho, kind) for kind in (True, False))
        difference = sum(
            w * (te.current(z, top) - tm.current(z, top)) for z, w, _ in points_across(layers)
        )
        assert_allclose(found.coupling[0, 0, i], -(K0**2) / k_rho**2 * difference, rtol=1e-8)


@stacks
@pytest.mark.parametrize("i", [1, 3])
def test_vertical_currents_by_quadrature(layers, i):
    """E_z of a charge at the top and of vertical currents, integrated along the profiles."""
    k_rho, top = K_RHO[i], sum(layer.thickness for layer in layers)
    found = spectra(layers, k_rho[None])
    tm = Lines(layers, K0, k_rho, True)
    observers, sources = points_across(layers, 24), points_across(layers, 25)
    profiles = [lambda z, m=m: np.cos(m * np.pi * z / top) for m in range(3)]
    charge = [
        sum(w * psi(z) * tm.current(z, top) / eps for z, w, eps in observers) for psi in profiles
    ]
    answers = np.array([[tm.current(z, s, True) for s, _, _ in sources] for z, _, _ in observers])
    one = np.array([[w * psi(z) / eps for z, w, eps in observers] for psi in profiles])
    two = np.array([[w * psi(z) / eps for z, w, eps in sources] for psi in profiles])
    own = np.array(
        [
            [sum(w * p(z) * q(z) / eps for z, w, eps in observers) for q in profiles]
            for p in profiles
        ]
    )
    between = own - k_rho**2 / (1j * K0) * one @ answers @ two.T
    end = (-1.0) ** np.arange(3)
    scalar = scalar_spectrum(layers, K0, k_rho)
    coupling = charge + end * scalar
    probe = between + np.multiply.outer(end, charge) + np.multiply.outer(charge, end)
    probe = probe + np.multiply.outer(end, end) * scalar
    # 3e-4: the current answered has a kink where source meets observer
    scale = abs(between).max()
    assert_allclose(found.coupling[:, 0, 0], coupling, rtol=1e-8)
    assert_allclose(found.probe[:, :, 0, 0], probe, atol=3e-4 * scale)


@stacks
def test_vertical_currents_are_reciprocal(layers):
    found = spectra(layers)
    assert_allclose(found.probe, found.probe.swapaxes(0, 1), rtol=1e-8)


def test_air_is_free_space_with_an_image():
    h = 0.05
    found = spectra((Layer(0.02, 1.0), Layer(h - 0.02, 1.0)))
    alpha = np.sqrt(K_RHO**2 - K0**2)
    image = (1.0 - np.exp(-2.0 * alpha * h)) / (2.0 * alpha)
    assert_allclose(found.vector[0], image, rtol=1e-12)
    assert_allclose(found.scalar[0], image, rtol=1e-9)
    assert_allclose(found.coupling[0, 0], 0.0, atol=1e-12)
    # A uniform current from -h to h seen from its own upper half: no charge but at its ends.
    line = h / alpha**2 - (1.0 - np.exp(-2.0 * alpha * h)) / (2.0 * alpha**3)
    assert_allclose(found.probe[0, 0, 0], -(K0**2) * line, rtol=1e-7)


@stacks
def test_cutting_a_layer_in_two_changes_nothing(layers):
    cut = tuple(
        Layer(share * layer.thickness, layer.eps_r, layer.loss_tangent)
        for layer in layers
        for share in (0.3, 0.7)
    )
    whole, parts = spectra(layers), spectra(cut)
    for name in ("vector", "scalar", "coupling", "probe", "foot", "foot_scalar"):
        assert_allclose(getattr(parts, name), getattr(whole, name), rtol=1e-7)


@stacks
def test_probe_spectrum_tends_to_its_line_charges(layers):
    far = spectra(layers, np.array([3e5 * K0 + 0j]))
    weights = line_charge_weights(layers, np.array([K0]), 3)
    # what is left falls off as 1/(k_rho h)
    assert_allclose(far.probe[..., 0] * (3e5 * K0) ** 2, weights, atol=1e-4 * abs(weights).max())


def test_ground_impedance_at_normal_incidence():
    """Tangent formula, started at the impedance of the ground."""
    d, eps, wall = 0.03, 3.0 - 0.1j, 5.0 + 8.0j
    lines = line_response(
        (Layer(d, 3.0, 0.1 / 3.0),), np.array([K0]), np.array([1e-6 + 0j]), 1, wall
    )
    z, tan = FREE_SPACE_IMPEDANCE / np.sqrt(eps), np.tan(K0 * np.sqrt(eps) * d)
    below = z * (wall + 1j * z * tan) / (z + 1j * wall * tan)
    voltage = 1.0 / (1.0 / FREE_SPACE_IMPEDANCE + 1.0 / below)
    assert_allclose(lines.te[0, 0] * 1j * K0 * FREE_SPACE_IMPEDANCE, voltage, rtol=1e-9)
    assert_allclose(lines.tm[0, 0] * FREE_SPACE_IMPEDANCE / (1j * K0), voltage, rtol=1e-9)


def test_several_frequencies_at_once():
    k0 = np.array([0.5, 1.0, 1.5]) * K0
    layers = STACKS["three"]
    together = kernel_spectra(layers, k0, K_RHO, 2)
    for i, one in enumerate(k0):
        alone = kernel_spectra(layers, np.array([one]), K_RHO, 2)
        assert_allclose(together.probe[:, :, i], alone.probe[:, :, 0], rtol=1e-12)
        assert_allclose(together.scalar[i], alone.scalar[0], rtol=1e-12)
