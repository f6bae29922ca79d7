"""What a mesh of an antenna's conductors is made of."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


class Sheet(IntEnum):
    """Which conductor a triangle belongs to."""

    GROUND = 0
    PROBE = 1
    TOP = 2
    TAIL = 3


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
        m; the ground plate at z = 0, a coax tail below it.
    triangles : (t, 3) ndarray of int
        Counter-clockwise seen from above on the plates, from outside on probe and
        tail.
    sheet : (t,) ndarray of int
        `Sheet` of each triangle.
    port : CoaxRing or None
        Where the antenna is fed.
    """

    vertices: Floats
    triangles: Ints
    sheet: Ints
    port: CoaxRing | None
