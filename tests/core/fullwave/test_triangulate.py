"""Triangles over plane shapes: area, edges, rows, sizes."""

from itertools import combinations

import numpy as np
import pytest
import shapely
from scipy.spatial import ConvexHull, Delaunay

from core.errors import ModelError
from core.fullwave.delaunay import constrained_delaunay
from core.fullwave.rows import edging
from core.fullwave.sizes import distances, first_hits, ring_segments, sizes_near
from core.fullwave.triangulate import triangulate

SQUARE = shapely.box(0.0, 0.0, 1.0, 1.0)
L_SHAPE = shapely.union(shapely.box(0, 0, 3, 1), shapely.box(0, 0, 1, 3))
PIERCED = SQUARE.difference(shapely.Point(0.4, 0.5).buffer(0.2))
STRIP = shapely.union_all(
    [shapely.box(0, 0, 4, 4), shapely.box(4, 1, 6, 1.3), shapely.box(5.7, -3, 6, 1.3)]
)
SHAPES = [SQUARE, L_SHAPE, PIERCED, STRIP]
EVEN = sizes_near(0.4, 1.0, [])


def areas(points, triangles):
    a, b, c = (points[triangles[:, i]] for i in range(3))
    return ((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0]) / 2.0


@pytest.mark.parametrize("row", [0.0, 0.05])
@pytest.mark.parametrize("shape", SHAPES)
def test_triangles_cover_the_shape_once(shape, row):
    points, triangles = triangulate(shape, EVEN, row)
    each = areas(points, triangles)
    assert (each > 0.0).all()
    assert each.sum() == pytest.approx(shape.area, rel=1e-12)
    covered = shapely.union_all([shapely.Polygon(points[t]) for t in triangles], grid_size=1e-9)
    assert covered.symmetric_difference(shape).area < 1e-7


@pytest.mark.parametrize("shape", SHAPES)
def test_neighbours_share_whole_edges(shape):
    # Euler: vertices - edges + triangles is 1 less the number of holes.
    points, triangles = triangulate(shape, EVEN, 0.05)
    ends = np.sort(triangles[:, [[0, 1], [1, 2], [2, 0]]].reshape(-1, 2), axis=1)
    edges = len(np.unique(ends, axis=0))
    assert len(points) - edges + len(triangles) == 1 - len(shape.interiors)


def test_same_shape_gives_the_same_triangles():
    first, second = (triangulate(STRIP, EVEN, 0.05) for _ in range(2))
    np.testing.assert_array_equal(first[0], second[0])
    np.testing.assert_array_equal(first[1], second[1])


def test_inside_is_well_shaped_without_a_row():
    points, triangles = triangulate(SQUARE, sizes_near(0.12, 1.0, []), 0.0)
    sides = np.linalg.norm(points[triangles] - points[np.roll(triangles, 1, axis=1)], axis=2)
    longest, middle = np.sort(sides, axis=1)[:, 2], np.sort(sides, axis=1)[:, 1]
    smallest = np.degrees(np.arcsin(2.0 * areas(points, triangles) / (longest * middle)))
    assert smallest.min() > 25.0
    assert longest.max() < 1.6 * 0.12
    assert np.median(sides) == pytest.approx(0.12, rel=0.15)


def test_cells_grow_from_a_detail():
    detail = np.array([[0.5, 0.5, 0.5, 0.5]])
    points, triangles = triangulate(SQUARE, sizes_near(0.2, 0.5, [(detail, 0.02)]), 0.0)
    middles = points[triangles].mean(axis=1)
    size = np.sqrt(areas(points, triangles) * 4.0 / 3.0**0.5)
    away = np.linalg.norm(middles - 0.5, axis=1)
    wanted = np.minimum(0.2, 0.02 + 0.5 * away)
    assert np.median(size / wanted) == pytest.approx(1.0, abs=0.15)
    assert (size / wanted).max() < 1.8


def test_row_runs_along_every_edge():
    points, triangles = triangulate(L_SHAPE, EVEN, 0.05)
    away = distances(points, ring_segments(L_SHAPE.exterior)).min(axis=1)
    on_edge = away < 1e-12
    # The row's one inward corner is the root of two further away.
    inner = np.isclose(away, 0.05) | np.isclose(away, 0.05 * 2**0.5)
    assert inner.sum() == on_edge.sum()
    assert (away[~on_edge & ~inner] > 0.15).all()
    # Each triangle with a side on the edge stays within the row.
    beside = on_edge[triangles].sum(axis=1) == 2
    assert inner[triangles[beside]].sum() == beside.sum()


def test_row_is_narrower_on_a_narrow_strip():
    edges = edging(STRIP, sizes_near(1.0, 1.0, []), 0.2, ())
    inner = edges.points[len(edges.edges) :]
    on_strip = inner[inner[:, 1] < -0.5]
    away = distances(on_strip, ring_segments(STRIP.exterior)).min(axis=1)
    assert away == pytest.approx(np.full(len(away), 0.25 * 0.3), rel=1e-6)


def test_plain_holes_keep_their_sides():
    hole = shapely.Point(0.5, 0.5).buffer(0.1, quad_segs=2)
    edges = edging(SQUARE.difference(hole), sizes_near(0.01, 1.0, []), 0.05, (0,))
    on_hole = np.linalg.norm(edges.points - 0.5, axis=1) < 0.1001
    assert on_hole.sum() == 8


