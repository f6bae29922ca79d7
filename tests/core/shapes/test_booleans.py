from math import acos, asin, pi, sqrt

import pytest
import shapely

from core.errors import LayoutError
from core.shapes.booleans import grown, union
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


@pytest.mark.parametrize("by", [5e-6, 50e-6, 0.2e-3, 1e-3])
def test_growing_a_disc_with_a_hole_moves_both_edges(by: float) -> None:
    (plate,) = grown([Region(circle(0.2), (circle(4.1e-3, (0.01, 0.02)),))], by)
    exact = pi * ((0.1 + by) ** 2 - (2.05e-3 - by) ** 2)
    assert polygon(plate).area == pytest.approx(exact, rel=1e-9)
    assert len(plate.exterior.vertices) == len(plate.holes[0].vertices) == 2  # still arcs


@pytest.mark.parametrize("by", [50e-6, 0.2e-3])
def test_growing_keeps_corners_sharp(by: float) -> None:
    notched = [(0, 0), (40, 0), (40, 30), (22, 30), (22, 10), (18, 10), (18, 30), (0, 30)]
    shape = Region(polyline([(x * 1e-3, y * 1e-3) for x, y in notched]))
    (result,) = grown([shape], by)
    b = by * 1e3
    exact = (40 + 2 * b) * (30 + 2 * b) - (4 - 2 * b) * 20
    assert polygon(result).area * 1e6 == pytest.approx(exact, rel=1e-9)
    assert len(result.exterior.vertices) == 8


def test_growing_by_nothing_changes_nothing() -> None:
    shape = Region(circle(0.01))
    assert grown([shape], 0.0) == (shape,)


@pytest.mark.parametrize(("gap", "by", "closes"), [(0.15, 0.1, True), (0.35, 0.1, False)])
def test_growth_that_closes_a_slot_is_refused_with_its_place(
    gap: float, by: float, closes: bool
) -> None:
    pair = [
        Region(rectangle(20e-3, 10e-3, (0.0, -5e-3))),
        Region(rectangle(20e-3, 10e-3, (0.0, 5e-3 + gap * 1e-3))),
    ]
    if closes:
        with pytest.raises(LayoutError, match=r"closes the gap at x .* mm, y .*half of the gap"):
            grown(pair, by * 1e-3)
    else:
        assert len(grown(pair, by * 1e-3)) == 2


@pytest.mark.parametrize("by", [20e-6, 0.1e-3, 0.5e-3])
def test_inner_corners_beside_a_round_pad_are_no_closed_gaps(by: float) -> None:
    copper = union(
        [
            Region(rectangle(30e-3, 3e-3)),
            Region(circle(5e-3, (10e-3, 0.0))),
            Region(rectangle(3e-3, 20e-3, (-8e-3, 10e-3))),
        ]
    )
    # In closed form: lying strip, disc less its part on that strip, standing strip above it.
    half, radius = 1.5e-3 + by, 2.5e-3 + by
    on_strip = 2 * (half * sqrt(radius**2 - half**2) + radius**2 * asin(half / radius))
    exact = (30e-3 + 2 * by) * 2 * half + pi * radius**2 - on_strip + 2 * half * 18.5e-3
    assert polygon(grown(copper, by)[0]).area == pytest.approx(exact, rel=1e-5)
