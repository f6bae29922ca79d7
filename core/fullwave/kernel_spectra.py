"""Spectra of the kernels that a method of moments on a layered stack needs.

Shapes: f frequencies, n horizontal wavenumbers, m vertical profiles.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.fullwave.spectral import complex_permittivity, cosine_integral, line_response
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]


@dataclass(frozen=True, eq=False)
class KernelSpectra:
    """Spectra of the kernels that `core.fullwave.kernel_table` tabulates.

    Attributes
    ----------
    vector, scalar : (f, n) ndarray of complex
        Of horizontal current and divergence at the top, m.
    coupling : (m, f, n) ndarray of complex
        Between divergence and vertical currents, m.
    probe : (m, m, f, n) ndarray of complex
        Between vertical currents, m.
    foot : (m, f, n) ndarray of complex
        Between vertical currents and the ground plane, m².
    foot_scalar : (f, n) ndarray of complex
        Between divergence and the ground plane, m².
    """

    vector: Complexes
    scalar: Complexes
    coupling: Complexes
    probe: Complexes
    foot: Complexes
    foot_scalar: Complexes


def kernel_spectra(
    layers: tuple[Layer, ...],
    wavenumber: Floats,
    k_rho: Complexes,
    profiles: int = 0,
    ground_impedance: Complexes | complex = 0.0,
) -> KernelSpectra:
    """Spectra of all kernels.

    Parameters
    ----------
    layers, wavenumber, k_rho, profiles, ground_impedance
        As for `line_response`.

    Returns
    -------
    KernelSpectra

    Notes
    -----
    `vector` and `scalar` are G_xx and K_phi of formulation C [1]_. Its G_zx, G_zz and correction
    term appear integrated along the vertical currents, joined to the potentials of their upper
    ends so that no end charge is left where current passes on into the top copper.

    References
    ----------
    .. [1] K. A. Michalski and J. R. Mosig, "Multilayered media Green's functions in integral
       equation formulations", IEEE Trans. Antennas Propagat., vol. 45, no. 3, pp. 508-519,
       Mar. 1997.
    """
    lines = line_response(layers, wavenumber, k_rho, profiles, ground_impedance)
    k0 = np.asarray(wavenumber, dtype=float)[:, None]
    squared = np.asarray(k_rho, dtype=complex) ** 2
    scalar = (lines.tm + k0**2 * lines.te) / squared
    end = ((-1.0) ** np.arange(profiles))[:, None, None]  # of each profile at the top
    lift = lines.alpha * lines.rise
    foot_scalar = lines.alpha * lines.reach / squared
    return KernelSpectra(
        vector=lines.te,
        scalar=scalar,
        coupling=end * scalar - lift,
        probe=lines.standing
        - end[:, None] * lift
        - end * lift[:, None]
        + end[:, None] * end * scalar,
        foot=lines.foot + end * foot_scalar,
        foot_scalar=foot_scalar,
    )


def line_charge_weights(
    layers: tuple[Layer, ...], wavenumber: Floats, profiles: int
) -> Floats | Complexes:
    """Limit of k_rho² times the spectra `probe` for large k_rho.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : (f,) ndarray of float
        1/m.
    profiles : int

    Returns
    -------
    (m, m, f) ndarray of complex
        1/m. Each piece of a vertical current acts on its neighbour like a line current, and its
        end and interface charges like line charges.
    """
    order = np.arange(profiles)[:, None] * np.pi / total_thickness(layers)
    weights = np.zeros((profiles, profiles, len(wavenumber)), dtype=complex)
    bottom = 0.0
    for layer in layers:
        top = bottom + layer.thickness
        even, odd = (
            cosine_integral(order[:, None] + sign * order, bottom, top) for sign in (1.0, -1.0)
        )
        slopes = 0.5 * order[:, None] * order * (odd - even) / complex_permittivity(layer)
        weights += slopes - 0.5 * (odd + even) * np.asarray(wavenumber) ** 2
        bottom = top
    return weights
