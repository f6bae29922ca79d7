"""What a mesh of an antenna's conductors is made of, and a report on it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


class Sheet(IntEnum):
    """Which conductor a triangle belongs to."""

    GROUND = 0
    PROBE = 1
    TOP = 2


@dataclass(frozen=True)
class CoaxRing:
    """Mouth of the coax in the ground plate.

    Attributes
    ----------
    x, y : float
        Centre, m.
    inner, outer : float
        Radii of the pin and of the clearance hole, m.
    """

    x: float
    y: float
    inner: float
    outer: float


@dataclass(frozen=True, eq=False)
class Mesh:
    """Triangles of all conductors.

    Attributes
    ----------
    vertices : (v, 3) ndarray of float
        m; the ground plate at z = 0.
    triangles : (t, 3) ndarray of int
        Counter-clockwise seen from above on the plates, from outside on the probe.
    sheet : (t,) ndarray of int
        `Sheet` of each triangle.
    port : CoaxRing or None
        Where the antenna is fed.
    """

    vertices: Floats
    triangles: Ints
    sheet: Ints
    port: CoaxRing | None


@dataclass(frozen=True)
class MeshQuality:
    """Report on a mesh.

    Attributes
    ----------
    triangles : int
    unknowns : int
        Basis functions of the field solver on it.
    smallest_angle : float
        rad; the rows of edge cells are narrow on purpose.
    shortest, longest : float
        Triangle edges, m.
    """

    triangles: int
    unknowns: int
    smallest_angle: float
    shortest: float
    longest: float


def mesh_quality(mesh: Mesh) -> MeshQuality:
    """Count and measure the triangles of a mesh.

    Parameters
    ----------
    mesh : Mesh

    Returns
    -------
    MeshQuality
    """
    corners = mesh.vertices[mesh.triangles]
    sides = np.roll(corners, -1, axis=1) - corners
    lengths = np.sort(np.linalg.norm(sides, axis=2), axis=1)
    areas = np.linalg.norm(np.cross(sides[:, 0], sides[:, 1]), axis=1) / 2.0
    # The smallest angle lies between the two longer sides.
    sines = 2.0 * areas / (lengths[:, 1] * lengths[:, 2])
    ends = np.sort(mesh.triangles[:, [[0, 1], [1, 2], [2, 0]]].reshape(-1, 2), axis=1)
    edges = len(np.unique(ends, axis=0))
    return MeshQuality(
        triangles=len(areas),
        unknowns=len(ends) - edges,
        smallest_angle=float(np.arcsin(np.clip(sines, 0.0, 1.0)).min()),
        shortest=float(lengths.min()),
        longest=float(lengths.max()),
    )
