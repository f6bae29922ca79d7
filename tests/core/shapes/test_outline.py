from math import pi, sqrt

import pytest

from core.shapes.outline import (
    Region,
    Vertex,
    arc_centre,
    circle,
    facets,
    mirrored,
    polygon,
    polyline,
    rectangle,
)


@pytest.mark.parametrize("diameter", [0.4e-3, 4.1e-3, 85e-3, 0.3, 2.0])
def test_facets_of_a_disc_keep_its_exact_area(diameter: float) -> None:
    area = polygon(Region(circle(diameter))).area
    assert area == pytest.approx(pi * diameter**2 / 4, rel=1e-12)


@pytest.mark.parametrize("sagitta", [1e-6, 5e-6, 50e-6])
def test_facets_stay_within_the_sagitta_of_the_arc(sagitta: float) -> None:
    shape = polygon(Region(circle(0.1)), sagitta)
    middles = [
        ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)
        for a, b in zip(shape.exterior.coords, shape.exterior.coords[1:], strict=False)
    ]
    worst = max(abs(sqrt(x * x + y * y) - 0.05) for x, y in middles)
    assert worst <= sagitta


def test_quarter_arc_keeps_its_sector_area() -> None:
    bulge = 0.41421356237309503  # tan(90 degrees / 4)
    outline = polyline([(0.0, 0.0), (0.01, 0.0), (0.0, 0.01)])
    vertices = (outline.vertices[0], Vertex(0.01, 0.0, bulge), outline.vertices[2])
    area = polygon(Region(type(outline)(vertices))).area
    assert area == pytest.approx(pi * 1e-4 / 4, rel=1e-12)


@pytest.mark.parametrize("bulge", [0.2, 0.41421356237309503, 1.0, 2.5, -0.2, -1.0, -2.5])
def test_arc_centre_is_equally_far_from_both_ends(bulge: float) -> None:
    start, end = Vertex(0.003, 0.001, bulge), Vertex(-0.002, 0.004)
    x, y, radius = arc_centre(start, end)
    for point in (start, end):
        assert sqrt((point.x - x) ** 2 + (point.y - y) ** 2) == pytest.approx(radius, rel=1e-12)


def test_arc_runs_on_the_side_its_bulge_says() -> None:
    # Counter-clockwise from (1, 0) to (0, 1) about the origin: the arc bows away from it.
    bulge = 0.41421356237309503
    outline = type(circle(1.0))((Vertex(1.0, 0.0, bulge), Vertex(0.0, 1.0), Vertex(0.0, 0.0)))
    points = facets(outline, 1e-4)
    middle = points[len(points) // 2 - 1]
    assert sqrt(middle[0] ** 2 + middle[1] ** 2) == pytest.approx(1.0, abs=2e-4)


def test_mirroring_twice_gives_the_same_region() -> None:
    region = Region(rectangle(0.03, 0.02, (0.01, 0.0)), (circle(0.004, (0.012, 0.002)),))
    twice = mirrored(mirrored(region))
    assert polygon(twice).equals_exact(polygon(region), 0.0) or polygon(twice).symmetric_difference(
        polygon(region)
    ).area == pytest.approx(0.0, abs=1e-15)
    assert polygon(mirrored(region)).exterior.is_ccw


def test_mirroring_moves_right_to_left() -> None:
    region = Region(rectangle(0.03, 0.02, (0.05, 0.0)), (circle(0.004, (0.055, 0.002)),))
    assert polygon(mirrored(region)).bounds == pytest.approx((-0.065, -0.01, -0.035, 0.01))
    assert polygon(mirrored(region)).area == pytest.approx(polygon(region).area, rel=1e-12)
