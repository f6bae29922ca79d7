"""What every sheet of a template says and shows, and that nothing lies on anything else."""

import itertools
from math import pi

import pytest
import shapely
from drawn_designs import DRAWN, changed
from measuring import items

from core.design.record import short_code
from core.drawing.lettering import text_width
from core.drawing.paper import MARGIN, PAPERS
from core.drawing.sheet import Anchor, Area, Circle, Line, Purpose, Text
from core.drawing.template import template_pages, template_sheet
from core.errors import ExportError
from core.layout.build import build_layout, top_copper
from core.shapes.outline import Region, facets, polygon

A4, A3, LETTER = PAPERS["a4"], PAPERS["a3"], PAPERS["letter"]
STARTS = {Anchor.START: 0.0, Anchor.MIDDLE: -0.5, Anchor.END: -1.0}


def pages(name, paper=A4, **options):
    return template_pages(DRAWN[name], build_layout(DRAWN[name]), paper, **options)


def words(sheet):
    texts = [item.text for g in sheet.groups for item in g.items if isinstance(item, Text)]
    return " ".join(texts).replace("\u00a0", " ")


def text_box(item):
    """Where a text lies, by its width in the bundled font."""
    width = text_width(item.text, item.height)
    start = STARTS[item.anchor] * width
    low, high = -0.15 * item.height, 0.75 * item.height
    if item.upright:
        return shapely.box(item.x + start, item.y + low, item.x + start + width, item.y + high)
    return shapely.box(item.x - high, item.y + start, item.x - low, item.y + start + width)


def shape(item):
    if isinstance(item, Text):
        return text_box(item)
    if isinstance(item, Line):
        return shapely.LineString(item.points)
    if isinstance(item, Circle):
        return shapely.Point(item.x, item.y).buffer(item.diameter / 2)
    return shapely.union_all([shapely.LinearRing(facets(ring)) for ring in item.rings])


def shown(sheet):
    """(purpose, item, shape) of what can be seen on a sheet."""
    for group in sheet.groups:
        clip = group.clip
        window = shapely.box(clip.left, clip.bottom, clip.right, clip.top) if clip else None
        for item in group.items:
            place = shape(item)
            if window is None or window.intersects(place):
                yield group.purpose, item, place if window is None else place & window


@pytest.mark.parametrize("name", DRAWN)
@pytest.mark.parametrize("paper", [A4, LETTER], ids=lambda paper: paper.name)
def test_every_page_says_what_it_is(name, paper):
    design = DRAWN[name]
    sheets = pages(name, paper)
    for number, sheet in enumerate(sheets, 1):
        said = words(sheet)
        for wanted in (
            design.name,
            f"Revision {design.revision}",
            short_code(design),
            "NOT FIELD-CHECKED",
            "Print at 100 %, actual size",
            "Seen from the front",
            design.making.process,
            f"Page {number} of {len(sheets)}",
            "100 mm",
        ):
            assert wanted in said


@pytest.mark.parametrize(
    ("name", "frequency", "sense"),
    [("round", "2.32 GHz", "RHCP"), ("left", "2.32 GHz", "LHCP"), ("huge", "868 MHz", "RHCP")],
)
def test_the_title_block_names_frequency_and_sense(name, frequency, sense):
    for sheet in pages(name):
        assert frequency in words(sheet)
        assert sense in words(sheet)


def test_the_first_page_carries_materials_and_cautions():
    said = words(pages("round")[0])
    assert "copper-tape 50 µm, polystyrene 6 mm" in said
    for topic in ("Cutting:", "Soldering:", "Foam:", "Transmitting:", "Outdoors:"):
        assert topic in said
    assert "Etching:" not in said
    assert "Etching:" in words(pages("tiny")[0])
    assert "Damp:" in words(pages("card")[0])


def test_lengths_along_bends_and_warnings_are_told_in_words():
    assert "delay strip length 54 mm" in words(pages("round")[0])
    design = changed(("stock.ground", "disc:96mm"))  # a strip that hangs over
    layout = build_layout(design)
    warnings = [finding.message for finding in layout.findings]
    assert warnings
    said = words(template_pages(design, layout, A4)[0])
    assert warnings[0].split()[-1] in said


