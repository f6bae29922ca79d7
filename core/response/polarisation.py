"""Polarisation of a wave from its two complex components.

Time factor exp(+j omega t); the wave travels along +z; x, y, z is a right-handed frame.
Arrays of components may have any shape, called (...,) below.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from core.design.polarisation import Polarisation

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

LINEAR_FROM_DB: Final = 15.0
"""Axial ratio above which a wave has no sense worth naming, dB."""


def circular_components(e_x: ArrayLike, e_y: ArrayLike) -> tuple[Complexes, Complexes]:
    """Right-hand and left-hand circular components.

    Parameters
    ----------
    e_x, e_y : (...,) array_like of complex
        Components along x and y.

    Returns
    -------
    right, left : (...,) ndarray of complex
        So scaled that |right|² + |left|² = |e_x|² + |e_y|².

    Notes
    -----
    Seen along the direction of propagation the field of a right-hand wave turns clockwise
    [1]_: x first, y a quarter period later, E_y = -j E_x.

    References
    ----------
    .. [1] IEEE Std 145-2013, *Definitions of Terms for Antennas*, "right-hand polarized wave".
    """
    x, y = np.asarray(e_x, dtype=complex), np.asarray(e_y, dtype=complex)
    return (x + 1j * y) / np.sqrt(2.0), (x - 1j * y) / np.sqrt(2.0)


def axial_ratio_db(e_x: ArrayLike, e_y: ArrayLike) -> Floats:
    """Axial ratio of the polarisation ellipse in decibels.

    Parameters
    ----------
    e_x, e_y : (...,) array_like of complex
        Components along x and y, any common scale.

    Returns
    -------
    (...,) ndarray of float
        dB, >= 0; infinite for a linear wave, not a number where both components vanish.

    Notes
    -----
    (|R| + |L|) / ||R| - |L|| [1]_. The difference is taken from |R|² - |L|² =
    2 Im(E_x E_y*), which keeps its digits near linear, where the amplitudes are alike.

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, sec. 2.12.
    """
    x, y = np.asarray(e_x, dtype=complex), np.asarray(e_y, dtype=complex)
    right, left = circular_components(x, y)
    total = np.abs(right) + np.abs(left)
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = total / (2.0 * np.abs(np.imag(x * np.conj(y))) / total)
    return np.asarray(20.0 * np.log10(np.maximum(ratio, 1.0)))


def sense(e_x: complex, e_y: complex, intended: Polarisation) -> Polarisation | None:
    """Say in a word how a wave is polarised.

    Parameters
    ----------
    e_x, e_y : complex
        Components along x and y.
    intended : Polarisation
        What was asked for.

    Returns
    -------
    Polarisation or None
        The sense of rotation up to 15 dB of axial ratio. Above that LINEAR if that was asked
        for, else None: a spoilt circular wave is not a linear antenna.
    """
    if not axial_ratio_db(e_x, e_y) <= LINEAR_FROM_DB:
        return Polarisation.LINEAR if intended is Polarisation.LINEAR else None
    right, left = circular_components(e_x, e_y)
    return Polarisation.RHCP if abs(right) > abs(left) else Polarisation.LHCP


def intended_power(e_x: ArrayLike, e_y: ArrayLike, intended: Polarisation) -> Floats:
    """Part of |e_x|² + |e_y|² that a matched antenna of the intended polarisation receives.

    Parameters
    ----------
    e_x, e_y : (...,) array_like of complex
        Components along x and y.
    intended : Polarisation
        Circular of one sense, or linear: then along the major axis of the polarisation
        ellipse, which is what a linear antenna turned for most signal receives.

    Returns
    -------
    (...,) ndarray of float
        In the unit of |e_x|².
    """
    right, left = circular_components(e_x, e_y)
    if intended is Polarisation.RHCP:
        return np.asarray(np.abs(right) ** 2)
    if intended is Polarisation.LHCP:
        return np.asarray(np.abs(left) ** 2)
    return np.asarray((np.abs(right) + np.abs(left)) ** 2 / 2.0)
