"""Far field, surface waves and powers of currents on a board over an infinite ground plane.

Shapes: q points, e edges round the probe, m vertical profiles, d directions, t angles.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI
from core.fullwave.coax_mouth import mouth_field
from core.fullwave.far_field import current_moments, summed_waves
from core.fullwave.layered_radiation import layered_radiation
from core.fullwave.surface_waves import launched_power, surface_waves

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.fullwave.mesh_model import CoaxRing
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_LEAST_ANGLES: Final = 8  # from boresight to the plane


@dataclass(frozen=True, eq=False)
class BoardCurrents:
    """Currents on a board as moments at points.

    Attributes
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : float
        Of free space, 1/m.
    ground_impedance : complex
        Ohm.
    points : (q, 2) ndarray of float
        On the top copper, m.
    moments : (q, 2) ndarray of complex
        Horizontal current there times its share of area, A m.
    feet : (e, 2) ndarray of float
        Of vertical currents, m.
    rising : (m, e) ndarray of complex
        Those currents by profile, A.
    mouth : CoaxRing
        At 1 V.
    """

    layers: tuple[Layer, ...]
    wavenumber: float
    ground_impedance: complex
    points: Floats
    moments: Complexes
    feet: Floats
    rising: Complexes
    mouth: CoaxRing

    @classmethod
    def of(
        cls,
        layers: tuple[Layer, ...],
        frequency: float,
        ground_impedance: complex,
        basis: Basis,
        solved: Complexes,
        probe: tuple[Floats, Complexes, CoaxRing],
    ) -> BoardCurrents:
        """Of solved functions; feet, rising currents and mouth are the probe's."""
        points, moments = current_moments(basis, solved)
        wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
        return cls(layers, wavenumber, ground_impedance, points[:, :2], moments[:, :2], *probe)

    @classmethod
    def mouth_alone(
        cls,
        layers: tuple[Layer, ...],
        frequency: float,
        ground_impedance: complex,
        mouth: CoaxRing,
        profiles: int,
    ) -> BoardCurrents:
        """Of a mouth without any copper."""
        nowhere, nothing = np.zeros((1, 2)), np.zeros((1, 2), dtype=np.complex128)
        still = np.zeros((profiles, 1), dtype=np.complex128)
        wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
        return cls(layers, wavenumber, ground_impedance, nowhere, nothing, nowhere, still, mouth)

    def transformed(
        self, wavenumber: Floats | float, phi: Floats
    ) -> tuple[Complexes, Complexes, Complexes, Complexes]:
        """Integrals of sources times exp(j k . r) for k of some size (d,) and azimuth (d,).

        Of the currents along k (d,) and across it (d,), A m; of the vertical ones (m, d), A; of
        the mouth's field along k (d,), V m.
        """
        direction = np.column_stack([np.cos(phi), np.sin(phi)])
        k = np.broadcast_to(wavenumber, phi.shape)[:, None] * direction
        summed = summed_waves(k, self.points, self.moments)
        across = direction[:, 0] * summed[:, 1] - direction[:, 1] * summed[:, 0]
        rising = self.rising @ np.exp(1j * (k @ self.feet.T)).T
        # A mouth's field turns round with its direction, so the sign of k is in its size.
        mouth = mouth_field(self.mouth.inner, self.mouth.outer, np.abs(wavenumber))
        place = np.exp(1j * (k @ np.array([self.mouth.x, self.mouth.y])))
        return (
            np.sum(direction * summed, axis=1),
            across,
            rising,
            np.sign(wavenumber) * mouth * place,
        )


def space_field(flowing: BoardCurrents, theta: Floats, phi: Floats) -> tuple[Complexes, Complexes]:
    """Far field r E exp(j k r) above a board.

    Parameters
    ----------
    flowing : BoardCurrents
    theta, phi : (d,) ndarray of float
        Angle from boresight, below pi/2 in size, and azimuth, rad; theta may be negative.

    Returns
    -------
    along_theta, along_phi : (d,) ndarray of complex
        V.
    """
    k = flowing.wavenumber
    angles, number = np.unique(np.abs(theta), return_inverse=True)
    factors = layered_radiation(
        flowing.layers, np.array([k]), angles, len(flowing.rising), flowing.ground_impedance
    )
    # A negative theta is the opposite azimuth, with both unit vectors turned round.
    along, across, rising, mouth = flowing.transformed(k * np.sin(theta), phi)
    side = np.where(theta < 0.0, -1.0, 1.0)
    e_theta = factors.along[0, number] * along + factors.foot[0, number] * mouth
    e_theta += side * np.sum(factors.vertical[:, 0, number] * rising, axis=0)
    return e_theta, factors.across[0, number] * across


def boresight_of_moments(
    layers: tuple[Layer, ...], wavenumber: float, ground_impedance: complex
) -> Complexes:
    """Far field r E exp(j k r) straight up along x and y over the moments along them.

    Parameters
    ----------
    layers : tuple of Layer
    wavenumber : float
        Of free space, 1/m.
    ground_impedance : complex
        Ohm a square.

    Returns
    -------
    (2, 1) ndarray of complex
        Ohm/m. Neither vertical currents nor a mouth send anything that way.
    """
    factors = layered_radiation(
        layers, np.array([wavenumber]), np.zeros(1), ground_impedance=ground_impedance
    )
    return np.array([factors.along[0], factors.across[0]])


def power_into_space(flowing: BoardCurrents) -> float:
    """Power that leaves above a board, W.

    Parameters
    ----------
    flowing : BoardCurrents
        Peak values.

    Returns
    -------
    float

    Notes
    -----
    Gauss points in cos(theta) times even steps in phi, as many as the copper's size asks for.
    """
    reach = float(np.ptp(flowing.points, axis=0).max())
    order = ceil(0.75 * flowing.wavenumber * reach) + _LEAST_ANGLES
    heights, weights = np.polynomial.legendre.leggauss(order)
    steps = TWO_PI * np.arange(2 * order) / (2 * order)
    theta = np.repeat(np.arccos(0.5 * (1.0 + heights)), 2 * order)
    e_theta, e_phi = space_field(flowing, theta, np.tile(steps, order))
    density = (np.abs(e_theta) ** 2 + np.abs(e_phi) ** 2).reshape(order, -1).sum(axis=1)
    return float(0.5 * weights @ density * pi / order / (2.0 * FREE_SPACE_IMPEDANCE))


def power_into_waves(flowing: BoardCurrents) -> float:
    """Power that runs away along a board in guided waves, losses of the stack left out, W.

    Parameters
    ----------
    flowing : BoardCurrents
        Peak values.

    Returns
    -------
    float
    """
    total = 0.0
    reach = float(np.ptp(flowing.points, axis=0).max())
    for wave in surface_waves(flowing.layers, flowing.wavenumber, len(flowing.rising)):
        count = 2 * (ceil(0.75 * wave.wavenumber * reach) + _LEAST_ANGLES)
        phi = TWO_PI * np.arange(count) / count
        along, across, rising, mouth = flowing.transformed(wave.wavenumber, phi)
        horizontal = across if wave.transverse_electric else along
        amplitude = wave.horizontal * horizontal + wave.vertical @ rising + wave.foot * mouth
        total += launched_power(wave, flowing.wavenumber, amplitude)
    return total
