"""A length of cable that hangs from the coax's mouth behind the ground plate.

It is no part of a layout: nothing is cut by it. The field solver asks with it how much a
cable would change.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.constants import SPEED_OF_LIGHT
from core.errors import OutOfRangeError
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.layout.model import Layout

_THICKNESS: Final = 3e-3
"""Of a thin flexible coax, over its braid, m; common practice, no source."""
_OVER_PIN: Final = 1.5  # least thickness, in pin diameters
_LONGEST: Final = 4.0  # wavelengths
_LEAST_DROP: Final = 2.0  # thicknesses before a bend, and left after it


@dataclass(frozen=True)
class Tail:
    """The outside of a cable: straight back from the mouth, then perhaps along the plate.

    Attributes
    ----------
    length : float
        m.
    diameter : float
        Of the braid, m.
    drop : float or None
        Length before it bends to run along the plate, m; None for no bend.
    azimuth : float
        Where it runs to after the bend, from x towards y, rad.
    """

    length: float
    diameter: float
    drop: float | None = None
    azimuth: float = 0.0


def coax_tail(
    layout: Layout,
    length: float | None = None,
    diameter: float | None = None,
    drop: float | None = None,
    azimuth: float = 0.0,
) -> Tail:
    """Tail that can hang from a layout's coax.

    Parameters
    ----------
    layout : Layout
    length : float, optional
        m; half a wavelength at the brief's frequency if left out.
    diameter : float, optional
        m; 3 mm, or more where the pin asks for it, if left out.
    drop : float, optional
        Length before a bend, m; straight if left out.
    azimuth : float
        Of what follows the bend, rad.

    Returns
    -------
    Tail

    Raises
    ------
    OutOfRangeError
        If it is longer than four wavelengths or no longer than it is thick, hardly thicker
        than the pin, or bends too near to one of its ends.
    """
    wavelength = SPEED_OF_LIGHT / layout.frequency
    thinnest = _OVER_PIN * layout.ports[0].diameter
    thick = max(_THICKNESS, thinnest) if diameter is None else diameter
    long = wavelength / 2.0 if length is None else length
    _require(thick, "thickness", thinnest, wavelength / 10.0)
    _require(long, "length", thick, _LONGEST * wavelength)
    if drop is not None:
        _require(drop, "drop before the bend", _LEAST_DROP * thick, long - _LEAST_DROP * thick)
    return Tail(long, thick, drop, azimuth)


def _require(value: float, what: str, low: float, high: float) -> None:
    if not low <= value <= high:
        shown, least, most = (
            format_quantity(one, Quantity.LENGTH, digits=3) for one in (value, low, high)
        )
        allowed = f"{least} to {most}"
        raise OutOfRangeError(
            f"coax tail: its {what} of {shown} is out of range; accepted: {allowed}",
            field="tail",
            value=value,
            allowed=allowed,
        )
