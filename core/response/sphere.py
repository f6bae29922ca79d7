"""Readings off the far field over the sphere: cuts, beam, axial ratio and sense by direction.

Along theta the grid runs on through boresight to the other side and is joined by cubics; round
boresight it is a short Fourier series, which for an antenna of finite size is all there is.

Shapes: a angles and b azimuths of the grid; d directions.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.interpolate import CubicSpline

from core.constants import TWO_PI
from core.design.polarisation import Polarisation
from core.response.model import PatternCut
from core.response.polarisation import axial_ratio_db, circular_components, intended_power

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.response.model import FarSphere

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

CONE: Final = pi / 6.0
"""Angle from boresight within which the worst axial ratio is told, rad."""

_CUT_STEP: Final = pi / 90.0
_FINE: Final = pi / 180.0  # between directions that are searched
_ROUND: Final = 72  # azimuths that are searched
_ZOOMS, _ZOOM = 3, 8.0  # times the search for the beam's peak is repeated, and how much closer


@dataclass(frozen=True)
class Beam:
    """Where the gain to the intended polarisation is largest.

    Attributes
    ----------
    tilt : float
        From boresight, rad, 0 to pi.
    azimuth : float
        From x towards y, rad, 0 to 2 pi; means nothing without a tilt.
    gain : float
        There, as a ratio.
    """

    tilt: float
    azimuth: float
    gain: float


def field_at(sphere: FarSphere, theta: Floats, phi: Floats) -> tuple[Complexes, Complexes]:
    """Far field in any directions.

    Parameters
    ----------
    sphere : FarSphere
    theta : (d,) ndarray of float
        From boresight, rad, no further than the grid; negative on the far side of boresight.
    phi : (d,) ndarray of float
        From x towards y, rad.

    Returns
    -------
    e_theta, e_phi : (d,) ndarray of complex
        Run on smoothly through boresight to negative theta, as in `PatternCut`.
    """
    # At a negative theta stand the opposite azimuths, with both unit vectors turned round.
    half = len(sphere.phi) // 2
    angles = np.concatenate([-sphere.theta[:0:-1], sphere.theta])
    orders = np.fft.fftfreq(len(sphere.phi), 1.0 / len(sphere.phi))
    turns = np.exp(1j * np.outer(phi, orders)) / len(sphere.phi)
    found = []
    for grid in (sphere.e_theta, sphere.e_phi):
        across = np.concatenate([-np.roll(grid, -half, axis=1)[:0:-1], grid])
        waves = CubicSpline(angles, np.fft.fft(across, axis=1))(theta)
        found.append(np.sum(waves * turns, axis=1))
    return found[0], found[1]


def pattern_cut(sphere: FarSphere, phi: float) -> PatternCut:
    """Far field in one plane through boresight, every two degrees.

    Parameters
    ----------
    sphere : FarSphere
    phi : float
        Azimuth of the plane from x towards y, rad.

    Returns
    -------
    PatternCut
    """
    steps = round(float(sphere.theta[-1]) / _CUT_STEP)
    theta = np.arange(-steps, steps + 1) * float(sphere.theta[-1]) / steps
    return PatternCut(phi, theta, *field_at(sphere, theta, np.full(len(theta), phi)))


def beam(sphere: FarSphere, polarisation: Polarisation) -> Beam:
    """Direction of the largest gain to the intended polarisation.

    Parameters
    ----------
    sphere : FarSphere
    polarisation : Polarisation

    Returns
    -------
    Beam
    """
    power = intended_power(sphere.e_theta, sphere.e_phi, polarisation)
    row, column = np.unravel_index(int(np.argmax(power)), power.shape)
    tilt, azimuth = float(sphere.theta[row]), float(sphere.phi[column])
    # Searched on a map of the sky round boresight, on which nothing happens at tilt 0.
    x, y = tilt * np.cos(azimuth), tilt * np.sin(azimuth)
    step = float(max(sphere.theta[1], 2.0 * sphere.phi[1] * tilt))
    for _ in range(_ZOOMS):
        around = np.linspace(-step, step, 2 * int(_ZOOM) + 1)
        xs, ys = (one.ravel() for one in np.meshgrid(x + around, y + around))
        theta = np.minimum(np.hypot(xs, ys), sphere.theta[-1])
        phi = np.arctan2(ys, xs)
        gains = intended_power(*field_at(sphere, theta, phi), polarisation)
        best = int(np.argmax(gains))
        x, y = theta[best] * np.cos(phi[best]), theta[best] * np.sin(phi[best])
        step /= _ZOOM
    return Beam(float(theta[best]), float(phi[best] % TWO_PI), float(gains[best]))


def worst_axial_ratio_db(
    sphere: FarSphere, polarisation: Polarisation, within: float = CONE
) -> float:
    """Largest axial ratio around boresight.

    Parameters
    ----------
    sphere : FarSphere
    polarisation : Polarisation
        Circular.
    within : float
        From boresight, rad, no further than the grid.

    Returns
    -------
    float
        dB; infinite where the field turns the other way anywhere within.
    """
    _, e_theta, e_phi = _searched(sphere, within)
    if (_lead(e_theta, e_phi, polarisation) <= 0.0).any():
        return float(np.inf)
    return float(axial_ratio_db(e_theta, e_phi).max())


def sense_reach(sphere: FarSphere, polarisation: Polarisation) -> float:
    """Angle from boresight up to which the field turns the intended way in every azimuth.

    Parameters
    ----------
    sphere : FarSphere
    polarisation : Polarisation
        Circular.

    Returns
    -------
    float
        rad, to a degree; 0 where it turns the other way at boresight, the end of the grid
        where it turns the intended way everywhere.
    """
    theta, e_theta, e_phi = _searched(sphere, float(sphere.theta[-1]))
    turned = _lead(e_theta, e_phi, polarisation) <= 0.0
    if not turned.any():
        return float(sphere.theta[-1])
    return max(float(theta[turned].min()) - _FINE, 0.0)


def _searched(sphere: FarSphere, within: float) -> tuple[Floats, Complexes, Complexes]:
    """Angles from boresight and fields in closely spaced directions."""
    steps = round(within / _FINE)
    angles = np.linspace(0.0, within, steps + 1)
    theta = np.repeat(angles, _ROUND)
    phi = np.tile(TWO_PI * np.arange(_ROUND) / _ROUND, len(angles))
    return theta, *field_at(sphere, theta, phi)


def _lead(e_theta: Complexes, e_phi: Complexes, polarisation: Polarisation) -> Floats:
    """How much more of the field turns the intended way than the other."""
    right, left = circular_components(e_theta, e_phi)
    lead = np.abs(right) - np.abs(left)
    return np.asarray(lead if polarisation is Polarisation.RHCP else -lead)
