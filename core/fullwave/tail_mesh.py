"""Mesh of a cable behind the ground plate: a tube from a ring in the plate.

Shapes: n corners of the prism that stands for the cable.
"""

from __future__ import annotations

from math import ceil, cos, sin
from typing import TYPE_CHECKING, Final

import numpy as np
import shapely

from core.errors import ModelError

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.layout.tail import Tail

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

_GROWTH: Final = 1.0  # of cells along the tube, per distance from the plate


def tail_mouth(plate: shapely.Polygon, pin: Floats, ring: Floats) -> shapely.Polygon:
    """Ground plate with a hole as large as the cable's prism in place of the pin's.

    Parameters
    ----------
    plate : shapely.Polygon
        With a hole that is the pin's outline, m.
    pin, ring : (n, 2) ndarray of float
        Corners of the prisms of pin and cable, m.

    Returns
    -------
    shapely.Polygon

    Raises
    ------
    ModelError
        If the cable breaks the rim of the plate.
    """
    inside = shapely.Polygon(pin).centroid
    others = [hole for hole in plate.interiors if not shapely.Polygon(hole).contains(inside)]
    closed = shapely.Polygon(plate.exterior, others)
    if not shapely.contains_properly(closed, shapely.Polygon(ring)):
        raise ModelError(
            "coax tail: the cable reaches over the rim of the ground plate; accepted: a thinner "
            "cable, or a coax further inside"
        )
    rings = [np.asarray(hole.coords) for hole in others]
    return shapely.Polygon(np.asarray(plate.exterior.coords), [*rings, ring[::-1]])


def washer(pin: Floats, ring: Floats) -> tuple[Floats, Ints]:
    """Ground plate between pin and cable.

    Parameters
    ----------
    pin, ring : (n, 2) ndarray of float
        Corners of the prisms, m.

    Returns
    -------
    vertices : (2 n, 3) ndarray of float
        m.
    triangles : (2 n, 3) ndarray of int
        Counter-clockwise seen from above.
    """
    n = len(pin)
    here, there = np.arange(n), (np.arange(n) + 1) % n
    triangles = np.concatenate(
        [np.column_stack([here, n + here, n + there]), np.column_stack([here, n + there, there])]
    )
    return np.column_stack([np.vstack([pin, ring]), np.zeros(2 * n)]), triangles


def tail_tube(tail: Tail, ring: Floats, cell: float) -> tuple[Floats, Ints]:
    """Tube of a cable, open at its end.

    Parameters
    ----------
    tail : Tail
    ring : (n, 2) ndarray of float
        Corners of its prism in the ground plate, m.
    cell : float
        Longest cell along it, m.

    Returns
    -------
    vertices : (v, 3) ndarray of float
        m.
    triangles : (t, 3) ndarray of int
        Counter-clockwise seen from outside.
    """
    n = len(ring)
    side = float(np.linalg.norm(ring[1] - ring[0]))
    start = np.column_stack([ring, np.zeros(n)])
    drop = tail.length if tail.drop is None else tail.drop
    way = np.array([cos(tail.azimuth), sin(tail.azimuth), 0.0])
    # Round the bend the prism is mitred: its edges turn where they meet the plane between.
    lift = np.zeros(n) if tail.drop is None else (start - start.mean(axis=0)) @ way
    turn = start - np.array([0.0, 0.0, drop])
    turn[:, 2] += lift
    rings = [start + place * (turn - start) for place in _places(drop, side, cell)]
    if tail.drop is not None:
        end = turn + (tail.length - drop - lift)[:, None] * way
        count = ceil((tail.length - drop) / cell)
        rings += [turn + i / count * (end - turn) for i in range(1, count + 1)]
    here = (np.arange(len(rings) - 1)[:, None] * n + np.arange(n)).ravel()
    there = (np.arange(len(rings) - 1)[:, None] * n + (np.arange(n) + 1) % n).ravel()
    triangles = np.concatenate(
        [
            np.column_stack([here, here + n, there + n]),
            np.column_stack([here, there + n, there]),
        ]
    )
    return np.vstack(rings), triangles


def _places(length: float, first: float, longest: float) -> Floats:
    """Places 0 to 1 along the tube, close together at the plate."""
    places = [0.0]
    while places[-1] < length:
        places.append(places[-1] + min(longest, first + _GROWTH * places[-1]))
    return np.asarray(places) / places[-1]
