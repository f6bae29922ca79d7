"""Current basis functions on the edges of a triangle mesh (Rao, Wilton and Glisson 1982 [1]_).

A function is a difference of two halves. A half lives on one triangle: it flows from the
corner opposite its edge, f = l (r - p) / (2 A), and leaves through that edge. Halves are
numbered corner * triangles + triangle. Where k triangles meet on one edge there are k - 1
functions, each from one common triangle to one of the others.

Shapes: v vertices, t triangles, n functions.

References
----------
.. [1] S. M. Rao, D. R. Wilton, A. W. Glisson, "Electromagnetic scattering by surfaces of
   arbitrary shape", IEEE Trans. Antennas Propag. 30(3), 1982, 409-418.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Basis:
    """Functions on a mesh.

    Attributes
    ----------
    corners : (t, 3, 3) ndarray of float
        Corners of each triangle, m.
    areas : (t,) ndarray of float
        m².
    lengths : (3, t) ndarray of float
        Of the edge opposite each corner, m.
    plus, minus : (n,) ndarray of int
        Halves that a function is the difference of.
    ends : (n, 2) ndarray of int
        Vertices at the ends of each function's edge.
    """

    corners: Floats
    areas: Floats
    lengths: Floats
    plus: Ints
    minus: Ints
    ends: Ints

    @property
    def count(self) -> int:
        """Number of functions, the unknowns."""
        return len(self.plus)

    @property
    def triangles(self) -> int:
        """Number of triangles."""
        return len(self.areas)

    def on_halves(self, values: NDArray[np.complex128]) -> NDArray[np.complex128]:
        """Coefficients (3, t) of the halves, from those (n,) of the functions."""
        halves = np.zeros(3 * self.triangles, dtype=np.complex128)
        np.add.at(halves, self.plus, values)
        np.subtract.at(halves, self.minus, values)
        return halves.reshape(3, -1)

    def tested(self, on_halves: NDArray[np.complex128]) -> NDArray[np.complex128]:
        """Reactions (n,) of the functions, from those (3, t) of the halves."""
        flat = on_halves.reshape(-1)
        return np.asarray(flat[self.plus] - flat[self.minus])


def build_basis(vertices: Floats, triangles: Ints, rank: Ints) -> Basis:
    """Functions on every inner edge of a mesh.

    Parameters
    ----------
    vertices : (v, 3) ndarray of float
        m.
    triangles : (t, 3) ndarray of int
    rank : (t,) ndarray of int
        Where more than two triangles meet, the one of highest rank is the common one.

    Returns
    -------
    Basis
    """
    corners = vertices[triangles]
    sides = corners[:, [2, 0, 1]] - corners[:, [1, 2, 0]]  # opposite corner 0, 1, 2
    normals = np.cross(sides[:, 0], sides[:, 1])
    ends = np.sort(
        np.concatenate([triangles[:, [(a + 1) % 3, (a + 2) % 3]] for a in range(3)]), axis=1
    )
    halves = np.lexsort((-np.tile(rank, 3), ends[:, 1], ends[:, 0]))
    fresh = np.ones(len(halves), dtype=bool)
    fresh[1:] = (ends[halves[1:]] != ends[halves[:-1]]).any(axis=1)
    first = np.maximum.accumulate(np.where(fresh, np.arange(len(halves)), 0))
    plus, minus = halves[first][~fresh], halves[~fresh]
    # By the last triangle, so that the matrix fill can leave out those that it is past.
    order = np.argsort(np.maximum(plus % len(rank), minus % len(rank)), kind="stable")
    plus, minus = plus[order], minus[order]
    return Basis(
        corners=corners,
        areas=np.linalg.norm(normals, axis=1) / 2.0,
        lengths=np.ascontiguousarray(np.linalg.norm(sides, axis=2).T),
        plus=plus,
        minus=minus,
        ends=ends[plus],
    )
