"""Dispersion of lines against a full-wave solution made for this check.

Spectral-domain Galerkin method for an open microstrip: currents along and across the strip
expanded in Chebyshev functions with their edge behaviour, fields of each spatial frequency
from transmission lines through the layers (T. Itoh, "Spectral domain immitance approach for
dispersion characteristics of generalized printed transmission lines", IEEE Trans. Microwave
Theory Tech., vol. 28, no. 7, pp. 733-736, July 1980). Time factor exp(+j omega t).
"""

from functools import lru_cache
from math import pi

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import jv

from core.constants import SPEED_OF_LIGHT, VACUUM_PERMEABILITY, VACUUM_PERMITTIVITY
from core.lines.microstrip import line_properties
from core.lines.stack import Layer

TERMS = 4
GAUSS_X, GAUSS_W = np.polynomial.legendre.leggauss(8)


@lru_cache
def spectrum():
    """Nodes s = alpha w / 2, weights, and transforms of the currents along and across."""
    edges = np.concatenate([[0.0], np.geomspace(1e-4, 1.0, 12), np.linspace(1.0, 1000.0, 320)[1:]])
    half, middle = 0.5 * np.diff(edges)[:, None], 0.5 * (edges[1:] + edges[:-1])[:, None]
    s = (middle + half * GAUSS_X).ravel()
    along = np.array([(-1) ** n * jv(2 * n, s) for n in range(TERMS)])
    across = np.array([(-1) ** n * 2 * n * jv(2 * n, s) / s for n in range(1, TERMS)])
    return s, (half * GAUSS_W).ravel(), along, across


def surface_admittances(layers, wavenumber, omega, k0):
    """Of TM and TE waves at the strip: open air above, the layers on the ground plane below."""
    tm = te = 0.0
    for layer in layers:
        decay = np.sqrt(wavenumber**2 - layer.eps_r * k0**2 + 0j)
        tangent = np.tanh(decay * layer.thickness)
        z_tm = decay / (1j * omega * VACUUM_PERMITTIVITY * layer.eps_r)
        z_te = 1j * omega * VACUUM_PERMEABILITY / decay
        tm = z_tm * (tm + z_tm * tangent) / (z_tm + tm * tangent)
        te = z_te * (te + z_te * tangent) / (z_te + te * tangent)
    decay = np.sqrt(wavenumber**2 - k0**2 + 0j)
    return (
        1.0 / tm + 1j * omega * VACUUM_PERMITTIVITY / decay,
        1.0 / te + decay / (1j * omega * VACUUM_PERMEABILITY),
    )


def galerkin(beta, width, layers, omega):
    """Matrix whose determinant vanishes at the phase constant of a mode."""
    s, weights, along, across = spectrum()
    alpha = 2.0 * s / width
    wavenumber = np.hypot(alpha, beta)
    tm, te = surface_admittances(layers, wavenumber, omega, omega / SPEED_OF_LIGHT)
    radial = np.concatenate([along * beta, across * alpha]) / wavenumber
    turning = np.concatenate([along * alpha, -across * beta]) / wavenumber
    matrix = ((radial * (weights / tm)) @ radial.T + (turning * (weights / te)) @ turning.T).imag
    scale = 1.0 / np.sqrt(abs(np.diag(matrix)))
    return matrix * scale[:, None] * scale, scale


def phase_constant(width, layers, frequency, guess):
    omega = 2.0 * pi * frequency

    def determinant(eps_eff):
        beta = omega / SPEED_OF_LIGHT * np.sqrt(eps_eff)
        return np.linalg.det(galerkin(beta, width, layers, omega)[0])

    spread = 1.0 + (guess - 1.0) * np.array([0.85, 1.15])
    return omega / SPEED_OF_LIGHT * np.sqrt(brentq(determinant, *spread, xtol=1e-12))


