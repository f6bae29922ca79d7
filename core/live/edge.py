"""How far the field fringes at the open edges of a wide element on a thin spacer."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import asinh, e, log, pi
from typing import TYPE_CHECKING, Final

import numpy as np
from numpy.polynomial.legendre import leggauss

from core.constants import SPEED_OF_LIGHT, TWO_PI

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]

_NODES, _WEIGHTS = leggauss(24)  # 1e-6 of the integrals up to a wavelength of width
_TERMS: Final = 200
_AVERAGED: Final = 12  # times that neighbouring partial sums are averaged: 1e-12 of the sum


@dataclass(frozen=True, eq=False)
class EdgePair:
    """Two open edges of an element, half a wave apart; see `edge_pair`.

    Attributes
    ----------
    scale : float
        Height over pi, times what the line under the element holds less for its own fringing, m.
    eps_r : float
    still : float
        Part that does not change with frequency, in `scale`.
    distances, weights : (n,) ndarray of float
        Between points of the edges, m, and their weights.
    """

    scale: float
    eps_r: float
    still: float
    distances: Floats
    weights: Floats

    def extension(self, frequency: float) -> float:
        """Apparent lengthening at each edge, m.

        Parameters
        ----------
        frequency : float
            Hz.

        Returns
        -------
        float
        """
        phases = np.cos(TWO_PI / SPEED_OF_LIGHT * frequency * self.distances)
        return self.scale * (float(self.weights @ phases) / self.eps_r + self.still)


def edge_pair(width: float, spacing: float, height: float, eps_r: float, line: float) -> EdgePair:
    """Two open edges of an element on a thin spacer.

    Parameters
    ----------
    width : float
        Of each edge, m, > 0.
    spacing : float
        Between the edges, m, > 0.
    height : float
        Of the spacer, m, > 0, well under a tenth of a wavelength.
    eps_r : float
        Of the spacer, >= 1.
    line : float
        Capacitance per length of the strip between the edges over that of its area alone, >= 1.

    Returns
    -------
    EdgePair

    Notes
    -----
    One endless edge has the extension h/pi ((1 - ln(k0 h) - gamma)/er + ln 2pi - 2 Q0(-d)),
    d = (er - 1)/(er + 1), Q0(z) the sum of z^m ln m [1]_ (from memory; in air it is the open
    parallel plate of [2]_, at a high permittivity ln 4/pi). What of it depends on frequency is
    the reaction of an even magnetic current in air on itself, at a distance of h/(pi e): here it
    is taken over an edge of finite width, and with the other edge, by the kernel cos(k0 R)/R.

    References
    ----------
    .. [1] E. F. Kuester, R. T. Johnk and D. C. Chang, "The thin-substrate approximation for
       reflection from the end of a slab-loaded parallel-plate waveguide with application to
       microstrip patch antennas", IEEE Trans. Antennas Propag., vol. 30, no. 5, pp. 910-917,
       Sept. 1982.
    .. [2] N. Marcuvitz, *Waveguide Handbook*, McGraw-Hill, 1951, sec. 4.6 (from memory).
    """
    near = height / (pi * e)
    # u = near sinh t takes the peak at the middle out of the integral.
    reach = asinh(width / near)
    own = near * np.sinh((_NODES + 1.0) * reach / 2.0)
    across = (_NODES + 1.0) * width / 2.0
    apart = np.hypot(across, spacing)
    return EdgePair(
        scale=height / (pi * line),
        eps_r=eps_r,
        still=log(TWO_PI) * (1.0 - 1.0 / eps_r) - 2.0 * _q0((eps_r - 1.0) / (eps_r + 1.0)),
        distances=np.concatenate([np.hypot(own, near), apart]),
        weights=np.concatenate(
            [
                _WEIGHTS * reach / 2.0 * (1.0 - own / width),
                _WEIGHTS * width / 2.0 * (1.0 - across / width) / apart,
            ]
        ),
    )


@lru_cache(maxsize=64)
def _q0(size: float) -> float:
    """Sum of (-size)^m ln m over m from 1 up, size 0 to 1; Euler's averages of partial sums."""
    orders = np.arange(1.0, _TERMS)
    sums = np.cumsum((-size) ** orders * np.log(orders))
    for _ in range(_AVERAGED):
        sums = (sums[1:] + sums[:-1]) / 2.0
    return float(sums[-1])
