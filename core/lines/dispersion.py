"""How the effective permittivity and impedance of a microstrip rise with frequency.

Shapes: n frequencies. The formulas take the normalised frequency f h in GHz mm, as printed.
"""

from __future__ import annotations

from math import exp

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]


def dispersed_permittivity(
    width_ratio: float, eps_r: float, eps_eff: float, frequency_ghz_mm: FloatArray
) -> FloatArray:
    """Effective permittivity at each frequency.

    Parameters
    ----------
    width_ratio : float
        Strip width over substrate height, 0.1 to 100.
    eps_r : float
        Substrate, 1 to 20.
    eps_eff : float
        Effective permittivity at low frequency.
    frequency_ghz_mm : (n,) ndarray of float
        Frequency times substrate height, GHz mm, up to 39 (height 0.13 wavelength).

    Returns
    -------
    (n,) ndarray of float
        Between `eps_eff` and `eps_r`; stated error 0.6 % in the ranges above.

    References
    ----------
    M. Kirschning and R. H. Jansen, "Accurate model for effective dielectric constant of
    microstrip with validity up to millimetre-wave frequencies", Electronics Letters, vol. 18,
    no. 6, pp. 272-273, Mar. 1982.
    """
    u, fn = width_ratio, frequency_ghz_mm
    p1 = 0.27488 + (0.6315 + 0.525 / (1.0 + 0.0157 * fn) ** 20) * u - 0.065683 * exp(-8.7513 * u)
    p2 = 0.33622 * (1.0 - exp(-0.03442 * eps_r))
    p3 = 0.0363 * exp(-4.6 * u) * (1.0 - np.exp(-((fn / 38.7) ** 4.97)))
    p4 = 1.0 + 2.751 * (1.0 - exp(-((eps_r / 15.916) ** 8)))
    rise = p1 * p2 * ((0.1844 + p3 * p4) * fn) ** 1.5763
    dispersed: FloatArray = eps_r - (eps_r - eps_eff) / (1.0 + rise)
    return dispersed


def impedance_rise(
    width_ratio: float,
    eps_r: float,
    eps_eff: float,
    dispersed_eps_eff: FloatArray,
    frequency_ghz_mm: FloatArray,
) -> FloatArray:
    """Characteristic impedance (power and current) over its value at low frequency.

    Parameters
    ----------
    width_ratio : float
        Strip width over substrate height, 0.1 to 100.
    eps_r : float
        Substrate, 1 to 20.
    eps_eff : float
        Effective permittivity at low frequency.
    dispersed_eps_eff : (n,) ndarray of float
        The same at each frequency.
    frequency_ghz_mm : (n,) ndarray of float
        Frequency times substrate height, GHz mm, up to 39.

    Returns
    -------
    (n,) ndarray of float
        1 at low frequency.

    References
    ----------
    R. H. Jansen and M. Kirschning, "Arguments and an accurate model for the power-current
    formulation of microstrip characteristic impedance", Archiv fuer Elektronik und
    Uebertragungstechnik, vol. 37, pp. 108-112, 1983.
    """
    u, fn = width_ratio, frequency_ghz_mm
    r1 = min(0.03891 * eps_r**1.4, 20.0)
    r2 = min(0.2671 * u**7, 20.0)
    r3 = 4.766 * exp(-3.228 * u**0.641)
    r4 = 0.016 + (0.0514 * eps_r) ** 4.524
    r5 = (fn / 28.843) ** 12
    r6 = min(22.20 * u**1.92, 20.0)
    r7 = 1.206 - 0.3144 * exp(-r1) * (1.0 - exp(-r2))
    r8 = 1.0 + 1.275 * (1.0 - np.exp(-0.004625 * r3 * eps_r**1.674 * (fn / 18.365) ** 2.745))
    excess = (eps_r - 1.0) ** 6
    scale = 5.086 * r4 / (0.3838 + 0.386 * r4) * exp(-r6) * excess / (1.0 + 10.0 * excess)
    r9 = scale * r5 / (1.0 + 1.2992 * r5)
    r10 = 0.00044 * eps_r**2.136 + 0.0184
    sixth = (fn / 19.47) ** 6
    r11 = sixth / (1.0 + 0.0962 * sixth)
    r12 = 1.0 / (1.0 + 0.00245 * u**2)
    r13 = 0.9408 * dispersed_eps_eff**r8 - 0.9603
    r14 = (0.9408 - r9) * eps_eff**r8 - 0.9603
    r15 = 0.707 * r10 * (fn / 12.3) ** 1.097
    r16 = 1.0 + 0.0503 * eps_r**2 * r11 * (1.0 - exp(-((u / 15.0) ** 6)))
    r17 = r7 * (1.0 - 1.1241 * r12 / r16 * np.exp(-0.026 * fn**1.15656 - r15))
    rise: FloatArray = (r13 / r14) ** r17
    return rise
