"""Kernels of a layered stack against horizontal distance, tabulated for a band at once.

For currents on top of the stack and vertical currents cos(i pi z/h) below it, everything that
a method of moments needs is a function of horizontal distance:

- `vector`: vector potential of a horizontal current over mu0;
- `scalar`: potential of a horizontal divergence, times -j omega eps0;
- `coupling`: between a divergence and a vertical current that feeds the top copper;
- `probe`: between two such vertical currents;
- `foot`, `foot_scalar`: what a coaxial aperture in the ground plane works through.

A function with divergence D in its triangles and the vertical current e at their edges is
tested with another as j omega mu0 <J, vector J> + (<D, scalar D> + <D, coupling e> +
<e, coupling D> + <e, probe e>)/(j omega eps0); docs/models/fullwave-layered.md derives it.

Shapes: f frequencies, m vertical profiles, q kernels, n wavenumbers, d distances, u entries.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.sparse import csr_array
from scipy.special import gamma, kv

from core.constants import TWO_PI
from core.fullwave.sommerfeld import SommerfeldRule, sommerfeld_rule
from core.fullwave.spectral import complex_permittivity, KernelSpectra, kernel_spectra, line_charge_weights
from core.fullwave.static_images import Image, charge_images, current_images
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_IMAGE_DEPTH: Final = 6.0  # heights of the stack, down to which images are taken out
_TAIL_POWERS: Final = np.array([3, 4, 5])  # of 1/k_rho, fitted where the spectra have died
_TAIL_SAMPLES: Final = np.array([1.0, 2.0, 4.0])  # of the end of the path, where they are fitted
_DIED: Final = 8.0  # attenuations by the top layer until a spectrum has died
_SHORTEST, _LONGEST = 1500, 8000  # tables, in entries
_PER_SPAN, _AT_LEAST = 16, 24  # distances
_WINDOW: Final = 12  # of them, to interpolate between


@dataclass(frozen=True, eq=False)
class KernelTables:
    """Kernels at distances 0, step, 2 step, ..., less what is sharp at the source.

    Attributes
    ----------
    step : float
        m.
    current_images, charge_images : tuple of Image
        To be added to `vector` and to `scalar` as weight/(4 pi R); the first is the source.
    vector, scalar : (f, u) ndarray of complex
        The rest, 1/m.
    vector_kink, scalar_kink : (f,) ndarray of complex
        Slope of the rest at distance 0, 1/m²; without it the rest is smooth in the plane.
    coupling : (m, f, u) ndarray of complex
        1/m.
    probe : (m, m, f, u) ndarray of complex
        1/m; to be added: -`probe_log` ln(distance/step).
    probe_log : (m, m, f) ndarray of complex
        1/m.
    foot : (m, f, u) ndarray of complex
        No unit, known up to a constant; to be added: -ln(distance/step)/(2 pi).
    foot_scalar : (f, u) ndarray of complex
        No unit, known up to a constant.
    """

    step: float
    current_images: tuple[Image, ...]
    charge_images: tuple[Image, ...]
    vector: Complexes
    scalar: Complexes
    vector_kink: Complexes
    scalar_kink: Complexes
    coupling: Complexes
    probe: Complexes
    probe_log: Complexes
    foot: Complexes
    foot_scalar: Complexes


@dataclass(frozen=True, eq=False)
class TablePlan:
    """All of a table that does not depend on frequency.

    Attributes
    ----------
    layers : tuple of Layer
    profiles : int
    near : float
        Images at most this deep stay out of the tables, m.
    step : float
        Between entries of the tables, m.
    rule : SommerfeldRule
    spread : (u, d) sparse array of float
        From values at the rule's distances to the entries.
    rate : float
        Decay of the functions that stand for the end of a spectrum, 1/m.
    tail : (u, 3) ndarray of float
        Those functions at the entries.
    log_rest : (u,) ndarray of float
        K0(rate distance) + ln(distance/step).
    images : tuple of tuple of Image
        Of current and of charge.
    """

    layers: tuple[Layer, ...]
    profiles: int
    near: float
    step: float
    rule: SommerfeldRule
    spread: csr_array
    rate: float
    tail: Floats
    log_rest: Floats
    images: tuple[tuple[Image, ...], tuple[Image, ...]]

    def tables(
        self, wavenumber: Floats, ground_impedance: Complexes | complex = 0.0
    ) -> KernelTables:
        """Tabulate the kernels.

        Parameters
        ----------
        wavenumber : (f,) ndarray of float
            Of free space, 1/m, none above the plan's.
        ground_impedance : complex or (f,) ndarray of complex
            Of the ground plane's surface, ohm.

        Returns
        -------
        KernelTables
        """
        k_rho = np.concatenate([self.rule.k_rho, self.rule.end * _TAIL_SAMPLES])
        spectra = _stacked(
            kernel_spectra(self.layers, wavenumber, k_rho, self.profiles, ground_impedance)
        )
        log = self._log_weights(wavenumber)
        rest = spectra - self._leading(k_rho, log)
        powers = (k_rho**2 + self.rate**2)[:, None] ** (-0.5 * _TAIL_POWERS)
        fit = rest[..., -3:] @ np.linalg.inv(powers[-3:]).T
        rest = rest[..., :-3] - fit @ powers[:-3].T
        entries = self._spread(self.rule.integrate(rest)) + fit @ self.tail.T
        entries += log * self.log_rest / TWO_PI
        return self._named(entries, fit, log)

    def _spread(self, values: Complexes) -> Complexes:
        """From the rule's distances to the entries, on the last axis."""
        flat = values.reshape(-1, values.shape[-1])
        parts = self.spread @ np.concatenate([flat.real, flat.imag]).T
        real, imaginary = np.split(parts.T, 2)
        return (real + 1j * imaginary).reshape(*values.shape[:-1], -1)

    def _log_weights(self, wavenumber: Floats) -> Complexes:
        """Limit of k_rho² times each spectrum, (q, f, 1), once images are taken out."""
        flat = np.zeros((3, len(wavenumber)))
        coupling = np.zeros((self.profiles, len(wavenumber)))
        probe = line_charge_weights(self.layers, wavenumber, self.profiles)
        return np.concatenate(
            [flat, coupling, coupling + 1.0, probe.reshape(-1, len(wavenumber))]
        )[..., None]

    def _leading(self, k_rho: Complexes, log: Complexes) -> Complexes:
        """What each spectrum tends to for large k_rho, (q, f, n)."""
        leading = log / (k_rho**2 + self.rate**2)
        for spectrum, images in zip(leading, self.images, strict=False):
            for image in images:
                spectrum += 0.5 * image.weight * np.exp(-k_rho * image.depth) / k_rho
        return leading

    def _named(self, entries: Complexes, fit: Complexes, log: Complexes) -> KernelTables:
        """Split the entries of all kernels, (q, f, u), by name."""
        m = self.profiles
        distance = self.step * np.arange(entries.shape[-1])
        near: list[tuple[Image, ...]] = []
        for table, images in zip(entries, self.images, strict=False):
            near.append(tuple(image for image in images if image.depth <= self.near))
            for image in images[len(near[-1]) :]:
                table += image.weight / (2.0 * TWO_PI * np.hypot(distance, image.depth))
        square = (m, m, *entries.shape[1:])
        return KernelTables(
            step=self.step,
            current_images=near[0],
            charge_images=near[1],
            vector=entries[0],
            scalar=entries[1],
            vector_kink=-fit[0, :, 0] / TWO_PI,
            scalar_kink=-fit[1, :, 0] / TWO_PI,
            foot_scalar=entries[2],
            coupling=entries[3 : 3 + m],
            foot=entries[3 + m : 3 + 2 * m],
            probe=entries[3 + 2 * m :].reshape(square),
            probe_log=log[3 + 2 * m :].reshape(square[:-1]) / TWO_PI,
        )


