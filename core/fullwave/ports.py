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
from scipy.special import ellipe, ellipk, ellipkm1, elliprf, elliprj

from core.constants import VACUUM_PERMITTIVITY
from core.fullwave.mesh_model import Sheet
from core.fullwave.quadrature import triangle_rule

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.fullwave.mesh_model import CoaxRing, Mesh

    Floats = NDArray[np.float64]

_RADII = 12  # points across the ring
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
    tail = mesh.sheet == Sheet.TAIL
    away = np.hypot(points[..., 0] - ring.x, points[..., 1] - ring.y)
    # The plate is under the layer of dipoles, the foot of the pin just above it.
    potential[plate] = -_drop(away[plate], ring) / 2.0
    away[pin] = ring.inner
    # Below the layer the potential is the same with its sign turned round.
    side, height = np.where(tail, -1.0, 1.0)[~plate, None], np.abs(points[~plate][..., 2])
    potential[~plate] = side * _above_ring(away[~plate], height, ring)
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
    share, weight = (1.0 + x) / 2.0, w / 2.0
    one = (ring.inner + share * (ring.outer - ring.inner))[:, None]
    # The other loop from the first one outwards and inwards, crowded where they meet: their
    # inductance grows there as a logarithm.
    to_end = np.concatenate([ring.outer - one, ring.inner - one], axis=1)
    two = one[..., None] + to_end[..., None] * share**2
    apart = (to_end[..., None] * share**2 / (one[..., None] + two)) ** 2  # 1 - m
    m = 1.0 - apart
    root = np.sqrt(m)
    loops = (2.0 / root - root) * ellipkm1(apart) - 2.0 / root * ellipe(m)
    loops *= 2.0 / np.sqrt(one[..., None] * two) * np.abs(to_end)[..., None]
    inner = np.sum(loops * (2.0 * share * weight), axis=(1, 2))
    total = float(inner @ weight) * (ring.outer - ring.inner)
    return VACUUM_PERMITTIVITY * total / (2.0 * log(ring.outer / ring.inner) ** 2)


def _drop(away: Floats, ring: CoaxRing) -> Floats:
    """Potential in the mouth at 1 V: 1 on the pin, 0 on the rim."""
    inside = np.clip(away, ring.inner, ring.outer)
    return np.asarray(np.log(ring.outer / inside) / log(ring.outer / ring.inner))


def _above_ring(away: Floats, z: Floats, ring: CoaxRing) -> Floats:
    """Potential above the dipole layer at 1 V: near it, of discs as large as the ring's radii."""
    far = np.hypot(away, z)
    moment = (ring.outer**2 - ring.inner**2) / (8.0 * log(ring.outer / ring.inner))
    potential = np.asarray(moment * z / far**3)
    near = far < _FAR * ring.outer
    places, weights = np.polynomial.legendre.leggauss(_RADII)
    radii = ring.inner * (ring.outer / ring.inner) ** ((places + 1.0) / 2.0)
    angles = _solid_angle(away[near, None], z[near, None], radii)
    potential[near] = angles @ weights / (8.0 * pi)
    return potential


def _solid_angle(away: Floats, z: Floats, radius: Floats) -> Floats:
    """Solid angle of discs at z = 0 seen from a point at z > 0.

    F. Paxton, Rev. Sci. Instrum. 30, 1959, 254-258 (from memory, checked against sums).
    """
    total = away + radius
    reach = np.hypot(z, total)
    m = 4.0 * away * radius / reach**2
    n = np.minimum(4.0 * away * radius / total**2, 1.0 - 1e-12)
    third = elliprf(0.0, 1.0 - m, 1.0) + n / 3.0 * elliprj(0.0, 1.0 - m, 1.0, 1.0 - n)
    beyond = (away - radius) / total * third - ellipk(m)
    return np.asarray(np.where(away < radius, 2.0 * pi, 0.0) + 2.0 * z / reach * beyond)
