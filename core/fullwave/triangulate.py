"""Graded triangles over a plane sheet.

The edges get a narrow row of cells; the inside is filled from hexagonal lattices of falling
spacing, joined by Delaunay triangles and evened out. There is no chance in it: the same
sheet gives the same triangles.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import shapely
from scipy.spatial import KDTree

from core.errors import ModelError
from core.fullwave.delaunay import constrained_delaunay
from core.fullwave.rows import Edging, edging, ring_points
from core.fullwave.sizes import distances

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.sizes import Sizes

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Bools = NDArray[np.bool_]

_APART = 0.8  # least distance between inner points, in wanted edge lengths
_OFF_LINES = 0.55  # least distance of inner points from the edge row, in wanted edge lengths
_OFF_TRACES = 0.15  # least distance of points on a trace from other lines, in the same
_LATTICE_STEP = 2.0**0.5
_EVENING = 3  # sweeps of smoothing
_FLAT = 1e-6  # triangles thinner than this share of their longest edge are no triangles


def triangulate(
    polygon: shapely.Polygon,
    sizes: Sizes,
    row: float,
    plain: tuple[int, ...] = (),
    traces: tuple[shapely.LinearRing, ...] = (),
) -> tuple[Floats, Ints]:
    """Triangles over a polygon.

    Parameters
    ----------
    polygon : shapely.Polygon
        m.
    sizes : Sizes
        Wanted edge length.
    row : float
        Width of the row of cells along the edges, m; 0 for none.
    plain : tuple of int
        Numbers of the holes whose sides become one triangle edge each, without a row.
    traces : tuple of shapely.LinearRing
        Lines that triangle edges should follow where they are inside.

    Returns
    -------
    points : (n, 2) ndarray of float
        m.
    triangles : (m, 3) ndarray of int
        Counter-clockwise.

    Raises
    ------
    ModelError
        If an edge of the polygon cannot be kept.
    """
    shapely.prepare(polygon)
    edges = _inside_only(edging(polygon, sizes, row, plain), polygon)
    for trace in traces:
        edges = _with_trace(edges, trace, polygon, sizes)
    points = np.vstack([edges.points, _inner_points(polygon, sizes, edges)])
    fixed = len(edges.points)
    triangles = _triangles(points, edges, polygon)
    if len(points) > fixed:
        points = _evened(points, triangles, fixed, sizes)
        triangles = _triangles(points, edges, polygon)
    used, numbers = np.unique(triangles, return_inverse=True)
    return points[used], np.asarray(numbers.reshape(-1, 3), dtype=np.int64)


def _inside_only(edges: Edging, polygon: shapely.Polygon) -> Edging:
    """The same without row points that fell outside or onto another edge."""
    boundary = len(edges.edges)
    inner = edges.points[boundary:]
    if not len(inner):
        return edges
    rungs = edges.rows[np.isin(edges.rows[:, 0], np.arange(boundary))]
    reach = np.full(len(edges.points), np.inf)
    long = np.linalg.norm(edges.points[rungs[:, 1]] - edges.points[rungs[:, 0]], axis=1)
    np.minimum.at(reach, rungs[:, 1], long)
    lines = np.hstack([edges.points[edges.edges[:, 0]], edges.points[edges.edges[:, 1]]])
    clear = distances(inner, lines).min(axis=1) > 0.3 * reach[boundary:]
    good = shapely.contains_xy(polygon, inner[:, 0], inner[:, 1]) & clear
    keep = np.concatenate([np.ones(boundary, dtype=bool), good])
    number = np.cumsum(keep) - 1
    rows = edges.rows[keep[edges.rows].all(axis=1)]
    return Edging(edges.points[keep], edges.edges, number[rows])


def _with_trace(
    edges: Edging, trace: shapely.LinearRing, polygon: shapely.Polygon, sizes: Sizes
) -> Edging:
    """The same with points along a line too, where it is inside and clear of what there is."""
    points = ring_points(trace, sizes)
    lines = np.concatenate([edges.edges, edges.rows])
    segments = np.hstack([edges.points[lines[:, 0]], edges.points[lines[:, 1]]])
    keep = shapely.contains_xy(polygon, points[:, 0], points[:, 1])
    keep &= distances(points, segments).min(axis=1) > _OFF_TRACES * sizes.at(points)
    number = len(edges.points) - 1 + np.cumsum(keep)
    along = np.column_stack([number, np.roll(number, -1)])[keep & np.roll(keep, -1)]
    return Edging(
        np.vstack([edges.points, points[keep]]), edges.edges, np.concatenate([edges.rows, along])
    )


def _inner_points(polygon: shapely.Polygon, sizes: Sizes, edges: Edging) -> Floats:
    """Points of hexagonal lattices, coarse ones first, clear of each other and of the rows."""
    lines = np.concatenate([edges.edges, edges.rows])
    segments = np.hstack([edges.points[lines[:, 0]], edges.points[lines[:, 1]]])
    taken = np.empty((0, 2))
    spacing = sizes.largest
    while True:
        fresh = _lattice(polygon.bounds, sizes.box(spacing * _LATTICE_STEP * 1.001), spacing)
        fresh = fresh[shapely.contains_xy(polygon, fresh[:, 0], fresh[:, 1])]
        wanted = sizes.at(fresh)
        fits = (wanted > spacing / 1.001) & (wanted < spacing * _LATTICE_STEP * 1.001)
        fresh = fresh[fits]
        if len(fresh):
            fresh = fresh[distances(fresh, segments).min(axis=1) > _OFF_LINES * spacing]
        if len(fresh) and len(taken):
            fresh = fresh[KDTree(taken).query(fresh)[0] > _APART * spacing]
        taken = np.vstack([taken, fresh])
        spacing /= _LATTICE_STEP
        if not (sizes.at_segments < spacing * _LATTICE_STEP).any():
            return taken


def _lattice(
    bounds: tuple[float, float, float, float], box: tuple[Floats, Floats], spacing: float
) -> Floats:
    """Points in a box of the hexagonal lattice that is symmetrical about the bounds' middle."""
    middle = (np.array(bounds[:2]) + bounds[2:]) / 2.0
    pitch = np.array([spacing, spacing * 3.0**0.5 / 2.0])
    low = np.ceil((np.maximum(bounds[:2], box[0]) - middle) / pitch).astype(np.int64)
    high = np.floor((np.minimum(bounds[2:], box[1]) - middle) / pitch).astype(np.int64)
    x, y = np.meshgrid(np.arange(low[0] - 1, high[0] + 1), np.arange(low[1], high[1] + 1))
    places = np.column_stack([(x + 0.5 * (y % 2)).ravel(), y.ravel()])
    return np.asarray(middle + places * pitch)


