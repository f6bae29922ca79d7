"""Closed-form design equations of a rectangular element over an infinite ground plane.

For one mode the *length* is the side along which its current flows, half a wavelength long,
and the *width* is the other side, along the two edges that radiate. The mode along x has the
element's width as its length; the mode along y has it the usual way round. Shapes: n
frequencies; () is a single value.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi, sqrt
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import (
    FREE_SPACE_IMPEDANCE,
    SPEED_OF_LIGHT,
    TWO_PI,
    VACUUM_PERMEABILITY,
)
from core.live.slots import slot_conductances

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    Floats = NDArray[np.float64]

_LEAST_FACTOR: Final = 0.2  # of the size factor
_A2: Final = -0.16605  # Jackson and Alexopoulos 1991
_A4: Final = 0.00761
_C2: Final = -0.0914153


def _effective_permittivity(width_ratio: float, eps_r: float) -> float:
    """Effective relative permittivity of a wide strip, quasi-static.

    Parameters
    ----------
    width_ratio : float
        Width over substrate height, > 0; made for values above 1.
    eps_r : float
        Of the substrate, >= 1.

    Returns
    -------
    float
        Between 1 and `eps_r`.

    Notes
    -----
    The closed form that the end extension below was published with [1]_; more exact ones for
    strips are in `core.lines`.

    References
    ----------
    .. [1] E. O. Hammerstad, "Equations for microstrip circuit design", Proc. 5th European
       Microwave Conf., pp. 268-272, 1975; as C. A. Balanis, *Antenna Theory*, 4th ed.,
       Wiley, 2016, eq. 14-1.
    """
    narrow = 0.04 * max(1.0 - width_ratio, 0.0) ** 2
    spread = 1.0 / sqrt(1.0 + 12.0 / width_ratio) + narrow
    return (eps_r + 1.0) / 2.0 + (eps_r - 1.0) / 2.0 * spread


def _end_extension(width_ratio: float, eps_eff: float) -> float:
    """Apparent lengthening at each open edge, in heights of the substrate.

    Parameters
    ----------
    width_ratio : float
        Width over substrate height, > 0.
    eps_eff : float
        Effective permittivity for that width, >= 1.

    Returns
    -------
    float
        Extension over height, 0.2 to 0.7 for common elements.

    References
    ----------
    .. [1] E. O. Hammerstad, "Equations for microstrip circuit design", Proc. 5th European
       Microwave Conf., pp. 268-272, 1975; as C. A. Balanis, *Antenna Theory*, 4th ed.,
       Wiley, 2016, eq. 14-2.
    """
    permittivity = (eps_eff + 0.3) / (eps_eff - 0.258)
    return 0.412 * permittivity * (width_ratio + 0.264) / (width_ratio + 0.8)


def resonant_frequency(length: float, eps_eff: float, extension: float) -> float:
    """Frequency at which a side is half a guided wavelength long.

    Parameters
    ----------
    length : float
        Of the side, m, > 0.
    eps_eff : float
        Effective permittivity, >= 1.
    extension : float
        At each end, m, >= 0.

    Returns
    -------
    float
        Hz.

    Notes
    -----
    For thin substrates. With Hammerstad's extension within 2 % of the measured rows up to
    0.08 free-space wavelength in one published set, but 4 to 17 % high in another
    (docs/models/element.md).

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eq. 14-5.
    """
    return SPEED_OF_LIGHT / (2.0 * (length + 2.0 * extension) * sqrt(eps_eff))


def seed_width(frequency: float, eps_r: float) -> float:
    """Width of a linearly polarised element with good radiation, to begin a design with.

    Parameters
    ----------
    frequency : float
        Hz, > 0.
    eps_r : float
        Of the substrate, >= 1.

    Returns
    -------
    float
        m.

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eq. 14-6.
    """
    return SPEED_OF_LIGHT / (2.0 * frequency) * sqrt(2.0 / (eps_r + 1.0))


def seed_length(frequency: float, width: float, height: float, eps_r: float) -> float:
    """Length of an element that resonates at a frequency, to begin a design with.

    Parameters
    ----------
    frequency : float
        Hz, > 0.
    width : float
        The side along the radiating edges, m, > 0.
    height : float
        Of the substrate, m, > 0.
    eps_r : float
        Of the substrate, >= 1.

    Returns
    -------
    float
        m; may be 0 or negative where the extensions use up the half wavelength.

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eq. 14-7.
    """
    eps_eff = _effective_permittivity(width / height, eps_r)
    half_wave = SPEED_OF_LIGHT / (2.0 * frequency * sqrt(eps_eff))
    return half_wave - 2.0 * height * _end_extension(width / height, eps_eff)


@dataclass(frozen=True)
class QualityFactors:
    """Where a mode loses its energy; each quality factor is energy over loss of one kind.

    Attributes
    ----------
    space : float
        By radiation into the space above.
    surface_efficiency : float
        Share of the radiated power that goes into space, not into surface waves, 0 to 1.
    conductor : float
        By the resistance of the foil and the ground plane; infinite without.
    dielectric : float
        By the substrate; infinite without.
    """

    space: float
    surface_efficiency: float
    conductor: float
    dielectric: float

    @property
    def total(self) -> float:
        """Quality factor with all losses together."""
        radiated = 1.0 / (self.space * self.surface_efficiency)
        return 1.0 / (radiated + 1.0 / self.conductor + 1.0 / self.dielectric)


def quality_factors(
    width: float,
    length: float,
    height: float,
    eps_r: float,
    frequency: float,
    *,
    loss_tangent: float = 0.0,
    conductivity: float = np.inf,
    roughness: float = 0.0,
    side_ratio: float | None = None,
) -> QualityFactors:
    """Quality factors of one mode.

    Parameters
    ----------
    width, length : float
        Physical sides, m, > 0.
    height : float
        Of the substrate, m, > 0.
    eps_r : float
        Of the substrate, >= 1.
    frequency : float
        At which the mode resonates, Hz, > 0.
    loss_tangent : float
        Of the substrate, >= 0.
    conductivity : float
        Of foil and ground plane, S/m, > 0.
    roughness : float
        Root mean square, m, >= 0.
    side_ratio : float, optional
        Length over width in the energy that is stored; that of the physical sides where it is
        not given.

    Returns
    -------
    QualityFactors

    Notes
    -----
    Radiation from the current of the mode on a thin substrate, as a dipole times a factor for
    its size [1]_. Conductor loss on two thick plates, with roughness [2]_.

    References
    ----------
    .. [1] D. R. Jackson and N. G. Alexopoulos, "Simple approximate formulas for input
       resistance, bandwidth, and efficiency of a resonant rectangular patch", IEEE Trans.
       Antennas Propag., vol. 39, no. 3, pp. 407-410, Mar. 1991.
    .. [2] E. Hammerstad and O. Jensen, "Accurate models for microstrip computer-aided
       design", IEEE MTT-S Int. Microwave Symp. Digest, pp. 407-409, 1980, eq. 18.
    """
    wavelength = SPEED_OF_LIGHT / frequency
    spread = float(_size_factor(width, length, frequency)) * _substrate_factor(eps_r)
    ratio = length / width if side_ratio is None else side_ratio
    space = 3.0 / 16.0 * eps_r / spread * ratio * wavelength / height
    electrical_height = TWO_PI * height / wavelength
    trapped = 0.75 * pi * electrical_height / _substrate_factor(eps_r) * (1.0 - 1.0 / eps_r) ** 3
    sheet = _surface_resistance(frequency, conductivity, roughness)
    return QualityFactors(
        space=space,
        surface_efficiency=1.0 / (1.0 + trapped),
        conductor=FREE_SPACE_IMPEDANCE * electrical_height / (2.0 * sheet) if sheet else np.inf,
        dielectric=1.0 / loss_tangent if loss_tangent else np.inf,
    )


def broadside_directivity(
    width: float, length: float, height: float, eps_r: float, frequency: ArrayLike
) -> Floats:
    """Directivity of one mode at boresight, over an infinite ground plane.

    Parameters
    ----------
    width, length : float
        Physical sides, m, > 0.
    height : float
        Of the substrate, m, > 0, below a quarter wavelength in it.
    eps_r : float
        Of the substrate, >= 1.
    frequency : (n,) array_like of float
        Hz, > 0.

    Returns
    -------
    (n,) ndarray of float
        As a ratio, radiation into space only.

    Notes
    -----
    The same current as in `quality_factors`, its boresight power over its space wave [1]_
    (formula from memory). A quarter wave of substrate leaves it finite.

    References
    ----------
    .. [1] D. R. Jackson, "Microstrip antennas", in *Antenna Engineering Handbook*, 4th ed.,
       J. L. Volakis, Ed., McGraw-Hill, 2007, ch. 7.
    """
    frequencies = np.asarray(frequency, dtype=np.float64)
    depth = TWO_PI / SPEED_OF_LIGHT * sqrt(eps_r) * height * frequencies
    sine, cosine = np.sin(depth), np.cos(depth)
    substrate = eps_r * (sine / depth) ** 2 / (eps_r * cosine**2 + sine**2)
    spread = _size_factor(width, length, frequencies) * _substrate_factor(eps_r)
    return np.asarray(3.0 / spread * substrate)


def edge_resistance(width: float, length: float, frequency: float) -> float:
    """Resistance at the middle of a radiating edge, by radiation alone.

    Parameters
    ----------
    width, length : float
        Physical sides, m, > 0.
    frequency : float
        At which the mode resonates, Hz, > 0.

    Returns
    -------
    float
        Ohm.

    Notes
    -----
    Two slots with their mutual conductance, in air over a ground plane [1]_.

    References
    ----------
    .. [1] A. G. Derneryd, "A theoretical investigation of the rectangular microstrip antenna
       element", IEEE Trans. Antennas Propag., vol. 26, no. 4, pp. 532-535, July 1978; as
       C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eqs. 14-12, 14-17, 14-18a.
    """
    own, mutual = slot_conductances(width, length, frequency)
    return 1.0 / (2.0 * (own + mutual))


def _substrate_factor(eps_r: float) -> float:
    """Space wave of a horizontal dipole on a thin substrate, c1 of Jackson and Alexopoulos."""
    return 1.0 - 1.0 / eps_r + 0.4 / eps_r**2


def _size_factor(width: float, length: float, frequency: ArrayLike) -> Floats:
    """Power of the mode's current over that of a dipole with its moment, p of the same.

    The series is cut short: it is held above zero where sides over about 0.7 wavelength would
    take it below, and `trust` says there that it means nothing.
    """
    wavenumber = TWO_PI / SPEED_OF_LIGHT * np.asarray(frequency, dtype=np.float64)
    across, along = (wavenumber * width) ** 2, (wavenumber * length) ** 2
    series = (
        1.0
        + _A2 / 10.0 * across
        + (_A2**2 + 2.0 * _A4) * 3.0 / 560.0 * across**2
        + _C2 / 5.0 * along
        + _A2 * _C2 / 70.0 * across * along
    )
    return np.asarray(np.clip(series, _LEAST_FACTOR, 1.0))


def _surface_resistance(frequency: float, conductivity: float, roughness: float) -> float:
    """Resistance of a square of thick rough metal, ohm; Hammerstad and Jensen 1980, eq. 18."""
    if np.isinf(conductivity):
        return 0.0
    smooth = sqrt(pi * frequency * VACUUM_PERMEABILITY / conductivity)
    skin_depth = 1.0 / (conductivity * smooth)
    return float(smooth * (1.0 + 2.0 / pi * np.arctan(1.4 * (roughness / skin_depth) ** 2)))