def plan_tables(
    layers: tuple[Layer, ...],
    wavenumber: float,
    reach: float,
    near: float,
    profiles: int = 0,
) -> TablePlan:
    """Prepare tables for a stack and a band.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    wavenumber : float
        Of free space at the highest frequency, 1/m.
    reach : float
        Largest distance, m.
    near : float
        Images at most this deep stay out of the tables, to be integrated with the source
        itself, m, >= 0.
    profiles : int
        How many vertical currents, >= 0.

    Returns
    -------
    TablePlan
    """
    height = total_thickness(layers)
    finest = min(layers[-1].thickness, height)
    densest = wavenumber * max(abs(complex_permittivity(layer)) for layer in layers) ** 0.5
    distances, spread, step = _spacing(reach, finest, height)
    rule = sommerfeld_rule(distances, wavenumber, densest, max(_DIED / finest, 12.0 * densest))
    rate = max(1.0 / height, densest)
    scaled = rate * step * np.arange(spread.shape[0])
    scaled[0] = 1e-6  # the functions below are finite there, but their factors are not
    order = 0.5 * _TAIL_POWERS - 1.0
    tail = (0.5 * scaled[:, None]) ** order * kv(order, scaled[:, None]) / gamma(order + 1.0)
    return TablePlan(
        layers=layers,
        profiles=profiles,
        near=near,
        step=step,
        rule=rule,
        spread=spread,
        rate=rate,
        tail=tail / rate ** (2.0 * order) / TWO_PI,
        log_rest=kv(0, scaled) + np.log(scaled / (rate * step)),
        images=(current_images(layers), charge_images(layers, _IMAGE_DEPTH * height)),
    )


