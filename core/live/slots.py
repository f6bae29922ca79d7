"""Two radiating slots over a ground plane: what each radiates alone and together."""

from __future__ import annotations

from math import pi
from typing import Final

import numpy as np
from numpy.polynomial.legendre import leggauss
from scipy.special import j0

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI

_QUADRATURE_POINTS: Final = 48  # 1e-12 of the integrals up to two wavelengths of width
_NODES, _WEIGHTS = leggauss(_QUADRATURE_POINTS)


def slot_conductances(width: float, spacing: float, frequency: float) -> tuple[float, float]:
    """Conductance of one radiating slot, and the mutual conductance of two.

    Parameters
    ----------
    width : float
        Of each slot, m, > 0.
    spacing : float
        Between the slots, m, > 0.
    frequency : float
        Hz, > 0.

    Returns
    -------
    own, mutual : float
        S.

    Notes
    -----
    Gauss-Legendre quadrature of the integrals as printed [1]_, with 120 pi ohm for the
    impedance of free space replaced by its value.

    References
    ----------
    .. [1] C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, eqs. 14-12 and 14-18a.
    """
    wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
    # From 0 to pi/2, twice: the integrands are even about the middle.
    theta = (_NODES + 1.0) * pi / 4.0
    half = wavenumber * width / 2.0
    power = (half * np.sinc(half / pi * np.cos(theta))) ** 2 * np.sin(theta) ** 3
    weights = _WEIGHTS * pi / 4.0 * 2.0 / (pi * FREE_SPACE_IMPEDANCE)
    own = weights @ power
    mutual = weights @ (power * j0(wavenumber * spacing * np.sin(theta)))
    return float(own), float(mutual)
