"""Delaunay triangles of points in a plane that keep wanted lines.

Lines that the triangulation misses are put back by swapping diagonals [1]_.

References
----------
.. [1] S. W. Sloan, "A fast algorithm for generating constrained Delaunay triangulations",
   Computers & Structures 47(3), 1993, 441-450.
"""

from __future__ import annotations

from collections import deque
from typing import TYPE_CHECKING

import numpy as np
from scipy.spatial import Delaunay

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

_MOST_SWAPS = 400  # a line; it takes a few


def constrained_delaunay(points: Floats, must: Ints, should: Ints) -> tuple[Ints, bool]:
    """Triangles of the convex hull of points, with lines that must and lines that should be kept.

    Parameters
    ----------
    points : (n, 2) ndarray of float
        m.
    must : (k, 2) ndarray of int
        Pairs of points to join; they must not cross.
    should : (r, 2) ndarray of int
        Pairs to join where no earlier line is in the way.

    Returns
    -------
    triangles : (m, 3) ndarray of int
        Counter-clockwise.
    complete : bool
        Whether every line of `must` is there.
    """
    centre = points.mean(axis=0)
    scaled = (points - centre) / np.abs(points - centre).max()
    triangles = np.asarray(Delaunay(scaled).simplices, dtype=np.int64)
    a, b, c = (scaled[triangles[:, i]] for i in range(3))
    clockwise = _cross(b - a, c - a) < 0.0
    triangles[clockwise] = triangles[clockwise][:, [0, 2, 1]]
    missing = [_missing(lines, triangles, len(points)) for lines in (must, should)]
    if not any(len(lines) for lines in missing):
        return triangles, True
    net = _Net(scaled, triangles, must)
    joined = [net.join(u, v) for u, v in missing[0].tolist()]
    for u, v in missing[1].tolist():
        net.join(u, v)
    return net.triangles(), all(joined)


def _missing(lines: Ints, triangles: Ints, count: int) -> Ints:
    """Those lines that are no edge of a triangle."""
    ends = np.sort(np.concatenate([triangles[:, [i, (i + 1) % 3]] for i in range(3)]), axis=1)
    wanted = np.sort(lines, axis=1)
    return lines[~np.isin(wanted[:, 0] * count + wanted[:, 1], ends[:, 0] * count + ends[:, 1])]


def _cross(u: Floats, v: Floats) -> Floats:
    return np.asarray(u[..., 0] * v[..., 1] - u[..., 1] * v[..., 0])


class _Net:
    """Triangles as a table from each directed edge to the corner on its left."""

    def __init__(self, points: Floats, triangles: Ints, fixed: Ints) -> None:
        self._points: list[tuple[float, float]] = [(x, y) for x, y in points.tolist()]
        self._apex: dict[tuple[int, int], int] = {}
        for u, v, w in triangles.tolist():
            self._apex[u, v], self._apex[v, w], self._apex[w, u] = w, u, v
        self._fixed = {frozenset(line) for line in fixed.tolist()}
        self._spokes = dict(iter(self._apex))  # a neighbour of each point

    def join(self, a: int, b: int) -> bool:
        """Make a-b an edge by swapping the diagonals in its way; tell whether it is one."""
        crossing = deque(self._crossings(a, b))
        for _ in range(_MOST_SWAPS):
            if not crossing:
                break
            u, v = crossing.popleft()
            if frozenset((u, v)) in self._fixed:
                return False
            w, x = self._apex[u, v], self._apex[v, u]
            if not self._meet(u, v, w, x):
                crossing.append((u, v))
                continue
            self._swap(u, v, w, x)
            if {w, x} & {a, b} == set() and self._meet(w, x, a, b):
                crossing.append((w, x))
        joined = (a, b) in self._apex or (b, a) in self._apex
        if joined:
            self._fixed.add(frozenset((a, b)))
        return joined

    def triangles(self) -> Ints:
        """Triangles (m, 3), counter-clockwise, each once."""
        found = [(u, v, w) for (u, v), w in self._apex.items() if u < v and u < w]
        return np.array(sorted(found), dtype=np.int64)

    def _crossings(self, a: int, b: int) -> list[tuple[int, int]]:
        """Edges that the line a-b crosses, from a on; none where it runs through a point."""
        edge = next((one for one in self._facing(a) if self._meet(*one, a, b)), None)
        met = []
        while edge is not None:
            u, v = edge
            met.append(edge)
            ahead = self._apex.get((v, u))
            if ahead == b:
                return met
            ways = [] if ahead is None else [(u, ahead), (ahead, v)]
            edge = next((one for one in ways if self._meet(*one, a, b)), None)
        return []

    def _facing(self, a: int) -> list[tuple[int, int]]:
        """Edges opposite a point in the triangles round it, counter-clockwise."""
        first = v = self._spokes.get(a, -1)  # none for a point that falls onto another
        edges = []
        while (w := self._apex.get((a, v))) is not None:
            edges.append((v, w))
            v = w
            if v == first:
                return edges
        v = first  # an edge of the hull stops the way round: the rest lies on its other side
        while (w := self._apex.get((v, a))) is not None:
            edges.append((w, v))
            v = w
        return edges

    def _meet(self, u: int, v: int, a: int, b: int) -> bool:
        """Whether the lines u-v and a-b cross inside both."""
        return self._parts(a, b, u, v) and self._parts(u, v, a, b)

    def _parts(self, a: int, b: int, u: int, v: int) -> bool:
        """Whether the endless line through a and b runs between u and v."""
        (ax, ay), (bx, by), (ux, uy), (vx, vy) = (self._points[i] for i in (a, b, u, v))
        dx, dy = bx - ax, by - ay
        one, other = dx * (uy - ay) - dy * (ux - ax), dx * (vy - ay) - dy * (vx - ax)
        return one < 0.0 < other or other < 0.0 < one

    def _swap(self, u: int, v: int, w: int, x: int) -> None:
        """Replace the diagonal u-v of the quadrilateral u, x, v, w by x-w."""
        apex = self._apex
        del apex[u, v], apex[v, u]
        apex[u, x], apex[x, w], apex[w, u] = w, u, x
        apex[x, v], apex[v, w], apex[w, x] = w, x, v
        self._spokes.update({u: x, x: v, v: w, w: u})
