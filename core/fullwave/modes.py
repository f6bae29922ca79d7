"""Natural resonances of an element, from the poles of what was solved over a band."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.fullwave.rational import fit_rational
from core.response.model import Mode

if TYPE_CHECKING:
    from core.fullwave.sweep import Sweep

_MODE_REACH = 1.3  # ratio to the brief's frequency within which a pole is a mode of the element
_LOWEST_Q, _HIGHEST_Q = 2.0, 2000.0
_SEEN = 0.15  # least height of a mode's peak over what is usual in the band
_APART = 0.5  # least distance of two modes of one direction, in half a width
_BESIDE = 1e-7  # of a pole, to take its residue at


def natural_modes(sweep: Sweep, frequency: float) -> tuple[Mode, ...]:
    """Natural resonances with the port open: poles of the impedance.

    Parameters
    ----------
    sweep : Sweep
        Of admittance (S) and boresight field along x and y of 1 V at the port.
    frequency : float
        Hz, about which modes are told.

    Returns
    -------
    tuple of Mode
        By rising frequency; empty where none stands out.

    Notes
    -----
    exp(j omega t) dies away for poles above the real axis; f = f_r (sqrt(1 - 1/4Q²) + j/2Q).
    """
    admittance, fields = sweep.values[:, :1], sweep.values[:, 1:]
    opened = np.concatenate([1.0 / admittance, fields / admittance], axis=1)
    count, quantities = opened.shape
    fit = fit_rational(sweep.frequencies, opened, (count * quantities + 1) // (quantities + 1))
    usual = np.sqrt(np.mean(np.abs(opened) ** 2, axis=0))
    usual[1:] = np.linalg.norm(usual[1:])
    found: list[tuple[float, complex, str]] = []
    for pole in fit.poles():
        size = abs(pole)
        if pole.imag <= 0.0 or not 1.0 / _MODE_REACH < size / frequency < _MODE_REACH:
            continue
        step = _BESIDE * size
        peak = np.abs(fit.at(np.array([pole + step]))[0]) * step / pole.imag / usual
        strength = max(peak[0], float(np.linalg.norm(peak[1:])))
        # What is hardly excited is there by the mesh's want of symmetry alone.
        if _LOWEST_Q < size / (2.0 * pole.imag) < _HIGHEST_Q and strength > _SEEN:
            found.append((strength, pole, "along x" if peak[1] > peak[2] else "along y"))
    return tuple(_mode(pole, name) for pole, name in _told_apart(found))


def _told_apart(found: list[tuple[float, complex, str]]) -> list[tuple[complex, str]]:
    """Poles and names by rising frequency, the strongest of those that run into one."""
    kept: list[tuple[complex, str]] = []
    for _, pole, name in sorted(found, key=lambda one: -one[0]):
        if all(name != other or abs(pole - at) > _APART * at.imag for at, other in kept):
            kept.append((pole, name))
    return sorted(kept, key=lambda one: abs(one[0]))


def _mode(pole: complex, name: str) -> Mode:
    return Mode(name, float(abs(pole)), float(abs(pole) / (2.0 * pole.imag)))
