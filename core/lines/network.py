"""Two-ports in cascade: the strips of a branch, its bends and its pin, over frequency.

Shapes: n frequencies. Chain (ABCD) parameters, port currents into the first port and out of
the second.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import reduce

import numpy as np
from numpy.typing import NDArray

from core.lines.microstrip import LineProperties

ComplexArray = NDArray[np.complex128]


@dataclass(frozen=True, eq=False)
class TwoPort:
    """Chain parameters at each frequency; a number stands for the same at all of them.

    Attributes
    ----------
    a, d : (n,) ndarray of complex or complex
        Voltage and current ratios.
    b : (n,) ndarray of complex or complex
        ohm.
    c : (n,) ndarray of complex or complex
        S.
    """

    a: ComplexArray | complex
    b: ComplexArray | complex
    c: ComplexArray | complex
    d: ComplexArray | complex


def line_two_port(line: LineProperties, length: float) -> TwoPort:
    """Length of line.

    Parameters
    ----------
    line : LineProperties
        At n frequencies.
    length : float
        m; a negative length takes line away, as a shifted reference plane does.

    Returns
    -------
    TwoPort

    Notes
    -----
    The characteristic impedance is taken as real.
    """
    grow: ComplexArray = np.exp(line.propagation_constant * length)
    cosh: ComplexArray = 0.5 * (grow + 1.0 / grow)
    sinh: ComplexArray = 0.5 * (grow - 1.0 / grow)
    impedance = line.characteristic_impedance
    return TwoPort(cosh, impedance * sinh, sinh / impedance, cosh)


def series_two_port(impedance: ComplexArray) -> TwoPort:
    """Impedance in series.

    Parameters
    ----------
    impedance : (n,) ndarray of complex
        ohm.

    Returns
    -------
    TwoPort
    """
    return TwoPort(1.0, impedance, 0.0, 1.0)


def shunt_two_port(admittance: ComplexArray) -> TwoPort:
    """Admittance across the line.

    Parameters
    ----------
    admittance : (n,) ndarray of complex
        S.

    Returns
    -------
    TwoPort
    """
    return TwoPort(1.0, 0.0, admittance, 1.0)


def cascade(*two_ports: TwoPort) -> TwoPort:
    """Two-ports one after the other.

    Parameters
    ----------
    *two_ports : TwoPort
        At least one, first port first.

    Returns
    -------
    TwoPort
    """
    return reduce(_chain, two_ports)


def _chain(one: TwoPort, two: TwoPort) -> TwoPort:
    """Product of two chain matrices."""
    return TwoPort(
        one.a * two.a + one.b * two.c,
        one.a * two.b + one.b * two.d,
        one.c * two.a + one.d * two.c,
        one.c * two.b + one.d * two.d,
    )