@pytest.mark.parametrize("name", DRAWN)
def test_both_rules_on_every_page_are_100_mm_with_a_tick_a_millimetre(name):
    for sheet in pages(name):
        lines = [item.points for item in items(sheet, Purpose.RULER, Line)]
        spans = [(abs(b[0] - a[0]), abs(b[1] - a[1])) for a, b in lines]
        assert sum(span == pytest.approx((0.1, 0.0), abs=1e-9) for span in spans) == 1
        assert sum(span == pytest.approx((0.0, 0.1), abs=1e-9) for span in spans) == 1
        (along,) = [a for a, b in lines if abs(b[1] - a[1]) > 0.09]
        ticks = [a[1] for a, b in lines if a[1] == b[1] and a[0] == along[0]]
        assert sorted(ticks) == pytest.approx([along[1] + i * 1e-3 for i in range(101)])


def test_the_square_is_50_mm():
    (square,) = [polygon(Region(a.rings[0])) for a in items(pages("tiny")[0], Purpose.RULER, Area)]
    left, bottom, right, top = square.bounds
    assert (right - left, top - bottom) == pytest.approx((0.05, 0.05))


@pytest.mark.parametrize("name", DRAWN)
@pytest.mark.parametrize("paper", PAPERS.values(), ids=lambda paper: paper.name)
@pytest.mark.parametrize("mirrored", [False, True])
def test_texts_lie_on_nothing_and_within_the_margins(name, paper, mirrored):
    for sheet in pages(name, paper, mirrored=mirrored):
        seen = list(shown(sheet))
        inner = shapely.box(0, 0, sheet.box.width, sheet.box.length).buffer(-MARGIN + 4e-3)
        assert all(inner.covers(place) for _, _, place in seen)
        whole = [
            (purpose, item, place)
            for purpose, item, place in seen
            if isinstance(item, Text) and purpose is not Purpose.REGISTRATION
        ]
        for (_, a, first), (_, b, second) in itertools.combinations(whole, 2):
            assert not first.intersects(second), (a.text, b.text)
        cuts = [p for purpose, _, p in seen if purpose in (Purpose.CUT_OUTSIDE, Purpose.CUT_INSIDE)]
        for _, item, place in whole:
            assert not any(cut.intersects(place) for cut in cuts), item.text


@pytest.mark.parametrize("name", DRAWN)
def test_the_copper_is_drawn_whole_at_true_size(name):
    layout = build_layout(DRAWN[name])
    (sheet,) = [template_sheet(DRAWN[name], layout, A4)]
    drawn = [Region(a.rings[0], a.rings[1:]) for a in items(sheet, Purpose.COPPER, Area)]
    exact = sum(polygon(region).area for region in top_copper(layout))
    assert sum(polygon(region).area for region in drawn) == pytest.approx(exact, rel=1e-9)


def test_cut_lines_scores_drills_and_pads_are_told_apart():
    (sheet,) = [template_sheet(DRAWN["round"], build_layout(DRAWN["round"]), A4)]
    outside = items(sheet, Purpose.CUT_OUTSIDE)
    assert all(len(area.rings) == 1 for area in outside)
    areas = sorted(polygon(Region(area.rings[0])).area for area in outside)
    assert areas[1:] == pytest.approx([pi * 0.01, pi * 0.01])  # ground plate and spacer
    assert [circle.diameter for circle in items(sheet, Purpose.PAD, Circle)] == [3e-3]
    assert len(items(sheet, Purpose.SCORE, Line)) == 8
    inside = sorted(polygon(Region(a.rings[0])).area for a in items(sheet, Purpose.CUT_INSIDE))
    assert inside[:2] == pytest.approx([pi / 4 * 1.27e-3**2, pi / 4 * 4.1e-3**2], rel=1e-6)
    # The hole in the copper is not part of its outline, so its drill is drawn.
    assert [c.diameter for c in items(sheet, Purpose.DRILL, Circle)] == [1.27e-3]