def power_impedance(beta, width, substrate, omega):
    """Twice the power over the square of the current, one layer; fields across the section."""
    s, weights, along, across = spectrum()
    alpha, height = 2.0 * s / width, substrate.thickness
    wavenumber = np.hypot(alpha, beta)
    matrix, scale = galerkin(beta, width, (substrate,), omega)
    amplitudes = scale * np.linalg.svd(matrix)[2][-1]
    j_along, j_across = amplitudes[:TERMS] @ along, amplitudes[TERMS:] @ across
    tm, te = surface_admittances((substrate,), wavenumber, omega, omega / SPEED_OF_LIGHT)
    e_radial = -(beta * j_along + alpha * j_across) / wavenumber / tm
    e_turning = -(alpha * j_along - beta * j_across) / wavenumber / te

    def density(e_r, h_t, e_t, h_r, eps_r):
        e_up = wavenumber * h_t / (omega * VACUUM_PERMITTIVITY * eps_r)
        h_up = -wavenumber * e_t / (omega * VACUUM_PERMEABILITY)
        e_x = (alpha * e_r - beta * e_t) / wavenumber
        h_x = (alpha * h_r - beta * h_t) / wavenumber
        return (e_x * np.conj(h_up) - e_up * np.conj(h_x)).real

    jw_eps, jw_mu = 1j * omega * VACUUM_PERMITTIVITY, 1j * omega * VACUUM_PERMEABILITY
    k0 = omega / SPEED_OF_LIGHT
    above = np.sqrt(wavenumber**2 - k0**2)
    below = np.sqrt(wavenumber**2 - substrate.eps_r * k0**2 + 0j)
    power = density(
        e_radial, -jw_eps * e_radial / above, e_turning, above * e_turning / jw_mu, 1.0
    ) / (2.0 * above)
    # Integrals over the height of sinh^2 and cosh^2, over the size of sinh^2 at the strip.
    fade = np.exp(-2.0 * below * height)
    whole = ((1.0 + fade) / (1.0 - fade) / (2.0 * below)).real
    rest = (2.0 * height * fade / (1.0 - fade) ** 2).real
    sines, cosines = whole - rest, np.sign((below**2).real) * (whole + rest)
    h_turning = jw_eps * substrate.eps_r * e_radial / below
    h_radial = -below * e_turning / jw_mu
    power += sines * density(e_radial, 0.0, e_turning, 0.0, 1.0)
    power += cosines * density(0.0, h_turning, 0.0, h_radial, substrate.eps_r)
    return (power @ weights) * 2.0 / width / (pi * amplitudes[0] ** 2)


@pytest.mark.parametrize("eps_r", [1.05, 1.2, 1.5, 2.2, 4.4])
@pytest.mark.parametrize("ratio", [0.5, 2.0, 5.0])
def test_single_layer_against_full_wave(ratio, eps_r):
    """Height 0.001, 0.04 and 0.12 wavelength; permittivity is stated to 0.6 %."""
    height = 1e-3
    substrate = Layer(height, eps_r)
    for frequency, tolerance in ((0.3e9, 0.002), (12e9, 0.01), (36e9, 0.02)):
        line = line_properties(ratio * height, (substrate,), frequency)
        beta = phase_constant(ratio * height, (substrate,), frequency, line.eps_eff)
        found = (beta * SPEED_OF_LIGHT / (2.0 * pi * frequency)) ** 2
        assert line.eps_eff == pytest.approx(found, rel=0.007)
        impedance = power_impedance(beta, ratio * height, substrate, 2.0 * pi * frequency)
        assert line.characteristic_impedance == pytest.approx(impedance, rel=tolerance)


STACKS = {
    "board on air": ((Layer(5e-3), Layer(0.8e-3, 4.4)), 0.01),
    "board on much air": ((Layer(15e-3), Layer(0.8e-3, 4.4)), 0.01),
    "card on foam": ((Layer(10e-3, 1.03), Layer(0.3e-3, 3.0)), 0.01),
    "air on board": ((Layer(1.6e-3, 4.4), Layer(5e-3)), 0.01),
    "three": ((Layer(10e-3, 1.05), Layer(2e-3, 2.5), Layer(1e-3, 1.5)), 0.01),
    "two boards": ((Layer(0.8e-3, 4.4), Layer(0.8e-3, 2.2)), 0.025),
}


@pytest.mark.parametrize("name", STACKS)
@pytest.mark.parametrize("ratio", [0.3, 1.0, 4.0])
def test_several_layers_against_full_wave(ratio, name):
    """At low frequency and at a height of 0.06 wavelength, where the live match ends.

    One equivalent layer cannot tell how the field moves between the layers: at the higher
    frequency 1 % over air and foam, 2.5 % over two boards.
    """
    layers, tolerance = STACKS[name]
    height = sum(layer.thickness for layer in layers)
    for frequency, limit in ((1e7, 0.003), (0.06 * SPEED_OF_LIGHT / height, tolerance)):
        line = line_properties(ratio * height, layers, frequency)
        beta = phase_constant(ratio * height, layers, frequency, line.eps_eff)
        found = (beta * SPEED_OF_LIGHT / (2.0 * pi * frequency)) ** 2
        assert line.eps_eff == pytest.approx(found, rel=limit)
