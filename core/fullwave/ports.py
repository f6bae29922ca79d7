"""Excitations: a ring source in the mouth of the coax, and a gap across a strip.

The coax's mouth in the closed ground plate carries the field of its own wave, radial as
1/r, as a ring of magnetic current just above the plate [1]_. For a ring much smaller than a
wavelength its field is that of a layer of electric dipoles, the gradient of a potential
that can be written down; what is left out is of the order of (k b)².

Shapes: t triangles, n functions.

References
----------
.. [1] L. L. Tsai, "A numerical solution for the near and far fields of an annular ring of
   magnetic current", IEEE Trans. Antennas Propag. 20(5), 1972, 569-576.
"""

from __future__ import annotations

from math import log, pi
from typing import TYPE_CHECKING

import numpy as np
from scipy.special import ellipe, ellipk

from core.constants import VACUUM_PERMITTIVITY
from core.fullwave.mesh_model import Sheet
from core.fullwave.quadrature import triangle_rule

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.fullwave.mesh_model import CoaxRing, Mesh

    Floats = NDArray[np.float64]

_RADII, _TURNS = 12, 32  # points of the ring: across and once round
_FAR = 12.0  # outer radii from which the ring is one dipole, to a few parts in a thousand


def ring_excitation(mesh: Mesh, basis: Basis, ring: CoaxRing) -> Floats:
    """Reactions of the basis functions with the ring's field at 1 V.

    Parameters
    ----------
    mesh : Mesh
        With a probe that starts on the ground plate inside the ring.
    basis : Basis
        Of that mesh.
    ring : CoaxRing

    Returns
    -------
    (n,) ndarray of float
        V m.
    """
    rule = triangle_rule(4)
    points = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)
    potential = np.empty(points.shape[:2])
    plate, pin = mesh.sheet == Sheet.GROUND, mesh.sheet == Sheet.PROBE
    away = np.hypot(points[..., 0] - ring.x, points[..., 1] - ring.y)
    # The plate is under the layer of dipoles, the foot of the pin just above it.
    potential[plate] = -_drop(away[plate], ring) / 2.0
    potential[pin] = _beside_pin(points[pin][..., 2], ring)
    above = ~(plate | pin)
    potential[above] = _above(away[above], points[above][..., 2], ring)
    mean = potential @ rule[:, 3]
    halves = basis.lengths * mean
    # From plate to pin the potential jumps by the voltage; no field stands behind that step.
    on_plate, on_pin = plate[basis.plus % basis.triangles], pin[basis.plus % basis.triangles]
    to_plate, to_pin = plate[basis.minus % basis.triangles], pin[basis.minus % basis.triangles]
    steps = (on_pin & to_plate).astype(float) - (on_plate & to_pin).astype(float)
    width = basis.lengths.reshape(-1)[basis.plus]
    return np.asarray(basis.tested(halves.astype(np.complex128)).real - steps * width)


def ring_capacitance(ring: CoaxRing) -> float:
    """Capacitance that the ring's own magnetic current adds to the port, F.

    Parameters
    ----------
    ring : CoaxRing

    Returns
    -------
    float
        Of the ring alone; the ground plate's share comes with the currents.
    """
    x, w = np.polynomial.legendre.leggauss(40)
    y, v = np.polynomial.legendre.leggauss(41)  # other points, to keep off equal radii
    middle, half = (ring.inner + ring.outer) / 2.0, (ring.outer - ring.inner) / 2.0
    one, two = (middle + half * x)[:, None], middle + half * y
    m = 4.0 * one * two / (one + two) ** 2
    root = np.sqrt(m)
    loops = 2.0 / np.sqrt(one * two) * ((2.0 / root - root) * ellipk(m) - 2.0 / root * ellipe(m))
    total = float((w * half) @ loops @ (v * half))
    return VACUUM_PERMITTIVITY * total / (2.0 * log(ring.outer / ring.inner) ** 2)


def _drop(away: Floats, ring: CoaxRing) -> Floats:
    """Potential in the mouth at 1 V: 1 on the pin, 0 on the rim."""
    inside = np.clip(away, ring.inner, ring.outer)
    return np.asarray(np.log(ring.outer / inside) / log(ring.outer / ring.inner))


def _radii(ring: CoaxRing) -> tuple[Floats, Floats]:
    """Radii across the ring, m, and what share of the voltage drops at each."""
    x, w = np.polynomial.legendre.leggauss(_RADII)
    spread = log(ring.outer / ring.inner)
    return ring.inner * np.exp(spread * (x + 1.0) / 2.0), w / 2.0


def _beside_pin(z: Floats, ring: CoaxRing) -> Floats:
    """Potential on the pin's surface: solid angles of discs seen from above their inside."""
    radii, shares = _radii(ring)
    turn = 2.0 * pi * (np.arange(_TURNS) + 0.5) / _TURNS
    rim = -ring.inner * np.cos(turn) + np.sqrt(
        radii[:, None] ** 2 - (ring.inner * np.sin(turn)) ** 2
    )
    height = np.maximum(z, 0.0)[..., None, None]
    angles = 1.0 - height / np.sqrt(height**2 + rim**2)
    return np.asarray(angles.mean(axis=-1) @ shares / 2.0)


def _above(away: Floats, z: Floats, ring: CoaxRing) -> Floats:
    """Potential of the dipole layer above it: as one dipole far away, point by point nearby."""
    far = np.hypot(away, z)
    moment = (ring.outer**2 - ring.inner**2) / (8.0 * log(ring.outer / ring.inner))
    potential = moment * z / far**3
    near = far < _FAR * ring.outer
    x, w = np.polynomial.legendre.leggauss(_RADII)
    radii = ring.outer * (x + 1.0) / 2.0
    weights = w / 2.0 * ring.outer * radii * _drop(radii, ring) / _TURNS / 2.0
    turn = 2.0 * pi * (np.arange(_TURNS) + 0.5) / _TURNS
    height = z[near, None, None]
    squared = (
        (away[near, None, None] - radii[:, None] * np.cos(turn)) ** 2
        + (radii[:, None] * np.sin(turn)) ** 2
        + height**2
    )
    potential[near] = (height / squared**1.5).sum(axis=-1) @ weights
    return np.asarray(potential)
