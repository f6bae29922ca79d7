"""From horizontal wavenumbers to distances: Sommerfeld integrals as one matrix.

The integral of f(k) J0(k rho) k dk/(2 pi) runs over an arch above the poles and branch points
of all frequencies of a band, then along the real axis. The path does not depend on frequency,
so the Bessel functions are worked out once and each frequency costs a matrix product.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from numpy.polynomial import legendre
from scipy.special import erfc, j0, jv

from core.constants import TWO_PI

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_ARCH_PIECES: Final = 9  # at least, of as many nodes as an octave of the tail has
_ARCH_SLENDER: Final = 0.4  # pieces per length over height
_ARCH_HEIGHT: Final = 0.35  # of the largest free-space wavenumber
_ARCH_GROWTH: Final = 2.5  # largest height times distance: J0 grows as its exponential
_ARCH_END: Final = 1.5  # times the largest wavenumber in the stack
_PANEL_NODES: Final = 16  # of the spectrum in an octave of the tail
_TURNED: Final = 12.0  # turn of J0, in radians, over a piece of as many nodes
_SMALL_PRODUCT: Final = 200_000  # multiplications
_FADE_FROM: Final = 80.0  # argument of J0 from which it is faded out
_NODES: Final = legendre.leggauss(_PANEL_NODES)


@dataclass(frozen=True, eq=False)
class SommerfeldRule:
    """Weights that turn samples of a spectrum into its values at distances.

    Attributes
    ----------
    k_rho : (n,) ndarray of complex
        Where to sample, 1/m.
    weights : (2, d, n) ndarray of float
        Real and imaginary parts.
    end : float
        Where the path ends, 1/m; spectra should have died there.
    """

    k_rho: Complexes
    weights: Floats
    end: float

    def integrate(self, spectrum: Complexes) -> Complexes:
        """Sommerfeld integrals of spectra sampled at `k_rho`.

        Parameters
        ----------
        spectrum : (..., n) ndarray of complex

        Returns
        -------
        (..., d) ndarray of complex
            integral of spectrum J0(k rho) k dk/(2 pi) at each distance.
        """
        flat = spectrum.reshape(-1, spectrum.shape[-1])
        # Real products, each too small to be shared out to threads: on a busy machine threads
        # wait for each other a hundred times longer than they work.
        pieces = 1 + flat.shape[0] * self.weights[0].size // _SMALL_PRODUCT
        real, imaginary = self.weights.transpose(0, 2, 1)
        done = [
            piece.real @ real
            - piece.imag @ imaginary
            + 1j * (piece.real @ imaginary + piece.imag @ real)
            for piece in np.array_split(flat, pieces)
        ]
        return np.concatenate(done).reshape(*spectrum.shape[:-1], -1)


def sommerfeld_rule(
    distances: Floats, wavenumber: float, largest_wavenumber: float, end: float
) -> SommerfeldRule:
    """Lay the path and work out its weights.

    Parameters
    ----------
    distances : (d,) ndarray of float
        m, >= 0.
    wavenumber : float
        Of free space at the highest frequency, 1/m.
    largest_wavenumber : float
        Largest in any layer at the highest frequency, real part, 1/m.
    end : float
        Where spectra have died, 1/m.

    Returns
    -------
    SommerfeldRule

    Notes
    -----
    A half sine as arch keeps clear of all singularities, none of which lies above the real
    axis. On the tail spectra are smooth over an octave, but J0 may turn many times: each octave
    samples the spectrum at a few Gauss points and integrates their interpolating polynomial
    times J0 exactly (Filon). Where J0 has turned often it is faded out smoothly, which changes
    the integral of a smooth spectrum by no more than rounding.
    """
    farthest = float(distances.max())
    start = _ARCH_END * largest_wavenumber
    height = min(_ARCH_HEIGHT * wavenumber, _ARCH_GROWTH / farthest)
    # A low arch passes poles closely.
    x, weight = _composite_nodes(max(_ARCH_PIECES, int(_ARCH_SLENDER * start / height)))
    phase = 0.5 * np.pi * (1.0 + x)
    arch = start * phase / np.pi + 1j * height * np.sin(phase)
    step = 0.5 * weight * (start + 1j * np.pi * height * np.cos(phase))
    arch_weights = jv(0, np.multiply.outer(distances, arch)) * (arch * step / TWO_PI)
    fade = max(_FADE_FROM, 3.0 * start * farthest)
    edges = start * 2.0 ** np.arange(max(1, int(np.ceil(np.log2(end / start)))) + 1)
    panels = [_panel(distances, a, fade) for a in edges[:-1]]
    tail = np.concatenate([weights for _, weights in panels], axis=1)
    return SommerfeldRule(
        k_rho=np.concatenate([arch, *(nodes for nodes, _ in panels)]),
        weights=np.stack(
            [
                np.concatenate([arch_weights.real, tail], axis=1),
                np.concatenate([arch_weights.imag, 0.0 * tail], axis=1),
            ]
        ),
        end=float(edges[-1]),
    )


def _panel(distances: Floats, start: float, fade: float) -> tuple[Floats, Floats]:
    """Samples and weights of the octave from `start`."""
    x, weight = _NODES
    pieces = 1 + int(min(fade, 0.5 * start * distances.max()) / _TURNED)
    fine, fine_weight = _composite_nodes(pieces)
    k = start * (1.5 + 0.5 * fine)
    reached = distances * start < 2.0 * fade
    turns = np.multiply.outer(distances[reached], k)
    faded = j0(turns) * 0.5 * erfc(4.0 * (2.0 * turns / fade - 3.0))
    # Legendre coefficients from the values at the Gauss points, back at the fine points
    degree = np.arange(_PANEL_NODES)
    to_coefficients = legendre.legvander(x, _PANEL_NODES - 1) * weight[:, None] * (degree + 0.5)
    interpolate = to_coefficients @ legendre.legvander(fine, _PANEL_NODES - 1).T
    weights = np.zeros((len(distances), _PANEL_NODES))
    weights[reached] = faded @ (interpolate * (k * fine_weight)).T * (0.5 * start / TWO_PI)
    return start * (1.5 + 0.5 * x), weights


def _composite_nodes(pieces: int) -> tuple[Floats, Floats]:
    """Gauss points and weights on equal pieces of -1 to 1."""
    x, weight = _NODES
    middles = (2.0 * np.arange(pieces) + 1.0) / pieces - 1.0
    return (middles[:, None] + x / pieces).ravel(), np.tile(weight / pieces, pieces)
