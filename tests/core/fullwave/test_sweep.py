"""Sweeps against two resonators in closed form."""

import itertools
from collections.abc import Callable

import numpy as np
import pytest

from core.errors import Cancelled, ConvergenceError
from core.fullwave.rational import fit_rational
from core.fullwave.sweep import adaptive_sweep
from core.progress import SILENT

RESONANCES = (2.30e9, 2.42e9)
QUALITIES = (12.0, 14.0)


def quantities(frequency: float) -> np.ndarray:
    """Admittance and two fields of two resonators behind an inductance and a delay."""
    f = np.asarray(frequency, dtype=complex)
    shapes = [
        1j * f / (r**2 - f**2 + 1j * f * r / q) for r, q in zip(RESONANCES, QUALITIES, strict=True)
    ]
    z_in = 50 * 2.3e9 * (0.08 * shapes[0] + 0.07 * shapes[1]) + 30j * f / 2.4e9
    fields = [shape / z_in * np.exp(1j * f / 2.8e9) * 1e9 for shape in shapes]
    return np.stack([1 / z_in, *fields], axis=-1)


def reflection_distance(one: np.ndarray, other: np.ndarray) -> np.ndarray:
    a, b = ((1 - 50 * x[:, 0]) / (1 + 50 * x[:, 0]) for x in (one, other))
    return np.abs(a - b)


@pytest.mark.parametrize("width", [0.05, 0.2, 0.4])
def test_sweep_is_as_true_as_it_says(width: float) -> None:
    band = (2.35e9 * (1 - width / 2), 2.35e9 * (1 + width / 2))
    sweep = adaptive_sweep(quantities, band, 2.32e9, reflection_distance, 1e-4, SILENT)
    grid = np.linspace(*band, 400)
    assert np.max(reflection_distance(sweep.fit.at(grid), quantities(grid))) < 3e-4
    assert len(sweep.frequencies) <= 9
    assert 2.32e9 in sweep.frequencies


def weak(at: float, quality: float, strength: float) -> Callable[[float], np.ndarray]:
    """Quantities of one resonance, hardly coupled, beside one far above the band."""

    def quantities(frequency: float) -> np.ndarray:
        f = np.asarray(frequency, dtype=complex)
        near = 1j * f / (at**2 - f**2 + 1j * f * at / quality)
        far = 1j * f / (3.6e9**2 - f**2 + 1j * f * 3.6e9 / 30.0)
        resonant = 50.0 * strength * at * near + 12j * f / 2.4e9
        field = near / resonant * np.exp(1j * f / 2.8e9) * 1e9
        admittance = 1.0 / (resonant + 50.0 * 0.02 * 3.6e9 * far)
        return np.stack([admittance, field, 0.2j * field * (1.0 + f / 3e9)], axis=-1)

    return quantities


def test_narrow_resonances_between_solved_frequencies_are_found() -> None:
    # A test of the fit at the place of greatest doubt alone misses 56 of these 192.
    band = (0.8 * 2.35e9, 1.2 * 2.35e9)
    missed = 0
    for quality, strength in itertools.product((20, 50, 100, 200), (0.004, 0.015, 0.03)):
        for at in np.linspace(2.0e9, 2.75e9, 16):
            antenna = weak(float(at), quality, strength * min(1.0, quality / 100.0))
            sweep = adaptive_sweep(antenna, band, 2.35e9, reflection_distance, 2e-3, SILENT)
            grid = np.linspace(0.95 * at, 1.05 * at, 400)
            grid = grid[(grid > band[0]) & (grid < band[1])]
            apart = reflection_distance(sweep.fit.at(grid), antenna(grid))
            missed += bool(np.max(apart) > 5e-3)
    assert missed <= 8


def test_poles_are_the_natural_frequencies() -> None:
    grid = np.linspace(2.1e9, 2.6e9, 9)
    values = quantities(grid)
    open_port = np.concatenate([1 / values[:, :1], values[:, 1:] / values[:, :1]], axis=1)
    poles = fit_rational(grid, open_port, 7).poles()
    for resonance, quality in zip(RESONANCES, QUALITIES, strict=True):
        half = 1 / (2 * quality)
        exact = resonance * (np.sqrt(1 - half**2) + 1j * half)
        assert np.min(np.abs(poles - exact)) < 1e-4 * resonance


def test_fit_meets_its_samples_at_support_points() -> None:
    grid = np.linspace(2.1e9, 2.6e9, 7)
    fit = fit_rational(grid, quantities(grid), 5)
    np.testing.assert_allclose(fit.at(fit.support), quantities(fit.support), rtol=1e-12)


def test_a_rough_function_is_said_not_to_settle() -> None:
    noise = np.random.default_rng(1)

    def rough(frequency: float) -> np.ndarray:
        return quantities(frequency) + noise.normal(size=3) * 0.05

    with pytest.raises(ConvergenceError, match="narrower band"):
        adaptive_sweep(rough, (2.1e9, 2.6e9), 2.32e9, reflection_distance, 1e-6, SILENT)


def test_a_sweep_can_be_cancelled() -> None:
    class Stop:
        def step(self, done: int, total: int) -> None:
            raise Cancelled

    with pytest.raises(Cancelled):
        adaptive_sweep(quantities, (2.1e9, 2.6e9), 2.32e9, reflection_distance, 1e-4, Stop())
