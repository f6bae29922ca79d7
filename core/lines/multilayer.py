"""Several dielectric layers under one strip, and the single layer that acts like them.

The charge on the strip is expanded in Chebyshev polynomials over the edge singularity,
T_2n(2x/w) / sqrt(1 - (2x/w)^2), whose transforms are the Bessel functions J_2n; the
potential of the stack is known for each spatial frequency, so the capacitance per length is
one small symmetric system [1]_. All lengths are scaled by half the strip width, which leaves
the quadrature the same for every line.

References
----------
.. [1] E. Yamashita and R. Mittra, "Variational method for the analysis of microstrip lines",
   IEEE Trans. Microwave Theory Tech., vol. 16, no. 4, pp. 251-256, Apr. 1968; several layers:
   E. Yamashita, same journal, vol. 16, no. 8, pp. 529-535, Aug. 1968 (from memory).
"""

from __future__ import annotations

from functools import lru_cache
from math import pi

import numpy as np
from numpy.typing import NDArray
from scipy.special import jv

from core.errors import ConvergenceError
from core.lines.stack import Layer, series_loss_tangent, series_permittivity, total_thickness

_TERMS = 4  # even Chebyshev terms: 1e-5 of the exact capacitance up to w/h = 20
_SWITCH = 12.25 * pi  # cos(2 s) = 0 here: dropping the ripple beyond costs nothing to first order
_NEWTON_STEPS = 30


@lru_cache(maxsize=4096)
def equivalent_layer(width: float, layers: tuple[Layer, ...]) -> Layer:
    """Single layer of the same height that gives the strip the same capacitance.

    Parameters
    ----------
    width : float
        Strip width, m, > 0.
    layers : tuple of Layer
        Under the strip, from the ground up, at least one; air above.

    Returns
    -------
    Layer
        Total thickness, and the permittivity and loss tangent of the uniform substrate with
        the same complex capacitance per length. One layer, or equal layers, return as they
        are.

    Raises
    ------
    InputError
        If there is no layer.
    ConvergenceError
        If the equivalent permittivity does not settle.

    Notes
    -----
    Loss is carried by complex permittivity, so each layer counts with its filling factor, the
    derivative of the capacitance with respect to its permittivity. Strip of no thickness,
    quasi-static: at high frequency the field moves into the denser layers, which one
    equivalent layer cannot tell.
    """
    height = total_thickness(layers)
    merged = _merge_equal(layers)
    if len(merged) == 1:
        return Layer(height, merged[0].eps_r, merged[0].loss_tangent)
    spatial, weights = _quadrature()
    alpha = 2.0 * spatial / width
    target = _capacitance(width, merged)
    tangent = np.tanh(alpha * height)
    eps = series_permittivity(merged) * (1.0 - 1j * series_loss_tangent(merged))
    change = eps
    for _ in range(_NEWTON_STEPS):
        response: NDArray[np.complex128] = tangent / (tangent + eps)
        charge = _charge(weights, response)
        slope = charge @ (weights @ (response**2 / tangent)) @ charge
        change = (target / pi - charge[0]) / slope
        eps += change
        if abs(change) < 1e-13 * abs(eps):
            return Layer(height, max(float(eps.real), 1.0), max(-float(eps.imag / eps.real), 0.0))
    raise ConvergenceError(
        f"equivalent permittivity of {len(layers)} layers did not settle",
        residual=float(abs(change)),
        iterations=_NEWTON_STEPS,
    )


def _merge_equal(layers: tuple[Layer, ...]) -> tuple[Layer, ...]:
    """Join neighbours of one material."""
    merged = [layers[0]]
    for layer in layers[1:]:
        last = merged[-1]
        if (layer.eps_r, layer.loss_tangent) == (last.eps_r, last.loss_tangent):
            merged[-1] = Layer(last.thickness + layer.thickness, last.eps_r, last.loss_tangent)
        else:
            merged.append(layer)
    return tuple(merged)


def _capacitance(width: float, layers: tuple[Layer, ...]) -> complex:
    """Capacitance per length of the strip over the permittivity of vacuum."""
    spatial, weights = _quadrature()
    return pi * complex(_charge(weights, _stack_response(2.0 * spatial / width, layers))[0])


def _stack_response(
    alpha: NDArray[np.float64], layers: tuple[Layer, ...]
) -> NDArray[np.complex128]:
    """Potential per charge at the strip, times vacuum permittivity and `alpha`."""
    impedance = np.zeros(alpha.shape, dtype=np.complex128)
    for layer in layers:
        eps = layer.eps_r * (1.0 - 1j * layer.loss_tangent)
        tangent = np.tanh(alpha * layer.thickness)
        impedance = (impedance + tangent / eps) / (1.0 + eps * tangent * impedance)
    return impedance / (1.0 + impedance)


def _charge(
    weights: NDArray[np.float64], response: NDArray[np.complex128]
) -> NDArray[np.complex128]:
    """Chebyshev coefficients of the charge at unit potential; pi times the first is C."""
    charge: NDArray[np.complex128] = np.linalg.inv(weights @ response)[0]
    return charge


@lru_cache(maxsize=1)
def _quadrature() -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Nodes s = alpha w/2, and weights (terms, terms, nodes) with J_2m J_2n / s in them.

    Panels are geometric up to 1 (a narrow strip sees the stack there), a quarter period up to
    `_SWITCH`, and geometric again beyond, where the product of two Bessel functions is
    replaced by its mean over a period, cos(difference of phases) / (pi s).
    """
    orders = 2 * np.arange(_TERMS)
    near = np.concatenate([[0.0], np.geomspace(1e-4, 1.0, 9), np.linspace(1.0, _SWITCH, 25)[1:]])
    nodes, lengths = _gauss_panels(near)
    bessel = (-1.0) ** (orders[:, None] // 2) * jv(orders[:, None], nodes)
    weights = bessel[:, None] * bessel * (lengths / nodes)
    far_nodes, far_lengths = _gauss_panels(_SWITCH * np.geomspace(1.0, 1e4, 9))
    phase = (4.0 * orders**2 - 1.0)[:, None] / (8.0 * far_nodes)
    mean = np.cos(phase[:, None] - phase) / (pi * far_nodes)
    return (
        np.concatenate([nodes, far_nodes]),
        np.concatenate([weights, mean * (far_lengths / far_nodes)], axis=2),
    )


def _gauss_panels(
    edges: NDArray[np.float64],
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Nodes and weights of the eight-point Gauss rule on each panel."""
    points, factors = np.polynomial.legendre.leggauss(8)
    half = 0.5 * np.diff(edges)[:, None]
    middle = 0.5 * (edges[1:] + edges[:-1])[:, None]
    return (middle + half * points).ravel(), (half * factors).ravel()
