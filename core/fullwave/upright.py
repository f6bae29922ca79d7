"""Upright currents that charges on the copper polarise in the spacer, and what they do.

A charge on a face of the spacer polarises it (`core.fullwave.spacer_images`); an outflow of
current from a triangle thus comes with an upright current half way up the spacer. It acts on
the current in the probe, is acted on by it, and radiates.

Shapes: t triangles, n functions, d directions.
"""

from __future__ import annotations

from math import pi
from typing import TYPE_CHECKING

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.fullwave.far_field import far_field, summed_waves
from core.fullwave.mesh_model import Sheet
from core.fullwave.spacer_images import upright_arm
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]


def add_upright_coupling(
    matrix: Complexes, basis: Basis, sheets: Ints, layers: tuple[Layer, ...], frequency: float
) -> None:
    """Add the coupling of probe and coax tail to upright currents to a moment matrix.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Written to.
    basis : Basis
    sheets : (t,) ndarray of int
        `Sheet` of each triangle.
    layers : tuple of Layer
        Spacer from the ground up; none for air.
    frequency : float
        Hz.
    """
    arms = _arms(sheets, layers)
    on_probe = np.flatnonzero(_stands(sheets))
    if not arms.any() or not len(on_probe):
        return
    places = _places(basis, sheets, layers)
    distance = np.linalg.norm(places[on_probe, None] - places, axis=2)
    k = TWO_PI * frequency / SPEED_OF_LIGHT
    kernel = np.where(arms != 0.0, np.exp(-1j * k * distance) / np.maximum(distance, 1e-9), 0.0)
    outflow = np.tile(kernel * arms, 3) * basis.lengths.reshape(-1)
    climbs = np.zeros((len(on_probe), 3, basis.triangles))
    climb = basis.lengths / 2.0 * (places[:, 2] - basis.corners[:, :, 2].T)
    climbs[np.arange(len(on_probe)), :, on_probe] = climb[:, on_probe].T
    climbing = climbs.reshape(len(on_probe), -1)
    climbing = climbing[:, basis.plus] - climbing[:, basis.minus]
    functions = np.flatnonzero(climbing.any(axis=0))
    factor = 1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    block = factor * climbing[:, functions].T @ (outflow[:, basis.plus] - outflow[:, basis.minus])
    matrix[functions] += block
    matrix[:, functions] += block.T


def spacer_field(
    basis: Basis,
    sheets: Ints,
    layers: tuple[Layer, ...],
    currents: Complexes,
    frequency: float,
    directions: Floats,
) -> Complexes:
    """Far field of currents and of the upright currents that come with them.

    Parameters
    ----------
    basis : Basis
    sheets : (t,) ndarray of int
        `Sheet` of each triangle.
    layers : tuple of Layer
        Spacer from the ground up; none for air.
    currents : (n,) ndarray of complex
        A/m.
    frequency : float
        Hz.
    directions : (d, 3) ndarray of float
        Unit vectors.

    Returns
    -------
    (d, 3) ndarray of complex
        x, y and z components of r exp(jkr) E, V.
    """
    field = far_field(basis, currents, frequency, directions)
    arms = _arms(sheets, layers)
    if not arms.any():
        return field
    k = TWO_PI * frequency / SPEED_OF_LIGHT
    moments = arms * np.sum(basis.on_halves(currents) * basis.lengths, axis=0)
    summed = summed_waves(k * directions, _places(basis, sheets, layers), moments[:, None])
    across = np.array([0.0, 0.0, 1.0]) - directions[:, 2:] * directions
    factor = -1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    return np.asarray(field + factor * summed * across)


def _arms(sheets: Ints, layers: tuple[Layer, ...]) -> Floats:
    """Upright current times its length over the outflow of current, by triangle, m."""
    sides = (sheets == Sheet.TOP).astype(float) - (sheets == Sheet.GROUND)
    return np.asarray(upright_arm(layers) * sides)


def _places(basis: Basis, sheets: Ints, layers: tuple[Layer, ...]) -> Floats:
    """Middles of the triangles, on the plates half way up the spacer, m."""
    middles = basis.corners.mean(axis=1)
    middles[~_stands(sheets), 2] = total_thickness(layers) / 2.0
    return np.asarray(middles)


def _stands(sheets: Ints) -> NDArray[np.bool_]:
    """Whether a triangle belongs to a conductor out of the plates."""
    return np.asarray((sheets == Sheet.PROBE) | (sheets == Sheet.TAIL))
