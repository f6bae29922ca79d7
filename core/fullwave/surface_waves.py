"""Waves that a stack guides along itself, and the power that currents put into them."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Final

import numpy as np
from numpy.polynomial import legendre
from scipy.optimize import brentq

from core.constants import FREE_SPACE_IMPEDANCE
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_SLICE: Final = 0.5  # largest phase across a slice, rad: none hides two zeros
_GAUSS: Final = legendre.leggauss(6)  # exact to rounding over such a slice


@dataclass(frozen=True, eq=False)
class SurfaceWave:
    """One guided wave of a lossless stack.

    Attributes
    ----------
    transverse_electric : bool
    wavenumber : float
        Along the stack, 1/m.
    decay : float
        Above the stack, 1/m.
    horizontal : complex
        Amplitude per ampere metre of the horizontal current that excites it: of the part along
        its direction for TM, across it for TE.
    vertical : (m,) ndarray of float
        Amplitude per ampere of the vertical currents cos(i pi z/h); zeros for TE.
    foot : complex
        Amplitude per volt metre of an electric field impressed in the ground plane, along its
        direction; 0 for TE.
    """

    transverse_electric: bool
    wavenumber: float
    decay: float
    horizontal: complex
    vertical: Floats
    foot: complex


def surface_waves(
    layers: tuple[Layer, ...], wavenumber: float, profiles: int = 0
) -> tuple[SurfaceWave, ...]:
    """All guided waves of a stack, its losses left out.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : float
        Of free space, 1/m, > 0.
    profiles : int
        Of vertical currents.

    Returns
    -------
    tuple of SurfaceWave
        TM first, each by falling wavenumber. TM0 is always there unless all is air.

    Notes
    -----
    Across the stack such a wave is a Sturm-Liouville mode: the number of zeros of the solution
    started at the ground plane, its continuation above the stack included, is the number of
    waves of larger wavenumber [1]_. Counting brackets every one, so none is missed.

    References
    ----------
    .. [1] E. A. Coddington and N. Levinson, *Theory of Ordinary Differential Equations*,
       McGraw-Hill, 1955, ch. 8 (oscillation theorem; from memory).
    """
    densest = max(layer.eps_r for layer in layers)
    if densest <= 1.0:
        return ()
    largest = wavenumber * (densest - 1.0) ** 0.5
    found: list[SurfaceWave] = []
    for transverse_electric in (False, True):
        shot = _Shot(layers, wavenumber, transverse_electric)
        for index in range(shot.count(0.0)):
            low, high = 0.0, largest
            while shot.count(low) - shot.count(high) > 1:
                middle = 0.5 * (low + high)
                low, high = (middle, high) if shot.count(middle) > index else (low, middle)
            decay = brentq(shot.mismatch, low, high, xtol=1e-14 * largest, rtol=1e-14)
            found.append(shot.wave(float(decay), profiles))
    return tuple(found)


def launched_power(wave: SurfaceWave, wavenumber: float, amplitude: Complexes) -> float:
    """Power that a current puts into a guided wave.

    Parameters
    ----------
    wave : SurfaceWave
    wavenumber : float
        Of free space, 1/m.
    amplitude : (n,) ndarray of complex
        At n directions evenly spread over the circle, A: `wave.horizontal` times the transform
        of the horizontal current's part along (TM) or across (TE) the direction, plus
        `wave.vertical` times those of the vertical currents. Peak values; the transform is
        the integral of the current times exp(+j k . r) at the wave's own wavenumber.

    Returns
    -------
    float
        W.

    Notes
    -----
    From the residue of the spectral fields at the wave's pole.
    """
    scale = FREE_SPACE_IMPEDANCE / (8.0 * wavenumber)
    if wave.transverse_electric:
        scale *= wavenumber**2
    return float(scale * np.mean(abs(amplitude) ** 2))


@dataclass(frozen=True)
class _Shot:
    """Solution across the stack from the ground plane up, for waves decaying as exp(-decay z).

    TM: its magnetic field i, (i'/eps)' = (alpha²/eps) i, i'(0) = 0. TE: its electric field e,
    e'' = alpha² e, e(0) = 0. The flux is i'/eps or e'.
    """

    layers: tuple[Layer, ...]
    wavenumber: float
    transverse_electric: bool

    def slices(self, decay: float) -> list[tuple[float, float, float, float, float, float]]:
        """Thickness, eps, weight, alpha², value and flux of each slice, at its bottom; the top."""
        value, flux = (0.0, 1.0) if self.transverse_electric else (1.0, 0.0)
        cut = []
        for layer in self.layers:
            weight = 1.0 if self.transverse_electric else layer.eps_r
            squared = decay**2 - self.wavenumber**2 * (layer.eps_r - 1.0)
            phase = self.wavenumber * (layer.eps_r - 1.0) ** 0.5 * layer.thickness
            count = 1 + int(phase / _SLICE)
            depth = layer.thickness / count
            for _ in range(count):
                cut.append((depth, layer.eps_r, weight, squared, value, flux))
                cosh, sinh = _hyperbolic(squared, depth)
                value, flux = (
                    float(cosh * value + weight * sinh * flux),
                    float(squared * sinh / weight * value + cosh * flux),
                )
        return [*cut, (0.0, 1.0, 1.0, decay**2, value, flux)]

    def mismatch(self, decay: float) -> float:
        """Flux at the top less that of the decaying wave above; zero for a guided wave."""
        *_, value, flux = self.slices(decay)[-1]
        return flux + decay * value

    def count(self, decay: float) -> int:
        """How many guided waves decay faster."""
        cut = self.slices(decay)
        values = [at[4] for at in cut]
        values[0] = values[0] or cut[0][5]  # a TE wave leaves zero towards its slope
        *_, value, flux = cut[-1]
        crossings = sum(a * b < 0.0 for a, b in pairwise(values))
        return crossings + ((flux + decay * value) * value < 0.0)

    def wave(self, decay: float, profiles: int) -> SurfaceWave:
        """The guided wave of this decay, with what excites it."""
        x, gauss = _GAUSS
        cut = self.slices(decay)
        value_at_top = cut[-1][4]
        order = np.arange(profiles)[:, None] * np.pi / total_thickness(self.layers)
        norm = value_at_top**2 / (2.0 * decay)
        vertical, bottom = np.zeros(profiles), 0.0
        for depth, _, weight, squared, value, flux in cut[:-1]:
            z = 0.5 * depth * (1.0 + x)
            cosh, sinh = _hyperbolic(squared, z)
            share = 0.5 * depth * gauss / weight
            inside = cosh * value + weight * sinh * flux
            norm += float(share @ inside**2)
            vertical += np.cos(order * (bottom + z)) @ (share * inside)
            bottom += depth
        wavenumber = float(np.hypot(self.wavenumber, decay))
        if self.transverse_electric:
            horizontal, vertical, foot = complex(value_at_top), 0.0 * vertical, 0.0
        else:
            foot = self.wavenumber / FREE_SPACE_IMPEDANCE  # of a magnetic field that starts from 1
            horizontal, vertical = -1j * decay * value_at_top, wavenumber * vertical
        return SurfaceWave(
            transverse_electric=self.transverse_electric,
            wavenumber=wavenumber,
            decay=decay,
            horizontal=horizontal / norm**0.5,
            vertical=vertical / norm**0.5,
            foot=foot / norm**0.5,
        )


def _hyperbolic(squared: float, depth: Floats | float) -> tuple[Floats, Floats]:
    """cosh(alpha z) and sinh(alpha z)/alpha for a real alpha² of either sign."""
    alpha = np.emath.sqrt(squared) or 1e-12
    return np.cosh(alpha * depth).real, (np.sinh(alpha * depth) / alpha).real
