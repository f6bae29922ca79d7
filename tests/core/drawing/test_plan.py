"""Pages: few, nothing lost, parts that fit left whole, tiles that overlap as stated."""

import itertools
from math import ceil

import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from core.drawing.cells import Cell
from core.drawing.paper import PAPERS
from core.drawing.plan import OVERLAP, joint_bands, on_one_page, plan
from core.drawing.sheet import Box

WINDOW = (0.18, 0.25)


def cell(width, length, spared=(), whole=False, name="part"):
    return Cell(
        name, (), Box(-width / 3, -length / 2, 2 * width / 3, length / 2), (), spared, whole
    )


def placed_boxes(block):
    return [one.cell.box.moved(one.x, one.y) for one in block.placed]


def rectangle(box):
    return shapely.box(box.left, box.bottom, box.right, box.top)


sizes = st.tuples(st.floats(5e-3, 0.6), st.floats(5e-3, 0.6))


@given(st.lists(sizes, min_size=1, max_size=7))
def test_every_cell_is_shown_whole_and_apart_from_others(cells):
    blocks = plan([cell(*size) for size in cells], *WINDOW)
    assert sum(len(block.placed) for block in blocks) == len(cells)
    for block in blocks:
        boxes = [rectangle(box) for box in placed_boxes(block)]
        shown = shapely.union_all([rectangle(tile.box).buffer(1e-9) for tile in block.tiles])
        assert all(shown.covers(box) for box in boxes)
        assert all(a.distance(b) > 5e-3 for a, b in itertools.combinations(boxes, 2))


@given(sizes)
def test_tiles_are_as_few_as_the_published_count_and_overlap_by_ten_millimetres(size):
    (block,) = plan([cell(*size)], *WINDOW)
    columns, rows = (
        max(1, ceil(round((side - OVERLAP) / (room - OVERLAP), 9)))
        for side, room in zip(size, WINDOW, strict=True)
    )
    assert (block.columns, block.rows, len(block.tiles)) == (columns, rows, columns * rows)
    by_place = {(tile.row, tile.column): tile.box for tile in block.tiles}
    for (row, column), box in by_place.items():
        right, below = by_place.get((row, column + 1)), by_place.get((row + 1, column))
        assert right is None or box.right - right.left == pytest.approx(10e-3)
        assert below is None or below.top - box.bottom == pytest.approx(10e-3)


def test_parts_that_fit_a_page_are_never_tiled():
    small = [cell(0.17, 0.2) for _ in range(3)]
    blocks = plan([*small, cell(0.2, 0.2)], *WINDOW)
    assert [len(block.tiles) for block in blocks] == [1, 1, 1, 2]


def test_small_parts_share_a_page():
    assert len(plan([cell(0.08, 0.1) for _ in range(4)], *WINDOW)) == 1


def test_what_must_stay_whole_never_shares_a_tiled_page():
    blocks = plan([cell(0.1, 0.05, whole=True), cell(0.3, 0.3)], *WINDOW)
    assert [len(block.tiles) for block in blocks] == [1, 4]


@given(st.floats(-0.09, 0.19))
def test_a_joint_keeps_clear_of_a_hole_where_there_is_room_to_slide(x):
    (block,) = plan([cell(0.3, 0.1, spared=((x, 0.0),))], *WINDOW)
    (middle,) = joint_bands(block)[0]
    assert abs(middle - x) > 5e-3


def test_bands_lie_in_the_middle_of_the_overlaps():
    (block,) = plan([cell(0.3, 0.4)], *WINDOW)
    across, along = joint_bands(block)
    assert len(across) == len(along) == 1
    for tile in block.tiles:
        edge = tile.box.right if tile.column == 1 else tile.box.left
        assert abs(edge - across[0]) == pytest.approx(5e-3)


@given(st.lists(sizes, min_size=1, max_size=7))
def test_one_large_page_holds_everything_and_no_more_than_it_needs(cells):
    block, width, length = on_one_page([cell(*size) for size in cells])
    page = shapely.box(0, 0, width, length).buffer(1e-9)
    boxes = [rectangle(box) for box in placed_boxes(block)]
    assert all(page.covers(box) for box in boxes)
    assert all(a.distance(b) > 5e-3 for a, b in itertools.combinations(boxes, 2))
    left, bottom, right, top = shapely.union_all(boxes).bounds
    assert (right - left, top - bottom) == pytest.approx((width, length), abs=1e-9)


@pytest.mark.parametrize(
    ("name", "width_mm", "length_mm"),  # ISO 216 and ANSI Y14.1, from memory
    [("a4", 210, 297), ("a3", 297, 420), ("letter", 215.9, 279.4), ("tabloid", 279.4, 431.8)],
)
def test_papers_have_their_standard_sizes(name, width_mm, length_mm):
    paper = PAPERS[name]
    assert (paper.width * 1e3, paper.length * 1e3) == pytest.approx((width_mm, length_mm))
    assert (paper.turned.width, paper.turned.length) == (paper.length, paper.width)
    assert rectangle(paper.box).covers(rectangle(paper.window).buffer(9.9e-3, join_style="mitre"))
