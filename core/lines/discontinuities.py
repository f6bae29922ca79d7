"""Where a strip ends, turns, branches or meets a pin.

Every formula is quasi-static or fitted at low frequency. The docstrings say where it was
published to hold; docs/models/lines.md says how far it was found off elsewhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import atan, exp, hypot, log, sqrt

from core.constants import FREE_SPACE_IMPEDANCE, TWO_PI, VACUUM_PERMEABILITY


def open_end_extension_kirschning(
    width: float, height: float, eps_r: float, eps_eff: float
) -> float:
    """Apparent lengthening of a strip at an open end.

    Parameters
    ----------
    width, height : float
        Of the strip and of the substrate, m, > 0.
    eps_r : float
        Substrate, >= 1.
    eps_eff : float
        Effective permittivity of the strip, 1 to `eps_r`.

    Returns
    -------
    float
        m.

    Notes
    -----
    Stated to 2.5 % for width 0.01 to 100 heights and permittivity up to 50 [1]_ (coefficients
    and range from memory). An electrostatic solution lies 4 to 8 % above it for permittivity
    2.2 to 9.6 and 10 % above it in air.

    References
    ----------
    .. [1] M. Kirschning, R. H. Jansen and N. H. L. Koster, "Accurate model for open end effect
       of microstrip lines", Electronics Letters, vol. 17, no. 3, pp. 123-125, Feb. 1981.
    """
    u = width / height
    power = eps_eff**0.81
    xi1 = 0.434907 * (power + 0.26) / (power - 0.189) * (u**0.8544 + 0.236) / (u**0.8544 + 0.87)
    xi2 = 1.0 + u**0.371 / (2.358 * eps_r + 1.0)
    xi3 = 1.0 + 0.5274 * atan(0.084 * u ** (1.9413 / xi2)) / eps_eff**0.9236
    xi4 = 1.0 + 0.0377 * atan(0.067 * u**1.456) * (6.0 - 5.0 * exp(0.036 * (1.0 - eps_r)))
    xi5 = 1.0 - 0.218 * exp(-7.5 * u)
    return float(height * xi1 * xi3 * xi5 / xi4)


@dataclass(frozen=True)
class BendCircuit:
    """A right-angle bend as a tee between the two edges where the strips enter its corner.

    Attributes
    ----------
    arm_inductance : float
        In series on either side, H; negative where the current cuts the corner.
    capacitance : float
        Across the middle, F.
    """

    arm_inductance: float
    capacitance: float


def square_bend(width: float, height: float, eps_r: float) -> BendCircuit:
    """Right-angle bend with its whole corner.

    Parameters
    ----------
    width, height : float
        Of the strip and of the substrate, m, > 0.
    eps_r : float
        Substrate, >= 1.

    Returns
    -------
    BendCircuit

    Notes
    -----
    Fitted for width 0.2 to 6 heights, permittivity 2.36 to 10.4 and frequency times height up
    to 12 GHz mm [1]_ (coefficients and range from memory). In that range an electrostatic
    solution agrees on the capacitance within 10 %.

    References
    ----------
    .. [1] M. Kirschning, R. H. Jansen and N. H. L. Koster, "Measurement and computer-aided
       modeling of microstrip discontinuities by an improved resonator method", IEEE MTT-S
       Int. Microwave Symp. Digest, pp. 495-497, 1983.
    """
    u = width / height
    return BendCircuit(
        arm_inductance=220e-9 * height * (1.0 - 1.35 * exp(-0.18 * u**1.39)),
        capacitance=1e-12 * width * ((10.35 * eps_r + 2.5) * u + 2.6 * eps_r + 5.64),
    )


def mitred_bend(width: float, height: float, eps_r: float) -> BendCircuit:
    """Right-angle bend with half of the corner's diagonal cut away.

    Parameters
    ----------
    width, height : float
        Of the strip and of the substrate, m, > 0.
    eps_r : float
        Substrate, >= 1.

    Returns
    -------
    BendCircuit

    Notes
    -----
    Source and range as for `square_bend`, from memory. An electrostatic solution agrees on the
    capacitance within 3 % at 4 heights, 14 % at 2; at 1 height the formula is 40 % high.
    """
    u = width / height
    return BendCircuit(
        arm_inductance=440e-9 * height * (1.0 - 1.062 * exp(-0.177 * u**0.947)),
        capacitance=1e-12 * width * ((3.93 * eps_r + 0.62) * u + 7.6 * eps_r + 3.80),
    )


@dataclass(frozen=True)
class TeePlanes:
    """Where the three strips of a tee begin electrically.

    Attributes
    ----------
    through_a, through_b : float
        For the two arms in line, from the centre line of the side arm, m.
    side : float
        For the side arm, from the centre line of the other two, m.
    """

    through_a: float
    through_b: float
    side: float


def tee_planes(
    height: float,
    through_a: tuple[float, float],
    through_b: tuple[float, float],
    side: tuple[float, float],
) -> TeePlanes:
    """Reference planes of a tee at low frequency.

    Parameters
    ----------
    height : float
        Of the substrate, m, > 0.
    through_a, through_b, side : tuple of float
        Characteristic impedance, ohm, and effective permittivity of each strip.

    Returns
    -------
    TeePlanes

    Notes
    -----
    Low-frequency part of [1]_, from memory; the parts that grow with frequency are left out,
    since they hold only far below the first cross resonance of the arms, impedance over
    twice the vacuum permeability times height. For equal strips an electrostatic solution
    finds the charge that the planes take off within 14 % for permittivity 2.2 to 9.6 and
    up to 30 % more in air; beside a side arm a third as wide it finds up to half as much
    again.

    References
    ----------
    .. [1] E. Hammerstad, "Computer-aided design of microstrip couplers with accurate
       discontinuity models", IEEE MTT-S Int. Microwave Symp. Digest, pp. 54-56, 1981.
    """
    side_width = _parallel_plate_width(height, *side)
    ratio = sqrt(through_a[0] * through_b[0]) / side[0]
    through_width = sqrt(
        _parallel_plate_width(height, *through_a) * _parallel_plate_width(height, *through_b)
    )
    factor = 0.5 - ratio * (0.05 + 0.7 * exp(-1.6 * ratio) - 0.17 * log(ratio))
    return TeePlanes(
        through_a=0.055 * side_width * through_a[0] / side[0],
        through_b=0.055 * side_width * through_b[0] / side[0],
        side=through_width * factor,
    )


def _parallel_plate_width(height: float, impedance: float, eps_eff: float) -> float:
    """Width of the ideal parallel plate with the line's impedance and permittivity."""
    return FREE_SPACE_IMPEDANCE * height / (impedance * sqrt(eps_eff))


def pin_inductance(radius: float, height: float) -> float:
    """Inductance of a round pin from a strip through the spacer to the ground plane.

    Parameters
    ----------
    radius, height : float
        Of the pin and of the spacer, m, > 0.

    Returns
    -------
    float
        H.

    Notes
    -----
    Stated for a height under 0.03 wavelength [1]_ (from memory).

    References
    ----------
    .. [1] M. E. Goldfarb and R. A. Pucel, "Modeling via hole grounds in microstrip", IEEE
       Microwave and Guided Wave Letters, vol. 1, no. 6, pp. 135-137, June 1991.
    """
    slant = hypot(radius, height)
    return (
        VACUUM_PERMEABILITY
        / TWO_PI
        * (height * log((height + slant) / radius) + 1.5 * (radius - slant))
    )
