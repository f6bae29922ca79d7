from math import acos, pi, sqrt

import pytest
import shapely

from core.shapes.booleans import union
from core.shapes.outline import Region, circle, polygon, polyline, rectangle


def test_union_of_a_strip_and_a_pad_keeps_the_pad_round() -> None:
    strip = Region(rectangle(0.02, 0.002, (0.01, 0.0)))
    pad = Region(circle(0.006))
    (joined,) = union([strip, pad])
    # Strip plus disc less their overlap, in closed form.
    r, h = 0.003, 0.001
    width = sqrt(r * r - h * h)
    overlap = h * width + r * r * (pi / 2 - acos(h / r))
    exact = 0.02 * 0.002 + pi * r * r - overlap
    assert polygon(joined).area == pytest.approx(exact, rel=2e-5)  # arc ends: 0.1 um
    arcs = [vertex for vertex in joined.exterior.vertices if vertex.bulge != 0.0]
    assert len(arcs) == 1
    assert len(joined.exterior.vertices) == 4


def test_union_with_a_disc_inside_a_hole_keeps_both_round() -> None:
    plate = Region(rectangle(0.04, 0.04), (circle(0.02),))
    regions = union([plate, Region(circle(0.01))])
    assert [len(region.holes) for region in regions] == [1, 0]
    assert polygon(regions[0]).area == pytest.approx(0.0016 - pi * 1e-4, rel=1e-9)
    assert polygon(regions[1]).area == pytest.approx(pi * 0.25e-4, rel=1e-9)
    assert all(vertex.bulge == 1.0 for vertex in regions[0].holes[0].vertices)


def test_union_of_touching_rectangles_leaves_no_needless_corner() -> None:
    (joined,) = union([Region(rectangle(0.01, 0.01)), Region(rectangle(0.01, 0.01, (0.01, 0.0)))])
    assert len(joined.exterior.vertices) == 4


def test_half_disc_over_an_edge_is_one_clockwise_safe_arc() -> None:
    (joined,) = union([Region(rectangle(0.02, 0.02)), Region(circle(0.01, (0.01, 0.0)))])
    assert polygon(joined).area == pytest.approx(0.0004 + pi * 0.25e-4 / 2, rel=2e-6)
    assert polygon(joined).is_valid


def test_union_agrees_with_shapely_on_an_awkward_shape() -> None:
    star = Region(polyline([(0, 0), (0.03, 0.004), (0.05, 0.0), (0.03, 0.03), (0.0, 0.05)]))
    disc = Region(circle(0.02, (0.031, 0.017)))
    ours = shapely.union_all([polygon(region, 1e-7) for region in union([star, disc])])
    theirs = polygon(star).union(polygon(disc, 1e-7))
    assert ours.symmetric_difference(theirs).area < 1e-9