def test_triangle_edges_follow_a_trace():
    trace = shapely.box(0.3, 0.3, 0.7, 0.7).exterior
    points, triangles = triangulate(SQUARE, sizes_near(0.15, 1.0, []), 0.0, traces=(trace,))
    on_trace = distances(points, ring_segments(trace)).min(axis=1) < 1e-12
    along = on_trace[triangles].sum(axis=1) == 2
    assert along.sum() >= 2 * 8  # triangles on both sides of at least two cells a side


def test_missing_line_is_put_in():
    # The long diagonal of a flat rhombus is never a Delaunay edge.
    points = np.array([[-2.0, 0.0], [2.0, 0.0], [0.0, 0.3], [0.0, -0.3]])
    wanted = np.array([[0, 1]])
    assert not any({0, 1} <= set(t) for t in Delaunay(points).simplices)
    triangles, complete = constrained_delaunay(points, wanted, np.empty((0, 2), dtype=int))
    assert complete
    assert sum({0, 1} <= set(t) for t in triangles) == 2
    assert areas(points, triangles).sum() == pytest.approx(1.2)


def test_many_crossed_lines_are_put_in():
    rng = np.random.default_rng(7)
    inner = np.column_stack([rng.uniform(-0.9, 0.9, 60), rng.uniform(-0.05, 0.05, 60)])
    points = np.vstack([[[-1.0, 0.0], [1.0, 0.0], [0.0, 1.0], [0.0, -1.0]], inner])
    wanted = np.array([[0, 1]])
    triangles, complete = constrained_delaunay(points, wanted, np.empty((0, 2), dtype=int))
    assert complete
    assert sum({0, 1} <= set(t) for t in triangles) == 2
    assert areas(points, triangles).sum() == pytest.approx(2.0)
    assert (areas(points, triangles) > 0.0).all()


@pytest.mark.parametrize("seed", range(4))
def test_lines_from_any_point_to_any_other_are_put_in(seed):
    rng = np.random.default_rng(seed)
    points = rng.uniform(size=(60, 2))
    # A chain that never crosses itself: by rising x, hull corners among its points.
    order = np.argsort(points[:, 0])[::3]
    chain = np.column_stack([order[:-1], order[1:]])
    triangles, complete = constrained_delaunay(points, chain, np.empty((0, 2), dtype=int))
    assert complete
    edges = {frozenset(pair) for t in triangles.tolist() for pair in combinations(t, 2)}
    assert all(frozenset(line) in edges for line in chain.tolist())
    a, b, c = (points[triangles[:, i]] for i in range(3))
    areas = 0.5 * ((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0])
    assert areas.min() > 0.0
    assert areas.sum() == pytest.approx(ConvexHull(points).volume, rel=1e-9)


def test_line_that_crosses_a_kept_one_is_left_out():
    points = np.array([[-2.0, 0.0], [2.0, 0.0], [0.0, 0.3], [0.0, -0.3]])
    triangles, complete = constrained_delaunay(points, np.array([[0, 1]]), np.array([[2, 3]]))
    assert complete
    assert not any({2, 3} <= set(t) for t in triangles)


def test_crossing_edges_are_refused():
    bow_tie = shapely.Polygon([(0, 0), (2, 2), (2, 0), (0, 2)])
    with pytest.raises(ModelError, match="could not be kept"):
        triangulate(bow_tie, sizes_near(10.0, 1.0, []), 0.0)


def test_distances_are_those_of_shapely():
    rng = np.random.default_rng(3)
    points, segments = rng.uniform(-1, 1, (40, 2)), rng.uniform(-1, 1, (30, 4))
    lines = shapely.linestrings(segments.reshape(-1, 2, 2))
    expected = shapely.distance(shapely.points(points)[:, None], lines)
    np.testing.assert_allclose(distances(points, segments), expected, atol=1e-12)


def test_rays_stop_at_the_nearest_side():
    sides = ring_segments(SQUARE.exterior)
    start = np.array([[0.0, 0.25], [0.5, 1.0], [0.5, 0.5]])
    way = np.array([[1.0, 0.0], [0.0, -1.0], [0.6, 0.8]])
    np.testing.assert_allclose(first_hits(start, way, sides), [1.0, 1.0, 0.625])
    assert first_hits(start[:1], -way[:1], sides)[0] == np.inf


def test_a_point_that_falls_onto_another_is_passed_over() -> None:
    corners = np.array([[0.0, 0.0], [4.0, 0.0], [4.0, 3.0], [0.0, 3.0], [1.0, 1.0], [3.0, 2.0]])
    points = np.vstack([corners, corners[4] + 1e-17])
    must = np.array([[0, 1], [1, 2], [2, 3], [3, 0]])
    for should in ([[4, 5], [6, 5]], [[6, 5], [4, 5]]):
        triangles, complete = constrained_delaunay(points, must, np.array(should))
        assert complete
        u, v, w = (points[triangles[:, i]] for i in range(3))
        sides, others = v - u, w - u
        doubled = sides[:, 0] * others[:, 1] - sides[:, 1] * others[:, 0]
        assert doubled.sum() == pytest.approx(24.0)
