"""Pattern cuts of the two modes as pairs of slots over an infinite ground plane."""

from __future__ import annotations

from math import cos, pi, sin
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.response.model import PatternCut

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer
    from core.live.modes import ElementModes, SideMode

    Floats = NDArray[np.float64]

_ANGLES: Final = 181  # one a degree
_MOST_AIR_LIKE: Final = 1.5  # permittivity up to which the field solver has small plates
_PLATE_LOSS_DB: Final = 1.4  # fitted, as the next: 0.3 dB rms are left
_PLATE_REACH: Final = 0.3  # wavelengths


def slot_cuts(
    element: ElementModes, e_x: complex, e_y: complex, frequency: float
) -> tuple[PatternCut, PatternCut]:
    """Far field in the planes of x and y.

    Parameters
    ----------
    element : ElementModes
    e_x, e_y : complex
        Field at boresight, in the scale of `Samples`.
    frequency : float
        Hz.

    Returns
    -------
    tuple of PatternCut
        phi = 0 and 90 degrees, from horizon to horizon.

    Notes
    -----
    Each slot an even magnetic current as long as the other side and as wide as the element
    is high, doubled by the ground [1]_; a mode's two slots stand an effective length apart.

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eqs. 14-40 to 14-44.
    """
    theta = np.linspace(-pi / 2.0, pi / 2.0, _ANGLES)
    sine, cosine = np.sin(theta), np.cos(theta)
    wavenumber, height = TWO_PI * frequency / SPEED_OF_LIGHT, element.substrate.thickness
    cuts = []
    for phi in (0.0, pi / 2.0):
        along_x, along_y = wavenumber * cos(phi) * sine, wavenumber * sin(phi) * sine
        x_mode = e_x * _slot_pair(along_x, along_y, element.x, height)
        y_mode = e_y * _slot_pair(along_y, along_x, element.y, height)
        e_theta = x_mode * cos(phi) + y_mode * sin(phi)
        e_phi = cosine * (y_mode * cos(phi) - x_mode * sin(phi))
        cuts.append(PatternCut(phi, theta, e_theta, e_phi))
    return cuts[0], cuts[1]


def plate_share(reach: float, substrate: Layer, frequencies: Floats) -> Floats:
    """Directivity at boresight over a small ground plate, over that over an endless one.

    Parameters
    ----------
    reach : float
        Of the plate beyond the element, m.
    substrate : Layer
        On a board the plate is not known to matter: 1.
    frequencies : (n,) ndarray of float
        Hz.

    Returns
    -------
    (n,) ndarray of float
        0.72 to 1.

    Notes
    -----
    Fitted to the field solver over air-like spacers, there being no published closed form:
    1.4 dB less for a plate that ends with the element, less and less up to 0.3 wavelength
    beyond it (docs/live-errors.md).
    """
    if substrate.eps_r > _MOST_AIR_LIKE:
        return np.ones_like(frequencies)
    missing = 1.0 - reach * frequencies / SPEED_OF_LIGHT / _PLATE_REACH
    return np.asarray(10.0 ** (-0.1 * _PLATE_LOSS_DB * np.clip(missing, 0.0, 1.0)))


def _slot_pair(across: Floats, along: Floats, mode: SideMode, height: float) -> Floats:
    """Space factor; `across` and `along` the slots, wavenumber times direction cosine, 1/m."""
    own = np.sinc(across * height / TWO_PI) * np.sinc(along * mode.width / TWO_PI)
    return np.asarray(own * np.cos(across * mode.effective_length / 2.0))