def test_no_cut_line_is_drawn_twice():
    for name in DRAWN:
        (sheet,) = [template_sheet(DRAWN[name], build_layout(DRAWN[name]), A4)]
        rings = [
            area.rings[0]
            for p in (Purpose.CUT_INSIDE, Purpose.CUT_OUTSIDE)
            for area in items(sheet, p)
        ]
        assert len({ring.vertices for ring in rings}) == len(rings)


def test_mirroring_turns_the_copper_and_its_f_but_no_text():
    design = DRAWN["left"]
    layout = build_layout(design)
    plain, turned = (template_sheet(design, layout, A3, mirrored=m) for m in (False, True))

    def copper(sheet):
        (area,) = items(sheet, Purpose.COPPER, Area)
        return polygon(Region(area.rings[0], area.rings[1:]))

    def centred(shape, factor):
        x, y = shape.envelope.centroid.coords[0]
        moved = shapely.affinity.translate(shape, -x, -y)
        return shapely.affinity.scale(moved, factor, 1.0, origin=(0, 0))

    exact = centred(copper(plain), -1.0)
    assert centred(copper(turned), 1.0).symmetric_difference(exact).area < 1e-12
    assert (
        centred(copper(turned), 1.0).symmetric_difference(centred(copper(plain), 1.0)).area > 1e-5
    )
    for sheet, way in ((plain, 1.0), (turned, -1.0)):
        (letter,) = [line.points for line in items(sheet, Purpose.NOTES, Line)]
        assert (letter[-1][0] - letter[0][0]) * way > 0.0
    assert "MIRRORED" in words(turned)
    assert "MIRRORED" not in words(plain)


def test_a_checked_layout_does_not_say_otherwise():
    mark = "Field-checked: fine mesh"
    for sheet in pages("round", field_check=mark):
        assert "NOT FIELD-CHECKED" not in words(sheet)
        assert mark in words(sheet)


@pytest.mark.parametrize(
    ("name", "paper", "count"),
    [("tiny", A4, 1), ("left", LETTER, 3), ("round", A4, 5), ("huge", A4, 15), ("huge", A3, 7)],
)
def test_pages_are_few(name, paper, count):
    assert len(pages(name, paper)) == count


def test_a_roomful_of_pages_is_refused_and_says_what_would_do():
    design = changed(("stock.ground", "rect:3mx3m"))
    layout = build_layout(design)
    with pytest.raises(ExportError, match=r"pages of A4; accepted: up to 200.*larger paper"):
        template_pages(design, layout, A4)
    assert template_sheet(design, layout, A4).box.width > 3.0


def test_a_single_sheet_takes_the_paper_where_it_fits_and_its_own_size_where_not():
    tiny, huge = (
        template_sheet(DRAWN[name], build_layout(DRAWN[name]), A4) for name in ("tiny", "huge")
    )
    assert tiny == pages("tiny")[0]
    assert huge.box.width > A4.length
    assert all(group.clip is None for group in huge.groups)


def test_tiles_name_their_row_and_column_and_share_their_marks():
    sheets = [sheet for sheet in pages("huge") if "ground plate, row" in words(sheet)]
    said = [words(sheet) for sheet in sheets]
    for i, (row, column) in enumerate([(1, 1), (1, 2), (2, 1), (2, 2)]):
        assert f"row {row} of 2, column {column} of 2" in said[i]
    marks = [seen_marks(sheet) for sheet in sheets]
    letters = [{letter for letter, _ in found} for found in marks]
    assert len(letters[0] & letters[1]) == 1
    assert len(letters[0] & letters[2]) == 1
    assert not letters[0] & letters[3]


def seen_marks(sheet):
    """(letter, place) of the marks on a page; letters stand a little beside their mark."""
    place = {
        item.text: (item.x, item.y)
        for purpose, item, area in shown(sheet)
        if purpose is Purpose.REGISTRATION and isinstance(item, Text) and not area.is_empty
    }
    return set(place.items())


def test_the_map_stands_on_the_first_page_of_several_only():
    for name in DRAWN:
        sheets = pages(name)
        told = ["How the pages go together" in words(sheet) for sheet in sheets]
        assert told == [len(sheets) > 1] + [False] * (len(sheets) - 1)
