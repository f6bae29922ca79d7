"""Far field of currents on and in a layered stack over an infinite ground plane."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, TWO_PI
from core.fullwave.spectral import line_response
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]


@dataclass(frozen=True, eq=False)
class LayeredRadiation:
    """Far field per transformed current: r E exp(+j k0 r) in volts per ampere metre.

    The transform of a current is its integral times exp(+j k . r) over the plan, k being k0
    sin(theta) in the direction looked at. f frequencies, t angles, m vertical profiles.

    Attributes
    ----------
    along : (f, t) ndarray of complex
        E_theta per horizontal current along the direction looked at, ohm/m.
    across : (f, t) ndarray of complex
        E_phi per horizontal current across it (towards rising phi), ohm/m.
    vertical : (m, f, t) ndarray of complex
        E_theta per vertical current cos(i pi z/h), ohm.
    foot : (f, t) ndarray of complex
        E_theta per electric field impressed in the ground plane along the direction looked at,
        V per volt metre: 1/m.
    """

    along: Complexes
    across: Complexes
    vertical: Complexes
    foot: Complexes


def layered_radiation(
    layers: tuple[Layer, ...],
    wavenumber: Floats,
    theta: Floats,
    profiles: int = 0,
    ground_impedance: Complexes | complex = 0.0,
) -> LayeredRadiation:
    """Far field factors at angles from the normal.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : (f,) ndarray of float
        Of free space, 1/m.
    theta : (t,) ndarray of float
        From the normal, rad, 0 to below pi/2. Origin of phase: on the ground plane.
    profiles : int
        Of vertical currents.
    ground_impedance : complex or (f,) ndarray of complex
        Of the ground plane's surface, ohm.

    Returns
    -------
    LayeredRadiation

    Notes
    -----
    The spectral field just above the stack, taken to infinity by stationary phase [1]_. It does
    not hold the surface waves.

    References
    ----------
    .. [1] L. B. Felsen and N. Marcuvitz, *Radiation and Scattering of Waves*, Prentice-Hall,
       1973, sec. 4.8 (from memory).
    """
    k0 = np.asarray(wavenumber, dtype=float)[:, None]
    k_rho = k0 * np.sin(theta)
    lines = line_response(layers, wavenumber, k_rho.astype(complex), profiles, ground_impedance)
    cosine = np.cos(theta)
    raised = np.exp(1j * k0 * total_thickness(layers) * cosine) * FREE_SPACE_IMPEDANCE / TWO_PI
    return LayeredRadiation(
        along=-raised * lines.tm,
        across=raised * k0**2 * cosine * lines.te,
        vertical=-raised * k0 * k_rho * cosine * lines.rise,
        foot=-raised * k0**2 * cosine * lines.reach / FREE_SPACE_IMPEDANCE,
    )
