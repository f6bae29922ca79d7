"""Far field of currents on a mesh in free space.

Far field means r exp(jkr) E for r to infinity, in volts.

Shapes: t triangles, n functions, d directions.
"""

from __future__ import annotations

from math import ceil, pi
from typing import TYPE_CHECKING

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.fullwave.quadrature import COARSE_RULE

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import ArrayLike, NDArray

    from core.fullwave.basis import Basis

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]


def far_field(basis: Basis, currents: Complexes, frequency: float, directions: Floats) -> Complexes:
    """Far field of currents in some directions.

    Parameters
    ----------
    basis : Basis
    currents : (n,) ndarray of complex
        Coefficients of the basis functions, A/m.
    frequency : float
        Hz.
    directions : (d, 3) ndarray of float
        Unit vectors.

    Returns
    -------
    (d, 3) ndarray of complex
        x, y and z components of r exp(jkr) E, V.
    """
    points, moments = current_moments(basis, currents)
    k = TWO_PI * frequency / SPEED_OF_LIGHT
    summed = summed_waves(k * directions, points, moments)
    across = summed - np.sum(summed * directions, axis=1, keepdims=True) * directions
    return np.asarray(across * (-1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)))


def summed_waves(ways: Floats, points: Floats, moments: Complexes) -> Complexes:
    """Sum moments times exp(j k . r).

    Parameters
    ----------
    ways : (d, a) ndarray of float
        Wave vectors, 1/m.
    points : (q, a) ndarray of float
        m.
    moments : (q, c) ndarray of complex
        By component.

    Returns
    -------
    (d, c) ndarray of complex
    """
    from core.fullwave.compiled_waves import sum_waves  # noqa: PLC0415 - slow to load

    out = np.empty((len(ways), moments.shape[1]), dtype=np.complex128)
    sum_waves(
        np.ascontiguousarray(ways, dtype=np.float64),
        np.ascontiguousarray(points.T),
        np.ascontiguousarray(moments.T.real),
        np.ascontiguousarray(moments.T.imag),
        out,
    )
    return out


def boresight_weights(basis: Basis, frequency: float) -> Complexes:
    """Far field straight up of each function's 1 A/m.

    Parameters
    ----------
    basis : Basis
    frequency : float
        Hz.

    Returns
    -------
    (2, n) ndarray of complex
        x and y components of r exp(jkr) E, V per A/m.
    """
    k = TWO_PI * frequency / SPEED_OF_LIGHT
    factor = -1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    return np.asarray(factor * moment_weights(basis, k))


def moment_weights(basis: Basis, wavenumber: float) -> Complexes:
    """Moments along x and y of each function's 1 A/m, times exp(jkz).

    Parameters
    ----------
    basis : Basis
    wavenumber : float
        1/m.

    Returns
    -------
    (2, n) ndarray of complex
        m².
    """
    points = np.einsum("ic,tcx->tix", COARSE_RULE[:, :3], basis.corners)
    turned = COARSE_RULE[:, 3] * np.exp(1j * wavenumber * points[..., 2])
    arms = np.einsum("ti,tix->xt", turned, points[..., :2])[:, None]
    arms = arms - turned.sum(axis=1) * basis.corners[..., :2].transpose(2, 1, 0)
    return np.stack([basis.tested(one) for one in arms * basis.lengths / 2.0])


def current_moments(basis: Basis, currents: Complexes) -> tuple[Floats, Complexes]:
    """Currents as moments at points.

    Parameters
    ----------
    basis : Basis
    currents : (n,) ndarray of complex
        A/m.

    Returns
    -------
    points : (3 t, 3) ndarray of float
        m.
    moments : (3 t, 3) ndarray of complex
        Current at each times its share of area, A m.
    """
    points = np.einsum("ic,tcx->tix", COARSE_RULE[:, :3], basis.corners)
    arms = points[:, :, None] - basis.corners[:, None]
    halves = basis.on_halves(currents) * basis.lengths / 2.0
    moments = np.einsum("i,tiax,at->tix", COARSE_RULE[:, 3], arms, halves)
    return points.reshape(-1, 3), moments.reshape(-1, 3)


def direction_frame(theta: ArrayLike, phi: ArrayLike) -> tuple[Floats, Floats, Floats]:
    """Unit vectors along r, theta and phi.

    Parameters
    ----------
    theta, phi : (...,) array_like of float
        Angle from boresight and azimuth from x towards y, rad; theta may be negative, so
        that a cut runs on smoothly through boresight.

    Returns
    -------
    tuple of (..., 3) ndarray of float
    """
    theta, phi = np.broadcast_arrays(np.asarray(theta, float), np.asarray(phi, float))
    st, ct, sp, cp = np.sin(theta), np.cos(theta), np.sin(phi), np.cos(phi)
    return (
        np.stack([st * cp, st * sp, ct], axis=-1),
        np.stack([ct * cp, ct * sp, -st], axis=-1),
        np.stack([-sp, cp, np.zeros_like(cp)], axis=-1),
    )


def sphere_power(field: Callable[[Floats], Complexes], frequency: float, reach: float) -> float:
    """Power through a large sphere.

    Parameters
    ----------
    field : callable
        Far field (d, 3), V, peak values, in directions (d, 3).
    frequency : float
        Hz.
    reach : float
        Largest extent of the antenna, m.

    Returns
    -------
    float
        W.

    Notes
    -----
    Gauss points in cos(theta) times even steps in phi: exact for a pattern of as many
    spherical harmonics as the antenna's size in wavelengths excites.
    """
    order = ceil(TWO_PI * frequency / SPEED_OF_LIGHT * reach * 0.75) + 6
    heights, weights = np.polynomial.legendre.leggauss(order)
    steps = TWO_PI * np.arange(2 * order) / (2 * order)
    towards, _, _ = direction_frame(np.arccos(heights)[:, None], steps)
    squares = np.sum(np.abs(field(towards.reshape(-1, 3))) ** 2, axis=1)
    rings = squares.reshape(order, -1).sum(axis=1)
    return float(weights @ rings * pi / order / (2.0 * FREE_SPACE_IMPEDANCE))
