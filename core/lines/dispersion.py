"""How the effective permittivity and the impedance of a microstrip rise with frequency.

Shapes: n frequencies. The published formulas take frequency times height in GHz mm.
"""

from __future__ import annotations

from math import exp
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from core.lines.quasi_static import StaticLine, static_line

Some = TypeVar("Some", float, NDArray[np.float64])

_LIGHTEST = 1.3  # below this permittivity the impedance formula nears a pole, see docs
_GHZ_MM = 1e6  # m/s


def dispersed_permittivity(line: StaticLine, frequency_height: Some) -> Some:
    """Effective permittivity at each frequency, or at one.

    Parameters
    ----------
    line : StaticLine
        Width ratio 0.1 to 100, permittivity 1 to 20.
    frequency_height : (n,) ndarray of float, or float
        Frequency times height of the substrate, Hz m, up to 39e6 (0.13 wavelength).

    Returns
    -------
    (n,) ndarray of float, or float
        From the value at low frequency towards the permittivity of the substrate.

    Notes
    -----
    Equations as printed in [1]_; stated error 0.6 % in the ranges above.

    References
    ----------
    .. [1] M. Kirschning and R. H. Jansen, "Accurate model for effective dielectric constant
       of microstrip with validity up to millimetre-wave frequencies", Electronics Letters,
       vol. 18, no. 6, pp. 272-273, Mar. 1982.
    """
    u, eps_r = line.effective_width_ratio, line.eps_r
    fn = frequency_height / _GHZ_MM
    p1 = 0.27488 + (0.6315 + 0.525 / (1.0 + 0.0157 * fn) ** 20) * u - 0.065683 * exp(-8.7513 * u)
    p2 = 0.33622 * (1.0 - exp(-0.03442 * eps_r))
    p3 = 0.0363 * exp(-4.6 * u) * (1.0 - np.exp(-((fn / 38.7) ** 4.97)))
    p4 = 1.0 + 2.751 * (1.0 - exp(-((eps_r / 15.916) ** 8)))
    p = p1 * p2 * ((0.1844 + p3 * p4) * fn) ** 1.5763
    dispersed: Some = eps_r - (eps_r - line.eps_eff) / (1.0 + p)
    return dispersed


def dispersed_impedance(
    line: StaticLine, eps_eff: NDArray[np.float64], frequency_height: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Characteristic impedance by power and current at each frequency.

    Parameters
    ----------
    line : StaticLine
        Width ratio 0.1 to 100, permittivity 1 to 20.
    eps_eff : (n,) ndarray of float
        Its `dispersed_permittivity`.
    frequency_height : (n,) ndarray of float
        Frequency times height of the substrate, Hz m, up to 39e6.

    Returns
    -------
    (n,) ndarray of float
        ohm.

    Notes
    -----
    The published rise [1]_ holds a pole where the effective permittivity is near 1.02, which
    is where foam and card lie. A line in air has no dispersion at all, so below a
    permittivity of 1.3 the logarithm of the rise is taken as proportional to the
    permittivity less one. Against a full-wave solution this stays within 1.5 % up to 39 GHz mm,
    where the formula used as printed is up to 30 % off (docs/models/lines.md).

    References
    ----------
    .. [1] R. H. Jansen and M. Kirschning, "Arguments and an accurate model for the
       power-current formulation of microstrip characteristic impedance", Archiv fuer
       Elektronik und Uebertragungstechnik, vol. 37, pp. 108-112, 1983.
    """
    if line.eps_r >= _LIGHTEST:
        return line.impedance * _impedance_rise(line, eps_eff, frequency_height / _GHZ_MM)
    denser = static_line(line.width_ratio, _LIGHTEST, line.thickness_ratio)
    denser_eps_eff = dispersed_permittivity(denser, frequency_height)
    rise = _impedance_rise(denser, denser_eps_eff, frequency_height / _GHZ_MM)
    share = (line.eps_r - 1.0) / (_LIGHTEST - 1.0)
    dispersed: NDArray[np.float64] = line.impedance * rise**share
    return dispersed


def _impedance_rise(
    line: StaticLine, eps_eff: NDArray[np.float64], fn: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Impedance over its value at low frequency, as printed by Jansen and Kirschning 1983."""
    u, eps_r = line.effective_width_ratio, line.eps_r
    r1 = min(0.03891 * eps_r**1.4, 20.0)
    r2 = min(0.2671 * u**7, 20.0)
    r3 = 4.766 * exp(-3.228 * u**0.641)
    r4 = 0.016 + (0.0514 * eps_r) ** 4.524
    r5 = (fn / 28.843) ** 12
    r6 = min(22.20 * u**1.92, 20.0)
    r7 = 1.206 - 0.3144 * exp(-r1) * (1.0 - exp(-r2))
    r8 = 1.0 + 1.275 * (1.0 - np.exp(-0.004625 * r3 * eps_r**1.674 * (fn / 18.365) ** 2.745))
    sixth_power = (eps_r - 1.0) ** 6
    r9_scale = 5.086 * r4 * exp(-r6) * sixth_power / (1.0 + 10.0 * sixth_power)
    r9 = r9_scale * r5 / ((0.3838 + 0.386 * r4) * (1.0 + 1.2992 * r5))
    r10 = 0.00044 * eps_r**2.136 + 0.0184
    fn_sixth = (fn / 19.47) ** 6
    r11 = fn_sixth / (1.0 + 0.0962 * fn_sixth)
    r12 = 1.0 / (1.0 + 0.00245 * u**2)
    r13 = 0.9408 * eps_eff**r8 - 0.9603
    r14 = (0.9408 - r9) * line.eps_eff**r8 - 0.9603
    r15 = 0.707 * r10 * (fn / 12.3) ** 1.097
    r16 = 1.0 + 0.0503 * eps_r**2 * r11 * (1.0 - exp(-((u / 15.0) ** 6)))
    r17 = r7 * (1.0 - 1.1241 * r12 / r16 * np.exp(-0.026 * fn**1.15656 - r15))
    rise: NDArray[np.float64] = (r13 / r14) ** r17
    return rise