def _spacing(reach: float, finest: float, height: float) -> tuple[Floats, csr_array, float]:
    """Distances to integrate for, the matrix from there to even steps, and the step."""
    span = np.arcsinh(reach / finest)
    count = int(_PER_SPAN * span) + _AT_LEAST
    angle = np.pi * np.arange(count) / (count - 1)
    nodes = 0.5 - 0.5 * np.cos(angle)
    step = max(min(reach / _SHORTEST, height / 6.0, finest / 3.0), reach / _LONGEST)
    entries = int(np.ceil(reach / step)) + 2
    even = np.arcsinh(np.minimum(step * np.arange(entries), reach) / finest) / span
    return finest * np.sinh(span * nodes), _interpolation(nodes, even), step


def _interpolation(nodes: Floats, wanted: Floats) -> csr_array:
    """Matrix from values at rising nodes to values between them: polynomials through some."""
    first = np.searchsorted(nodes, wanted) - _WINDOW // 2
    columns = np.clip(first, 0, len(nodes) - _WINDOW)[:, None] + np.arange(_WINDOW)
    near = nodes[columns]
    apart = near[:, :, None] - near[:, None, :]
    apart[:, np.arange(_WINDOW), np.arange(_WINDOW)] = 1.0
    gap = wanted[:, None] - near
    gap[gap == 0.0] = 1e-30  # at a node its own value outweighs the others
    weights = 1.0 / (apart.prod(axis=2) * gap)
    weights /= weights.sum(axis=1, keepdims=True)
    starts = np.arange(len(wanted) + 1) * _WINDOW
    return csr_array((weights.ravel(), columns.ravel(), starts), shape=(len(wanted), len(nodes)))


def _stacked(spectra: KernelSpectra) -> Complexes:
    """All spectra as one array, (q, f, n)."""
    single = np.stack([spectra.vector, spectra.scalar, spectra.foot_scalar])
    pairs = spectra.probe.reshape(-1, *single.shape[1:])
    return np.concatenate([single, spectra.coupling, spectra.foot, pairs])
