"""Points along the edges of a sheet, and the narrow row of cells just inside them.

Charge crowds at a copper edge as one over the root of the distance: a narrow row along
every edge follows it with far fewer triangles than a finer mesh would need.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from shapely.geometry.polygon import orient

from core.fullwave.sizes import first_hits, ring_segments

if TYPE_CHECKING:
    import shapely
    from numpy.typing import NDArray

    from core.fullwave.sizes import Sizes

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

_SHARE = 0.25  # of a strip's width that the row along each of its edges takes at most
_TOGETHER = 0.5  # row points closer than this, in row widths, are made one
_LONGEST_MITRE = 2.5  # row widths


@dataclass(frozen=True, eq=False)
class Edging:
    """Points on the edges of a sheet and the row inside them.

    Attributes
    ----------
    points : (n, 2) ndarray of float
        m; those on the edges first, ring after ring.
    edges : (k, 2) ndarray of int
        Pairs of points that must be joined: the copper's edge.
    rows : (r, 2) ndarray of int
        Pairs of points that should be joined: the inner side of the row and its rungs.
    """

    points: Floats
    edges: Ints
    rows: Ints


def edging(polygon: shapely.Polygon, sizes: Sizes, row: float, plain: tuple[int, ...]) -> Edging:
    """Points along the edges of a polygon with a narrow row inside.

    Parameters
    ----------
    polygon : shapely.Polygon
        m.
    sizes : Sizes
        Spacing along the edges.
    row : float
        Width of the row, m; narrower where the copper is narrow; 0 for none.
    plain : tuple of int
        Numbers of the holes whose sides are kept whole and get no row.

    Returns
    -------
    Edging
    """
    whole = orient(polygon)
    rings = [whole.exterior, *whole.interiors]
    free = [ring for number, ring in enumerate(rings) if number - 1 not in plain]
    sides = np.concatenate([ring_segments(ring) for ring in free])
    outer, inner, edges, rows = [], [], [], []
    count = 0
    for number, ring in enumerate(rings):
        own = ring_segments(ring)
        is_plain = number - 1 in plain
        points, side = _sampled(own, None if is_plain else sizes)
        loop = count + np.arange(len(points))
        count += len(points)
        outer.append(points)
        edges.append(np.column_stack([loop, np.roll(loop, -1)]))
        if row > 0.0 and not is_plain:
            steps, depths = _offsets(points, side, own, sides, row)
            inner.append((loop, *_merged(points, points + steps, depths)))
    all_points = list(outer)
    for loop, points, owner in inner:
        partner = count + owner
        all_points.append(points)
        along = np.column_stack([partner, np.roll(partner, -1)])
        rows += [along[along[:, 0] != along[:, 1]], np.column_stack([loop, partner])]
        count += len(points)
    joined = np.concatenate(rows) if rows else np.empty((0, 2), dtype=np.int64)
    return Edging(np.concatenate(all_points), np.concatenate(edges), joined)


def ring_points(ring: shapely.LinearRing, sizes: Sizes) -> Floats:
    """Points (n, 2) along a ring, corners included, spaced as the sizes want it, m."""
    points, _ = _sampled(ring_segments(ring), sizes)
    return points


def _sampled(segments: Floats, sizes: Sizes | None) -> tuple[Floats, Ints]:
    """Points along a ring, corners included, and the number of the side that each starts."""
    points, side = [], []
    for i, (x0, y0, x1, y1) in enumerate(segments):
        places = _places(np.array([x0, y0]), np.array([x1, y1]), sizes)
        points.append(np.column_stack([x0 + places * (x1 - x0), y0 + places * (y1 - y0)]))
        side += [i] * len(places)
    return np.concatenate(points), np.array(side)


def _places(start: Floats, end: Floats, sizes: Sizes | None) -> Floats:
    """Places 0 <= p < 1 along a side, spaced as the sizes there want it."""
    if sizes is None:
        return np.zeros(1)
    length = float(np.linalg.norm(end - start))
    middles = (np.arange(24) + 0.5) / 24
    wanted = sizes.at(start + middles[:, None] * (end - start))
    cells = np.concatenate([[0.0], np.cumsum(length / 24 / wanted)])
    number = max(1, round(cells[-1]))
    return np.asarray(np.interp(np.arange(number) / number * cells[-1], cells, np.arange(25) / 24))


def _offsets(
    points: Floats, side: Ints, own: Floats, sides: Floats, row: float
) -> tuple[Floats, Floats]:
    """Steps from the points of a ring to the inner side of its row, and the row's width there."""
    along = own[:, 2:] - own[:, :2]
    lengths = np.linalg.norm(along, axis=1)
    inward = np.column_stack([-along[:, 1], along[:, 0]]) / lengths[:, None]
    depths = _depths(points, side, inward, sides, row)
    before = np.roll(side, 1)
    n0, n1, d0, d1 = inward[before], inward[side], depths[before], depths[side]
    turn = n0[:, 0] * n1[:, 1] - n0[:, 1] * n1[:, 0]
    corner = np.abs(turn) > 0.05
    safe = np.where(corner, turn, 1.0)
    mitre = np.column_stack(
        [(d0 * n1[:, 1] - d1 * n0[:, 1]) / safe, (d1 * n0[:, 0] - d0 * n1[:, 0]) / safe]
    )
    straight = (d0[:, None] * n0 + d1[:, None] * n1) / 2.0
    steps = np.where(corner[:, None], mitre, straight)
    longest = _LONGEST_MITRE * np.maximum(d0, d1)
    reach = np.maximum(np.linalg.norm(steps, axis=1), 1e-300)
    return steps * np.minimum(1.0, longest / reach)[:, None], np.minimum(d0, d1)


def _depths(points: Floats, side: Ints, inward: Floats, sides: Floats, row: float) -> Floats:
    """Width of the row along each side of a ring."""
    depths = np.full(len(inward), row)
    ahead = np.roll(points, -1, axis=0) - points
    for place in (0.1, 0.5, 0.9):
        across = first_hits(points + place * ahead, inward[side], sides)
        np.minimum.at(depths, side, _SHARE * across)
    return depths


def _merged(points: Floats, inner: Floats, depths: Floats) -> tuple[Floats, Ints]:
    """Row points, neighbours made one where a short side squeezes them; the number of each."""
    n = len(points)
    step = np.roll(inner, -1, axis=0) - inner
    forward = np.sum(step * (np.roll(points, -1, axis=0) - points), axis=1) > 0.0
    squeezed = ~forward | (np.linalg.norm(step, axis=1) < _TOGETHER * depths)
    if squeezed.all():
        return inner, np.arange(n)
    first = int(np.flatnonzero(~squeezed)[0]) + 1
    order = (first + np.arange(n)) % n
    owner = np.empty(n, dtype=np.int64)
    owner[order] = np.concatenate([[0], np.cumsum(~squeezed[order][:-1])])
    sums = np.zeros((owner.max() + 1, 2))
    np.add.at(sums, owner, inner)
    return sums / np.bincount(owner)[:, None], owner
