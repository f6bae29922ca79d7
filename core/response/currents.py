"""The current that was solved on an antenna's conductors, as it is drawn and read off.

Shapes: v vertices, t triangles, n places.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
import shapely

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]


@dataclass(frozen=True, eq=False)
class SheetCurrent:
    """Surface current on one flat sheet, both faces of the foil together.

    Attributes
    ----------
    vertices : (v, 2) ndarray of float
        Corners of the mesh in the plan, m.
    triangles : (t, 3) ndarray of int
        Vertices of each triangle, counter-clockwise.
    density : (t, 3, 2) ndarray of complex
        x and y components at each triangle's corners, linear between them: the amplitude (peak
        value, not effective) with 1 W accepted at the port, A/m. Triangles that share an edge
        agree in what flows across it, not in what flows along it.
    """

    vertices: Floats
    triangles: Ints
    density: Complexes

    def __post_init__(self) -> None:
        for name in ("vertices", "triangles", "density"):
            values = np.array(getattr(self, name))
            values.flags.writeable = False
            object.__setattr__(self, name, values)

    @cached_property
    def areas(self) -> Floats:
        """Area of each triangle, m², shape (t,)."""
        return _twice_area(*np.moveaxis(self.vertices[self.triangles], 1, 0)) / 2.0

    @cached_property
    def at_vertices(self) -> Complexes:
        """Mean of the triangles round each vertex, by their areas, A/m, shape (v, 2)."""
        shares = np.repeat(self.areas, 3)
        corners, count = self.triangles.reshape(-1), len(self.vertices)
        total = np.bincount(corners, shares, count)
        flat = self.density.reshape(-1, 2)
        sums = [
            np.bincount(corners, shares * flat[:, i].real, count)
            + 1j * np.bincount(corners, shares * flat[:, i].imag, count)
            for i in (0, 1)
        ]
        return np.asarray(np.stack(sums, axis=1) / total[:, None])

    @cached_property
    def _tree(self) -> shapely.STRtree:
        return shapely.STRtree([shapely.Polygon(one) for one in self.vertices[self.triangles]])

    def at(self, places: Floats) -> tuple[Ints, Complexes]:
        """Current at places on the sheet, smoothed as at the vertices.

        Parameters
        ----------
        places : (n, 2) ndarray of float
            m.

        Returns
        -------
        which : (m,) ndarray of int
            Those of the places that lie on the sheet, rising.
        density : (m, 2) ndarray of complex
            x and y components there, A/m.
        """
        hits, found = self._tree.query(shapely.points(places), predicate="intersects")
        # A place on an edge is found twice; either triangle says the same.
        which, first = np.unique(hits, return_index=True)
        rows = self.triangles[found[first]]
        a, b, c = np.moveaxis(self.vertices[rows], 1, 0)
        here = places[which]
        sides = ((b, c), (c, a), (a, b))
        shares = np.stack([_twice_area(here, *side) for side in sides], axis=1)
        shares /= shares.sum(axis=1, keepdims=True)
        return which, np.asarray(np.einsum("mi,mix->mx", shares, self.at_vertices[rows]))


@dataclass(frozen=True, eq=False)
class Currents:
    """Surface currents at one frequency.

    Attributes
    ----------
    frequency : float
        Hz.
    top : SheetCurrent
        On element, strips and pads.
    ground : SheetCurrent or None
        On the ground plate; None where it is taken as infinite.
    """

    frequency: float
    top: SheetCurrent
    ground: SheetCurrent | None


def greatest(density: Complexes) -> Floats:
    """Greatest size of a current in a period.

    Parameters
    ----------
    density : (..., 2) ndarray of complex
        Amplitudes along x and y.

    Returns
    -------
    (...,) ndarray of float
        Half the long axis of the ellipse that Re(J exp(j omega t)) goes round.
    """
    squares = np.sum(np.abs(density) ** 2, axis=-1)
    return np.asarray(np.sqrt((squares + np.abs(np.sum(density**2, axis=-1))) / 2.0))


def at_instant(density: Complexes, phase: float) -> Floats:
    """Current at one instant, Re(J exp(j phase)).

    Parameters
    ----------
    density : (..., 2) ndarray of complex
        Amplitudes along x and y.
    phase : float
        rad, 2 pi a period.

    Returns
    -------
    (..., 2) ndarray of float
    """
    return np.asarray(np.cos(phase) * density.real - np.sin(phase) * density.imag)


def _twice_area(a: Floats, b: Floats, c: Floats) -> Floats:
    """Twice the area of triangles (m, 2), (m, 2), (m, 2)."""
    one, other = b - a, c - a
    return np.asarray(one[:, 0] * other[:, 1] - one[:, 1] * other[:, 0])
