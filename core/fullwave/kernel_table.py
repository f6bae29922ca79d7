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
from scipy.special import gamma, kv

from core.constants import TWO_PI
from core.errors import OutOfRangeError
from core.fullwave.kernel_spectra import KernelSpectra, kernel_spectra, line_charge_weights
from core.fullwave.sommerfeld import SommerfeldRule, sommerfeld_rule
from core.fullwave.spectral import complex_permittivity
from core.fullwave.static_images import (
    Image,
    charge_images,
    current_images,
    image_potential,
    image_spectrum,
)
from core.fullwave.table_grid import table_grid
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray
    from scipy.sparse import csr_array

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_IMAGE_DEPTH: Final = 6.0  # heights of the stack, down to which images are taken out
_TAIL_POWERS: Final = np.array([3, 4, 5])  # of 1/k_rho, fitted where the spectra have died
_TAIL_SAMPLES: Final = np.array([1.0, 2.0, 4.0])  # of the end of the path, where they are fitted
_FAINT: Final = 1e-3  # weight of an image that may stay in the tables however near it is
_LOWEST: Final = 0.5  # of the plan's wavenumber, that its path still serves
_DIED: Final = 8.0  # attenuations by the top layer until a spectrum has died


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
    wavenumber : float
        Of free space at the highest frequency, 1/m.
    profiles : int
    step : float
        Between entries of the tables, m.
    rule : SommerfeldRule
    k_rho : (n,) ndarray of complex
        Where spectra are sampled: for the rule, then past its end, 1/m.
    spread : (u, d) sparse array of float
        From values at the rule's distances to the entries.
    rate : float
        Decay of the functions that stand for the end of a spectrum, 1/m.
    tail : (d, 3) ndarray of float
        Those functions at the rule's distances.
    log_rest : (d,) ndarray of float
        K0(rate distance) + ln(distance/step).
    near : pair of tuple of Image
        Of current and charge, to stay out of the tables.
    image_spectra : (2, n) ndarray of complex
        Of all images of current and charge, m.
    far : (2, u) ndarray of complex
        What the other images add to the tables, 1/m.
    """

    layers: tuple[Layer, ...]
    wavenumber: float
    profiles: int
    step: float
    rule: SommerfeldRule
    k_rho: Complexes
    spread: csr_array
    rate: float
    tail: Floats
    log_rest: Floats
    near: tuple[tuple[Image, ...], tuple[Image, ...]]
    image_spectra: Complexes
    far: Complexes

    def tables(
        self, wavenumber: Floats, ground_impedance: Complexes | complex = 0.0
    ) -> KernelTables:
        """Tabulate the kernels.

        Parameters
        ----------
        wavenumber : (f,) ndarray of float
            Of free space, 1/m, between half the plan's and the plan's.
        ground_impedance : complex or (f,) ndarray of complex
            Of the ground plane's surface, ohm.

        Returns
        -------
        KernelTables

        Raises
        ------
        OutOfRangeError
            If a wavenumber lies outside the plan's band.
        """
        lowest, highest = float(np.min(wavenumber)), float(np.max(wavenumber))
        if not _LOWEST * self.wavenumber <= lowest <= highest <= (1.0 + 1e-9) * self.wavenumber:
            raise OutOfRangeError(
                f"kernel tables for {lowest:.6g} to {highest:.6g} 1/m: the plan holds for "
                f"{_LOWEST * self.wavenumber:.6g} to {self.wavenumber:.6g} 1/m",
                field="wavenumber",
                value=(lowest, highest),
                allowed="half the plan's wavenumber to all of it",
            )
        spectra = _stacked(
            kernel_spectra(self.layers, wavenumber, self.k_rho, self.profiles, ground_impedance)
        )
        log = self._log_weights(wavenumber)
        rest = spectra - log / (self.k_rho**2 + self.rate**2)
        rest[:2] -= self.image_spectra[:, None]
        powers = (self.k_rho**2 + self.rate**2)[:, None] ** (-0.5 * _TAIL_POWERS)
        ended = len(_TAIL_SAMPLES)
        fit = rest[..., -ended:] @ np.linalg.inv(powers[-ended:]).T
        rest = rest[..., :-ended] - fit @ powers[:-ended].T
        values = self.rule.integrate(rest) + fit @ self.tail.T + log * self.log_rest / TWO_PI
        entries = self._spread(values)
        entries[:2] += self.far[:, None]
        return self._named(entries, fit, log)

    def _spread(self, values: Complexes) -> Complexes:
        """From the rule's distances to the entries, on the last axis."""
        flat = values.reshape(-1, values.shape[-1])
        parts = self.spread @ np.concatenate([flat.real, flat.imag]).T
        real, imaginary = np.split(parts.T, 2)
        return (real + 1j * imaginary).reshape(*values.shape[:-1], -1)

    def _log_weights(self, wavenumber: Floats) -> Complexes:
        """Limit of k_rho² times each spectrum, (q, f, 1), once images are taken out."""
        flat = np.zeros((3, len(wavenumber)), dtype=complex)
        coupling = np.zeros((self.profiles, len(wavenumber)))
        probe = line_charge_weights(self.layers, wavenumber, self.profiles)
        pairs = probe.reshape(-1, len(wavenumber))
        return np.concatenate([flat, coupling, coupling + 1.0, pairs])[..., None]

    def _named(self, entries: Complexes, fit: Complexes, log: Complexes) -> KernelTables:
        """Split the entries of all kernels, (q, f, u), by name."""
        m = self.profiles
        square = (m, m, *entries.shape[1:])
        return KernelTables(
            step=self.step,
            current_images=self.near[0],
            charge_images=self.near[1],
            vector=entries[0],
            scalar=entries[1],
            vector_kink=-fit[0, :, 0] / TWO_PI,
            scalar_kink=-fit[1, :, 0] / TWO_PI,
            foot_scalar=entries[2],
            coupling=entries[3 : 3 + m],
            foot=entries[3 + m : 3 + 2 * m],
            probe=entries[3 + 2 * m :].reshape(square),
            probe_log=np.asarray(log[3 + 2 * m :].reshape(square[:-1]) / TWO_PI, dtype=complex),
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
        itself, m, >= 0; all but those of less than a thousandth of the source.
    profiles : int
        How many vertical currents, >= 0.

    Returns
    -------
    TablePlan
    """
    height = total_thickness(layers)
    # Higher profiles bring charges along the probe, spaced by their half periods.
    finest = min(layers[-1].thickness, height / max(1, 4 * (profiles - 1)))
    densest = wavenumber * max(abs(complex_permittivity(layer)) for layer in layers) ** 0.5
    distances, spread, step = table_grid(reach, finest, height, densest)
    rule = sommerfeld_rule(distances, wavenumber, densest, max(_DIED / finest, 12.0 * densest))
    rate = max(1.0 / height, densest)
    scaled = rate * distances
    scaled[0] = 1e-6  # not 0: the functions below stay finite there, their factors do not
    order = 0.5 * _TAIL_POWERS - 1.0
    tail = (0.5 * scaled[:, None]) ** order * kv(order, scaled[:, None]) / gamma(order + 1.0)
    entries = np.asarray(step * np.arange(spread.shape[0]), dtype=np.float64)
    k_rho = np.concatenate([rule.k_rho, rule.end * _TAIL_SAMPLES])
    images = (current_images(layers), charge_images(layers, _IMAGE_DEPTH * height))
    sharp = tuple(
        tuple(image for image in kind if image.depth <= near and abs(image.weight) > _FAINT)
        for kind in images
    )
    return TablePlan(
        layers=layers,
        wavenumber=wavenumber,
        profiles=profiles,
        step=step,
        rule=rule,
        k_rho=k_rho,
        spread=spread,
        rate=rate,
        tail=tail / rate ** (2.0 * order) / TWO_PI,
        log_rest=kv(0, scaled) + np.log(scaled / (rate * step)),
        near=(sharp[0], sharp[1]),
        image_spectra=np.stack([image_spectrum(kind, k_rho) for kind in images]),
        far=np.stack(
            [
                image_potential(set(kind) - set(listed), entries)
                for kind, listed in zip(images, sharp, strict=True)
            ]
        ),
    )


def _stacked(spectra: KernelSpectra) -> Complexes:
    """All spectra as one array, (q, f, n)."""
    single = np.stack([spectra.vector, spectra.scalar, spectra.foot_scalar])
    pairs = spectra.probe.reshape(-1, *single.shape[1:])
    return np.concatenate([single, spectra.coupling, spectra.foot, pairs])
