"""Dimension lines: true, outside the part, and clear of each other."""

import itertools
from math import hypot

import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from core.drawing.lettering import text_width
from core.drawing.measures import dimension_lines, is_straight, label
from core.drawing.sheet import Anchor, Box, Line, Text
from core.layout.model import Dimension

BOX = Box(-20e-3, -15e-3, 20e-3, 15e-3)


def across(x0, x1, y=0.0, offset=1e-3, text="width"):
    return Dimension("a", text, (x0, y), (x1, y), x1 - x0, offset)


def along(y0, y1, x=0.0, offset=1e-3, text="length"):
    return Dimension("b", text, (x, y0), (x, y1), y1 - y0, offset)


def text_boxes(inks):
    """Where each text lies, by its width in the bundled font."""
    found = []
    for ink in inks:
        if isinstance(ink.item, Text):
            item = ink.item
            assert item.anchor is Anchor.MIDDLE
            half = text_width(item.text, item.height) / 2
            low, high = -0.2 * item.height, 0.75 * item.height
            if item.upright:
                box = (item.x - half, item.y + low, item.x + half, item.y + high)
            else:
                box = (item.x - high, item.y - half, item.x - low, item.y + half)
            found.append(shapely.box(*box))
    return found


def lines(inks):
    return [ink.item.points for ink in inks if isinstance(ink.item, Line)]


def test_the_line_is_as_long_as_the_distance_and_ends_at_its_ends():
    inks, _ = dimension_lines([across(-7e-3, 12e-3)], BOX)
    dimension_line = max(lines(inks), key=lambda p: abs(p[0][0] - p[1][0]))
    assert sorted(x for x, _ in dimension_line) == [-7e-3, 12e-3]
    assert len({y for _, y in dimension_line}) == 1


@pytest.mark.parametrize(
    ("dimension", "side"),
    [
        (across(-5e-3, 5e-3, y=0.0, offset=20e-3), "top"),
        (across(-5e-3, 5e-3, y=0.0, offset=-20e-3), "bottom"),
        (across(5e-3, -5e-3, y=0.0, offset=20e-3), "bottom"),
        (along(-5e-3, 5e-3, x=0.0, offset=20e-3), "left"),
        (along(-5e-3, 5e-3, x=0.0, offset=-20e-3), "right"),
    ],
)
def test_the_line_stands_on_the_side_the_layout_asks_for(dimension, side):
    _, box = dimension_lines([dimension], BOX)
    reach = {
        "top": box.top - BOX.top,
        "bottom": BOX.bottom - box.bottom,
        "left": BOX.left - box.left,
        "right": box.right - BOX.right,
    }
    assert max(reach, key=reach.get) == side
    assert sorted(reach.values())[-2] < 1e-9


@pytest.mark.parametrize(
    ("dimension", "expected"),
    [
        (across(0.0, 5e-3), True),
        (Dimension("", "probe x", (0.0, 0.0), (-5e-3, 0.0), -5e-3, 0.0), True),
        (Dimension("", "strip", (0.0, 0.0), (5e-3, 0.0), 7e-3, 0.0), False),
        (Dimension("", "strip", (0.0, 0.0), (3e-3, 4e-3), 5e-3, 0.0), False),
        (across(0.0, 0.0), False),
    ],
)
def test_only_distances_along_an_axis_are_drawn(dimension, expected):
    assert is_straight(dimension) is expected
    assert bool(dimension_lines([dimension], BOX)[0]) is expected


def test_a_distance_to_the_left_reads_as_a_length():
    probe = Dimension("feed.x", "probe x", (0.0, 0.0), (-5e-3, 0.0), -5e-3, 0.0)
    assert label(probe) == "probe x 5 mm"


def dimensions():
    place = st.integers(-200, 200).map(lambda tenths: tenths * 1e-4)
    side = st.sampled_from([-1.0, 1.0])
    return st.builds(
        lambda make, ends, level, offset, text: make(*sorted(ends), level, offset, text),
        st.sampled_from([across, along]),
        st.tuples(place, place).filter(lambda ends: ends[0] != ends[1]),
        st.just(0.0),
        side,
        st.sampled_from(["gap", "first landing", "delay strip width", "width"]),
    )


@given(st.lists(dimensions(), max_size=12), st.floats(0.2, 4.0))
def test_no_text_lies_on_another_or_on_the_part_or_under_a_line(wanted, scale):
    box = Box(*(scale * side for side in (BOX.left, BOX.bottom, BOX.right, BOX.top)))
    inside = [
        d for d in wanted if hypot(*d.start) <= scale * 15e-3 and hypot(*d.end) <= scale * 15e-3
    ]
    inks, around = dimension_lines(inside, box)
    texts = text_boxes(inks)
    part = shapely.box(box.left, box.bottom, box.right, box.top)
    whole = shapely.box(around.left, around.bottom, around.right, around.top).buffer(1e-9)
    assert all(whole.covers(text) for text in texts)
    assert not any(text.intersects(part) for text in texts)
    assert not any(a.intersects(b) for a, b in itertools.combinations(texts, 2))
    long_lines = [shapely.LineString(p) for p in lines(inks) if shapely.LineString(p).length > 2e-3]
    assert not any(line.intersects(text) for line in long_lines for text in texts)