def _triangles(points: Floats, edges: Edging, polygon: shapely.Polygon) -> Ints:
    """Triangles inside the polygon."""
    triangles, complete = constrained_delaunay(points, edges.edges, edges.rows)
    if not complete:
        raise ModelError("mesh: an edge of the copper could not be kept; simplify the outline")
    a, b, c = (points[triangles[:, i]] for i in range(3))
    ab, ac = b - a, c - a
    area = ab[:, 0] * ac[:, 1] - ab[:, 1] * ac[:, 0]
    longest = np.maximum(np.sum(ab**2, axis=1), np.sum(ac**2, axis=1))
    middle = (a + b + c) / 3.0
    inside = shapely.contains_xy(polygon, middle[:, 0], middle[:, 1])
    return np.asarray(triangles[inside & (area > _FLAT * longest)])


def _evened(points: Floats, triangles: Ints, fixed: int, sizes: Sizes) -> Floats:
    """Move inner points to the weighted middle of the triangles around them."""
    density = 1.0 / sizes.at(points[triangles].mean(axis=1)) ** 2
    moved = points.copy()
    for _ in range(_EVENING):
        a, b, c = (moved[triangles[:, i]] for i in range(3))
        ab, ac = b - a, c - a
        weight = np.abs(ab[:, 0] * ac[:, 1] - ab[:, 1] * ac[:, 0]) * density
        middle = (a + b + c) / 3.0
        total, sums = np.zeros(len(points)), np.zeros_like(points)
        for i in range(3):
            np.add.at(total, triangles[:, i], weight)
            np.add.at(sums, triangles[:, i], weight[:, None] * middle)
        moved[fixed:] = sums[fixed:] / np.maximum(total[fixed:, None], 1e-300)
    return moved
