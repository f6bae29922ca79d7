"""What something added to an antenna changes of what it does, in numbers and in words."""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite, nan, pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.design.polarisation import Polarisation
from core.response.polarisation import intended_power
from core.response.sphere import beam, field_at
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.response.model import FarSphere, Response, Samples

    Floats = NDArray[np.float64]

_STRONG: Final = 0.1  # of the largest gain, down to which a change of the pattern counts
_STEP: Final = pi / 36.0
_TOO_LINEAR: Final = 60.0  # dB


@dataclass(frozen=True)
class Change:
    """How much one response at the brief's frequency differs from another.

    Attributes
    ----------
    s11 : float
        Size of the difference of the reflection coefficients.
    vswr, axial_ratio_db, gain_db : float
        The other's less the one's; not a number where one of them is infinite, and for the
        axial ratio where they turn opposite ways.
    pattern_db : float or None
        Largest change of the total gain in a direction where it is within 10 dB of the
        largest; None without a far field over the sphere.
    """

    s11: float
    vswr: float
    axial_ratio_db: float
    gain_db: float
    pattern_db: float | None


def change(one: Response, other: Response, polarisation: Polarisation) -> Change:
    """Compare two responses at the brief's frequency.

    Parameters
    ----------
    one, other : Response
        At the same frequency.
    polarisation : Polarisation
        Whose gain is compared.

    Returns
    -------
    Change
    """
    here, there = one.spot, other.spot
    pattern = None
    if one.sphere is not None and other.sphere is not None:
        pattern = _pattern_change(one.sphere, other.sphere)
    return Change(
        s11=abs(complex(there.s11) - complex(here.s11)),
        vswr=_less(there.vswr, here.vswr),
        axial_ratio_db=_less(there.axial_ratio_db, here.axial_ratio_db)
        if _turns_alike(here, there)
        else nan,
        gain_db=10.0
        * float(
            np.log10(
                intended_power(there.e_x, there.e_y, polarisation)
                / intended_power(here.e_x, here.e_y, polarisation)
            )
        ),
        pattern_db=pattern,
    )


def change_text(one: Response, other: Response, polarisation: Polarisation) -> str:
    """Tell what changes from one response to another at the brief's frequency.

    Parameters
    ----------
    one, other : Response
        Before and after.
    polarisation : Polarisation
        Asked for.

    Returns
    -------
    str
        One sentence on match, axial ratio, gain and pattern.
    """
    moved = change(one, other, polarisation)
    here, there = one.spot, other.spot
    parts = [f"VSWR {float(here.vswr):.2f} to {float(there.vswr):.2f}"]
    if polarisation is not Polarisation.LINEAR:
        parts.append(
            f"axial ratio {_ratio(here.axial_ratio_db)} to {_ratio(there.axial_ratio_db)} dB"
        )
    gains = (float(spot.gain_dbi(polarisation)) for spot in (here, there))
    parts.append("gain {:.1f} to {:.1f} dBi".format(*gains))
    if moved.pattern_db is not None:
        parts.append(f"pattern by up to {moved.pattern_db:.1f} dB")
    return f"{', '.join(parts)}."


def change_details(one: Response, other: Response, polarisation: Polarisation) -> str:
    """Tell what else changes from one response to another at the brief's frequency.

    Parameters
    ----------
    one, other : Response
        Before and after.
    polarisation : Polarisation
        Asked for.

    Returns
    -------
    str
        One sentence on reflection, beam and what goes backwards.
    """
    parts = [f"S11 moves by {change(one, other, polarisation).s11:.3f}"]
    if one.sphere is not None and other.sphere is not None:
        tilts = (beam(sphere, polarisation).tilt for sphere in (one.sphere, other.sphere))
        tilt_texts = (format_quantity(tilt, Quantity.ANGLE, digits=2) for tilt in tilts)
        parts.append("beam {} to {} from straight ahead".format(*tilt_texts))
    if one.front_to_back and other.front_to_back:
        levels = (10.0 * np.log10(each) for each in (one.front_to_back, other.front_to_back))
        parts.append("front to back {:.1f} to {:.1f} dB".format(*levels))
    return f"{', '.join(parts)}."


def _ratio(value: Floats) -> str:
    return f"{float(value):.2f}" if value < _TOO_LINEAR else "over 60"


def _less(one: Floats, other: Floats) -> float:
    return float(one) - float(other) if isfinite(one) and isfinite(other) else nan


def _turns_alike(one: Samples, other: Samples) -> bool:
    turns = (float(np.imag(spot.e_x * np.conj(spot.e_y))) for spot in (one, other))
    return float(np.prod(list(turns))) > 0.0


def _pattern_change(one: FarSphere, other: FarSphere) -> float:
    angles = np.arange(0.0, min(one.theta[-1], other.theta[-1]) + _STEP / 2.0, _STEP)
    azimuths = np.arange(0.0, 2.0 * pi - _STEP / 2.0, _STEP)
    theta, phi = np.repeat(angles, len(azimuths)), np.tile(azimuths, len(angles))
    gains = []
    for sphere in (one, other):
        e_theta, e_phi = field_at(sphere, np.minimum(theta, sphere.theta[-1]), phi)
        gains.append(np.abs(e_theta) ** 2 + np.abs(e_phi) ** 2)
    strong = np.maximum(*gains) > _STRONG * max(gain.max() for gain in gains)
    return float(np.abs(10.0 * np.log10(gains[1][strong] / gains[0][strong])).max())
