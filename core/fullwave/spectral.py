"""Fields of currents on and in a layered stack, one plane wave at a time.

The stack: the ground plane at z = 0, dielectric layers up to z = h, air above. Copper lies at
z = h; a probe carries a vertical current from z = 0 to z = h. For the horizontal wavenumber
k_rho each layer is a length of transmission line, one for TM and one for TE waves (Michalski
and Mosig 1997), written here so that nothing depends on the branch of a square root inside the
stack, nothing overflows and static limits are plain. docs/models/fullwave-layered.md derives
what stands here.

Shapes: f frequencies, n horizontal wavenumbers, m vertical profiles.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE
from core.lines.stack import Layer, total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_STANDING_STILL = 1e-5  # alpha over k0 that stands for a layer whose vertical wavenumber is 0


@dataclass(frozen=True, eq=False)
class LineResponse:
    """What the transmission lines of a stack answer, referred to its top and its foot.

    Attributes
    ----------
    alpha : (f, n) ndarray of complex
        sqrt(k_rho² - k0²) with a real part >= 0, 1/m; waves in air go as exp(-alpha z).
    te : (f, n) ndarray of complex
        TE voltage at the top for a unit current there, over j omega mu0, m.
    tm : (f, n) ndarray of complex
        TM voltage at the top for a unit current there, times j omega eps0, 1/m.
    rise : (m, f, n) ndarray of complex
        TM current at the top over j k_rho for the vertical current cos(i pi z/h), m².
    foot : (m, f, n) ndarray of complex
        The same at the ground plane, m².
    reach : (f, n) ndarray of complex
        TM current at the top for a unit electric field impressed in the ground plane, over
        j omega eps0, m.
    standing : (m, m, f, n) ndarray of complex
        -j omega eps0 times the voltage along cos(i pi z/h) that the vertical current
        cos(j pi z/h) sets up, m.
    """

    alpha: Complexes
    te: Complexes
    tm: Complexes
    rise: Complexes
    foot: Complexes
    reach: Complexes
    standing: Complexes


def complex_permittivity(layer: Layer) -> complex:
    """Relative permittivity of a lossy layer.

    Parameters
    ----------
    layer : Layer

    Returns
    -------
    complex
        For the time factor exp(+j omega t): the imaginary part is <= 0.
    """
    return layer.eps_r * (1.0 - 1j * layer.loss_tangent)


def line_response(
    layers: tuple[Layer, ...],
    wavenumber: Floats,
    k_rho: Complexes,
    profiles: int = 0,
    ground_impedance: Complexes | complex = 0.0,
) -> LineResponse:
    """Solve the transmission lines of a stack.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : (f,) ndarray of float
        Of free space, 1/m, > 0.
    k_rho : (n,) or (f, n) ndarray of complex
        Horizontal wavenumber, 1/m, not 0, imaginary part >= 0.
    profiles : int
        How many vertical currents cos(i pi z/h), i = 0, 1, ..., to solve for.
    ground_impedance : complex or (f,) ndarray of complex
        Of the ground plane's surface, ohm.

    Returns
    -------
    LineResponse

    References
    ----------
    .. [1] K. A. Michalski and J. R. Mosig, "Multilayered media Green's functions in integral
       equation formulations", IEEE Trans. Antennas Propagat., vol. 45, no. 3, pp. 508-519,
       Mar. 1997.
    """
    k0 = np.asarray(wavenumber, dtype=float)[:, None]
    alpha = np.sqrt(np.asarray(k_rho, dtype=complex) ** 2 - k0**2)
    wall = np.atleast_1d(np.asarray(ground_impedance, dtype=complex))[:, None]
    walk = _Walk(
        layers=layers,
        k0=k0,
        k_rho_squared=alpha**2 + k0**2,
        order=np.pi / total_thickness(layers) * np.arange(profiles, dtype=float)[:, None, None],
    )
    steps = walk.up(wall)
    last = steps[-1]
    rise = -last.source / (last.tm_top + alpha)
    foot, standing = walk.down(steps, rise)
    return LineResponse(
        alpha=alpha,
        te=last.te_top / (1.0 + alpha * last.te_top),
        tm=alpha * last.tm_top / (alpha + last.tm_top),
        rise=rise,
        foot=foot,
        reach=last.carried / (last.tm_top + alpha),
        standing=standing,
    )


def cosine_integral(order: Floats, start: float, stop: float) -> Floats:
    """Integral of cos(order z) from `start` to `stop`.

    Parameters
    ----------
    order : ndarray of float
        1/m.
    start, stop : float
        m.

    Returns
    -------
    ndarray of float
        m, of the shape of `order`.
    """
    still = order == 0.0
    safe = np.where(still, 1.0, order)
    return np.where(still, stop - start, (np.sin(safe * stop) - np.sin(safe * start)) / safe)


@dataclass(frozen=True, eq=False)
class _Step:
    """One layer of the walk up. Current and slope mean: TM, of one vertical profile.

    Looking down, slope over permittivity = tm x current + source, with all profiles driven.
    """

    eps: complex
    squared: Complexes  # alpha² of the layer
    decay: Complexes  # exp(-alpha d)
    hop: Complexes  # eps sinh(alpha d)/alpha, both scaled by the decay, as is the next
    divisor: Complexes
    tm_bottom: Complexes
    tm_top: Complexes
    te_top: Complexes
    driven: Complexes  # what `source` is at the bottom once the particular solution is taken off
    source: Complexes  # at the top
    carried: Complexes  # flux from the ground plane that gets to the top
    bottom: float
    top: float


@dataclass(frozen=True, eq=False)
class _Walk:
    """The TM current i(z) of profile p: (i'/eps)' - (alpha²/eps) i = -p/eps, i'(0) = 0."""

    layers: tuple[Layer, ...]
    k0: Floats
    k_rho_squared: Complexes
    order: Floats  # i pi/h, (m, 1, 1)

    def up(self, wall: Complexes) -> list[_Step]:
        """What each layer shows to the one above it."""
        tm = 1j * wall * self.k0 / FREE_SPACE_IMPEDANCE + 0.0 * self.k_rho_squared
        te = wall / (1j * self.k0 * FREE_SPACE_IMPEDANCE) + 0.0 * self.k_rho_squared
        source = np.zeros((len(self.order), *tm.shape), dtype=complex)
        carried = np.ones_like(tm)
        bottom = 0.0
        steps: list[_Step] = []
        for layer in self.layers:
            eps, top = complex_permittivity(layer), bottom + layer.thickness
            alpha = np.sqrt(self.k_rho_squared - eps * self.k0**2)
            alpha = np.where(
                abs(alpha) < _STANDING_STILL * self.k0, _STANDING_STILL * self.k0, alpha
            )
            squared = alpha**2
            decay = np.exp(-alpha * layer.thickness)
            cosh = 0.5 * (1.0 + decay**2)
            sinh_over_alpha = -0.5 * np.expm1(-2.0 * alpha * layer.thickness) / alpha
            divisor = cosh + eps * sinh_over_alpha * tm
            tm_top = (squared * sinh_over_alpha / eps + cosh * tm) / divisor
            te = (sinh_over_alpha + cosh * te) / (cosh + squared * sinh_over_alpha * te)
            carried = carried * decay / divisor
            value, slope = self._particular(squared, bottom)
            driven = tm * value + source - slope / eps
            value, slope = self._particular(squared, top)
            source = driven * decay / divisor + slope / eps - tm_top * value
            steps.append(
                _Step(
                    eps=eps,
                    squared=squared,
                    decay=decay,
                    hop=np.multiply(eps, sinh_over_alpha),
                    divisor=divisor,
                    tm_bottom=tm,
                    tm_top=tm_top,
                    te_top=te,
                    driven=driven,
                    source=source,
                    carried=carried,
                    bottom=bottom,
                    top=top,
                )
            )
            tm, bottom = tm_top, top
        return steps

    def down(self, steps: list[_Step], current: Complexes) -> tuple[Complexes, Complexes]:
        """Current at the foot, and the voltages along all profiles."""
        standing = np.zeros((len(self.order), *current.shape), dtype=complex)
        for step in reversed(steps):
            top = current - self._particular(step.squared, step.top)[0]
            bottom = (top * step.decay - step.hop * step.driven) / step.divisor
            flux_top = step.tm_top * top + step.driven * step.decay / step.divisor
            flux_bottom = step.tm_bottom * bottom + step.driven
            standing += self._voltage(step, (bottom, flux_bottom), (top, flux_top))
            current = bottom + self._particular(step.squared, step.bottom)[0]
        return current, standing

    def _voltage(
        self,
        step: _Step,
        bottom: tuple[Complexes, Complexes],
        top: tuple[Complexes, Complexes],
    ) -> Complexes:
        """One layer's part of the voltages: particular and homogeneous solution, integrated."""
        order, along = self.order, self.order[:, None]  # of the current; of the voltage's path
        k_squared = step.eps * self.k0**2
        driven = (order**2 - k_squared) / (step.squared + order**2) / step.eps
        overlap = 0.5 * (
            cosine_integral(order - along, step.bottom, step.top)
            + cosine_integral(order + along, step.bottom, step.top)
        )
        ends = [
            np.cos(along * z) * flux + along * np.sin(along * z) * current / step.eps
            for z, (current, flux) in ((step.bottom, bottom), (step.top, top))
        ]
        return overlap * driven - self.k_rho_squared * (ends[1] - ends[0]) / (
            step.squared + along**2
        )

    def _particular(self, squared: Complexes, z: float) -> tuple[Complexes, Complexes]:
        """Value and slope at z of the solution that follows the profile."""
        scale = 1.0 / (squared + self.order**2)
        return np.cos(self.order * z) * scale, -self.order * np.sin(self.order * z) * scale
