"""Parts to cut: what is joined, counted, mirrored and left out."""

from math import pi, sqrt

import pytest
from drawn_designs import DRAWN

from core.drawing.parts import bounds, disc_diameter, is_opening, parts
from core.layout.build import build_layout
from core.layout.model import Hole
from core.shapes.outline import Outline, Region, Vertex, circle, rectangle


def parts_of(name, mirrored=False):
    return parts(build_layout(DRAWN[name]), mirrored)


def test_element_and_branches_are_one_part_and_a_probe_fed_element_stands_alone():
    assert next(part.name for part in parts_of("round")) == "element and branches"
    assert next(part.name for part in parts_of("probe")) == "element"


def test_the_area_of_the_copper_is_that_of_its_strips_added_up_by_hand():
    copper = parts_of("round")[0]
    delay_strip = 54 * 4 + 2 * 1.5 * 4  # it runs on to the outer edge of each branch
    branches = 2 * 7 * 3
    assert copper.area * 1e6 == pytest.approx(54 * 54 + delay_strip + branches, rel=1e-6)


def test_equal_layers_are_counted_and_the_marked_one_stands_apart():
    spacers = [part for part in parts_of("card") if part.name.startswith("spacer")]
    assert [(part.quantity, part.name.count("card")) for part in spacers] == [(2, 2), (1, 1)]


def test_air_is_not_cut():
    assert [part.material for part in parts_of("huge")] == [
        "copper-tape",
        "copper-tape",
        "card",
        "card",
    ]


def test_mirroring_turns_every_outline_hole_and_mark():
    for plain, turned in zip(parts_of("left"), parts_of("left", True), strict=True):
        assert turned.area == pytest.approx(plain.area, rel=1e-12)
        assert turned.box.left == pytest.approx(-plain.box.right, abs=1e-12)
        assert [(-hole.x, hole.y) for hole in plain.holes] == [(h.x, h.y) for h in turned.holes]
        corner = plain.marks[0].points[0]
        assert (-corner[0], corner[1]) in turned.marks[0].points


def test_dimensions_stand_on_the_part_they_measure():
    copper, ground, spacer = parts_of("round")
    assert {one.field for one in ground.dimensions} == {"stock.ground.diameter"}
    assert {"element.width", "feed.first.gap"} <= {one.field for one in copper.dimensions}
    assert spacer.dimensions == ()


@pytest.mark.parametrize("bulge", [1.0, 0.3, -0.3, sqrt(2) - 1])
def test_bounds_follow_arcs(bulge):
    # Chord from (0, 0) to (2, 0), closed by a straight edge; the arc's height is bulge * 1.
    ring = Outline((Vertex(0.0, 0.0, bulge), Vertex(2.0, 0.0)))
    box = bounds([Region(ring)])
    assert (box.left, box.right) == pytest.approx((0.0, 2.0))
    assert (box.bottom, box.top) == pytest.approx((min(0, -bulge), max(0, -bulge)))


def test_a_disc_is_told_from_other_outlines():
    assert disc_diameter(Region(circle(0.2, (0.01, 0.0)))) == pytest.approx(0.2)
    assert disc_diameter(Region(rectangle(0.2, 0.2))) is None
    assert disc_diameter(Region(Outline((Vertex(0, 0, 1.0), Vertex(1, 0, 0.5))))) is None


@pytest.mark.parametrize(
    ("x", "diameter", "known"), [(0.03, 4.1e-3, True), (0.0301, 4.1e-3, False), (0.03, 4e-3, False)]
)
def test_a_hole_that_is_open_already_is_known(x, diameter, known):
    plate = Region(circle(0.2), (circle(4.1e-3, (0.03, 0.0)),))
    assert is_opening(Hole("clearance", x, 0.0, diameter, ("plate",)), [plate]) is known


def test_the_ground_is_a_disc_less_its_clearance():
    ground = parts_of("round")[1]
    assert ground.area == pytest.approx(pi * (0.1**2 - 2.05e-3**2), rel=1e-9)
