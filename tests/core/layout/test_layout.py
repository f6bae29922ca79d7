import math
from typing import Any

import pytest
import shapely
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from core.design.defaults import default_design
from core.design.edit import with_text, with_texts
from core.design.model import Design
from core.findings import Severity, has_refusal
from core.layout.build import build_layout, top_copper
from core.layout.model import Bend, Layout, MarkKind, Role, Segment
from core.shapes.outline import polygon

MM = 1e-3


def plain_design() -> Design:
    """Round numbers, so that lengths in the tests can be added up by eye."""
    return with_texts(
        default_design(),
        [
            ("stock.ground", "disc:200mm"),
            ("element", "rect:54mmx54mm"),
            ("feed.first.landing", "18mm"),
            ("feed.second.landing", "18mm"),
            ("feed.first.gap", "7mm"),
            ("feed.second.gap", "7mm"),
            ("feed.first.width", "3mm"),
            ("feed.second.width", "3mm"),
            ("feed.delay_width", "4mm"),
            ("feed.delay_length", "50mm"),
            ("feed.tee", "0"),
            ("feed.lead_in.width", "4mm"),
        ],
    )


def changed(**changes: str) -> Design:
    """Plain design with changes; double underscores stand for dots."""
    texts = [(key.replace("__", "."), text) for key, text in changes.items()]
    return with_texts(plain_design(), texts)


def codes(layout: Layout) -> set[str]:
    return {finding.code for finding in layout.findings}


def copper(layout: Layout) -> Any:
    return shapely.union_all([polygon(region) for region in top_copper(layout)])


def run_length(run: Any) -> float:
    return sum(part.length for part in run if isinstance(part, Segment))


@st.composite
def dual_edge_designs(draw: st.DrawFn) -> Design:
    """Designs of which most can be built; some slide, some step out, some are refused."""

    def mm(low: float, high: float) -> float:
        return round(draw(st.floats(low, high)), 6)

    width, length = mm(34, 70), mm(34, 70)
    widths = [mm(1.4, 5) for _ in range(3)]
    gaps = [mm(1, 9) for _ in range(2)]
    landings = [mm(4, 30) for _ in range(2)]
    way_round = sum(landings) + sum(gaps) + widths[2]
    lead = draw(st.sampled_from([0.0, 0.0, 12.0, 25.0]))
    return with_texts(
        default_design(),
        [
            ("brief.polarisation", draw(st.sampled_from(["rhcp", "lhcp"]))),
            ("element", f"rect:{width}mmx{length}mm"),
            ("stock.ground", draw(st.sampled_from(["disc:210mm", "rect:190mmx200mm"]))),
            ("stock.ground.offset_x", f"{mm(-8, 8)} mm"),
            ("feed.first.landing", f"{landings[0]} mm"),
            ("feed.second.landing", f"{landings[1]} mm"),
            ("feed.first.gap", f"{gaps[0]} mm"),
            ("feed.second.gap", f"{gaps[1]} mm"),
            ("feed.first.width", f"{widths[0]} mm"),
            ("feed.second.width", f"{widths[1]} mm"),
            ("feed.delay_width", f"{widths[2]} mm"),
            ("feed.delay_length", f"{way_round * mm(0.8, 1.4):.6f} mm"),
            ("feed.tee", f"{way_round * mm(0, 0.9):.6f} mm"),
            ("feed.lead_in.length", f"{lead} mm"),
            ("feed.lead_in.width", "3 mm"),
            ("feed.corners", draw(st.sampled_from(["square", "mitred"]))),
        ],
    )


@settings(max_examples=100, deadline=None)
@given(dual_edge_designs())
def test_pieces_are_valid_and_touch_only_where_they_must(design: Design) -> None:
    layout = build_layout(design)
    assume(not has_refusal(layout.findings))
    shapes = {piece.name: polygon(piece.region) for piece in layout.pieces}
    assert all(shape.is_valid for shape in shapes.values())
    element, branches = shapes["element"], shapes["branches"]
    # Element and branches share the two landing edges and nothing else.
    assert element.intersection(branches).area == pytest.approx(0.0, abs=1e-12)
    contact = element.boundary.intersection(branches.boundary.buffer(1e-9)).length
    widths = sum(landing.width for landing in layout.feed.landings)
    assert contact == pytest.approx(widths, abs=1e-6)
    assert len(top_copper(layout)) == 1


@settings(max_examples=100, deadline=None)
@given(dual_edge_designs())
def test_delay_strip_is_as_long_as_asked_or_refused(design: Design) -> None:
    layout = build_layout(design)
    assume(not has_refusal(layout.findings))
    feed: Any = design.feed
    between = sum(
        run_length(arm) - (landing_gap + feed.delay_width / 2)
        for arm, landing_gap in zip(
            layout.feed.arms, (feed.first.gap, feed.second.gap), strict=True
        )
    )
    assert between == pytest.approx(feed.delay_length, abs=1e-8)


@settings(max_examples=50, deadline=None)
@given(dual_edge_designs())
def test_left_hand_is_the_mirror_image(design: Design) -> None:
    right = build_layout(with_text(design, "brief.polarisation", "rhcp"))
    left = build_layout(with_text(design, "brief.polarisation", "lhcp"))
    assume(not has_refusal(right.findings))
    for a, b in zip(right.pieces, left.pieces, strict=True):
        flipped = shapely.transform(polygon(a.region), lambda xy: xy * [-1, 1])
        assert flipped.symmetric_difference(polygon(b.region)).area < 1e-12
    assert [(-hole.x, hole.y) for hole in right.holes] == [(hole.x, hole.y) for hole in left.holes]
    assert right.feed.arms == left.feed.arms
    assert [-one.x for one in right.feed.landings] == [one.x for one in left.feed.landings]


def test_right_hand_layout_has_the_delayed_branch_on_the_right() -> None:
    layout = build_layout(plain_design())
    first, second = layout.feed.landings
    assert (first.side, second.side) == ("y", "x")
    assert first.y == -layout.element_length / 2
    assert second.x == layout.element_width / 2
    assert run_length(layout.feed.arms[1]) > run_length(layout.feed.arms[0])


def test_pieces_stand_at_their_heights() -> None:
    layout = build_layout(changed(stock__spacer="air:10mm + card:1mm"))
    heights = {piece.name: piece.z for piece in layout.pieces}
    assert heights["ground plate"] == -50e-6
    assert heights["spacer 2 (card)"] == pytest.approx(10 * MM)
    assert heights["element"] == heights["branches"] == pytest.approx(11 * MM)
    assert not next(piece for piece in layout.pieces if piece.name == "spacer 1 (air)").cut


@pytest.mark.parametrize(
    ("length", "code"),
    [("50mm", "landing-slid"), ("20mm", "delay-too-short"), ("90mm", "detour")],
)
def test_delay_strip_slides_or_steps_out(length: str, code: str) -> None:
    assert code in codes(build_layout(changed(feed__delay_length=length)))


def test_exact_delay_strip_needs_no_remark() -> None:
    layout = build_layout(changed(feed__delay_length="54mm"))  # 2 x (18 + 7) + 4
    assert not codes(layout)
    assert run_length(layout.feed.arms[1]) == pytest.approx(54 * MM + 9 * MM)


def test_detour_adds_four_corners_of_copper_and_its_length() -> None:
    straight = copper(build_layout(changed(feed__delay_length="54mm")))
    stepped = copper(build_layout(changed(feed__delay_length="74mm")))
    assert stepped.area - straight.area == pytest.approx(20 * MM * 4 * MM, rel=1e-6)


@pytest.mark.parametrize(
    ("changes", "code", "field"),
    [
        ({"feed__first__width": "1mm"}, "strip-too-narrow", "feed.first.width"),
        ({"feed__delay_width": "1mm"}, "strip-too-narrow", "feed.delay_width"),
        ({"feed__second__gap": "0.4mm"}, "gap-too-small", "feed.second.gap"),
        ({"stock__ground": "disc:77mm"}, "ground-too-small", "stock.ground.diameter"),
        ({"stock__ground": "rect:55mmx90mm"}, "ground-too-small", "stock.ground.width"),
        (
            {"feed__first__landing": "53.5mm", "feed__delay_length": "95mm"},
            "side-too-short",
            "element.width",
        ),
        (
            {"feed__second__landing": "1mm", "feed__delay_length": "37mm"},
            "landing-off-side",
            "feed.second.landing",
        ),
        ({"feed__tee": "60mm"}, "tee-off-strip", "feed.tee"),
        ({"feed__lead_in__length": "70mm"}, "hole-on-edge", "stock.ground"),
        (
            {"feed__lead_in__length": "10mm", "feed__lead_in__bends": "12mm left"},
            "bend-beyond-lead-in",
            "feed.lead_in.bends.1.distance",
        ),
        ({"feed__probe__pad": "18mm"}, "copper-too-close", "feed.probe.pad"),
        (
            {
                "feed__lead_in__length": "60mm",
                "feed__lead_in__width": "2mm",
                "feed__lead_in__bends": "12mm left, 20mm left",
            },
            "copper-too-close",
            "feed.lead_in.length",
        ),
    ],
)
def test_what_cannot_be_made_names_its_cure(changes: dict[str, str], code: str, field: str) -> None:
    layout = build_layout(changed(**changes))
    found = [one for one in layout.findings if one.code == code]
    assert found
    assert found[0].severity is Severity.REFUSAL
    assert field in {one.field for one in found}


def test_probe_on_the_edge_is_refused() -> None:
    design = changed(brief__polarisation="linear", feed="probe", feed__x="26mm")
    found = [one for one in build_layout(design).findings if one.code == "hole-on-edge"]
    assert [one.field for one in found] == ["feed.x"]


def test_strip_beyond_the_plate_is_a_warning_only() -> None:
    layout = build_layout(changed(stock__ground="disc:88mm"))
    found = [one for one in layout.findings if one.code == "strip-off-ground"]
    assert [one.severity for one in found] == [Severity.WARNING]
    assert not layout.feed.over_ground


def test_ground_reach_is_to_the_nearest_rim() -> None:
    layout = build_layout(plain_design())
    assert layout.ground_reach == pytest.approx(0.1 - math.hypot(27 * MM, 27 * MM))


def test_probe_feed_has_one_landing_and_a_pierced_stack() -> None:
    design = changed(brief__polarisation="linear", feed="probe", feed__x="9mm", feed__y="0mm")
    layout = build_layout(design)
    assert layout.feed.arms == ((),)
    assert layout.feed.landings[0].x == pytest.approx(9 * MM)
    assert layout.feed.landings[0].side == ""
    spacer = next(piece for piece in layout.pieces if piece.role is Role.SPACER)
    ground = next(piece for piece in layout.pieces if piece.role is Role.GROUND_COPPER)
    assert polygon(ground.region).interiors
    assert polygon(spacer.region).area > polygon(ground.region).area


def test_sliding_tee_splits_the_strip() -> None:
    layout = build_layout(changed(feed__delay_length="54mm", feed__tee="10mm"))
    first, second = layout.feed.arms
    assert run_length(second) - run_length(first) == pytest.approx(34 * MM)
    assert sum(isinstance(part, Bend) for part in first) == 1


def test_lead_in_turns_as_told() -> None:
    layout = build_layout(changed(feed__lead_in__length="20mm", feed__lead_in__bends="12mm left"))
    start = build_layout(plain_design()).ports[0]
    port = layout.ports[0]
    assert port.x - start.x == pytest.approx(8 * MM)  # walking down, left is towards +x
    assert port.y - start.y == pytest.approx(-12 * MM)
    assert run_length(layout.feed.trunk) == pytest.approx(20 * MM)


@pytest.mark.parametrize("corners", ["square", "mitred"])
def test_mitre_takes_half_the_corner_diagonal(corners: str) -> None:
    area = copper(build_layout(changed(feed__delay_length="54mm", feed__corners=corners))).area
    square = copper(build_layout(changed(feed__delay_length="54mm"))).area
    cut = 0.5 * (4 * MM) ** 2 if corners == "mitred" else 0.0
    assert square - area == pytest.approx(cut, abs=1e-10)


def test_strip_that_runs_into_itself_is_drawn_and_refused() -> None:
    design = changed(
        feed__first__gap="0.9mm",
        feed__first__landing="1.5mm",
        feed__delay_width="12mm",
        feed__corners="mitred",
        feed__delay_length="60mm",
        feed__lead_in__length="40mm",
        feed__lead_in__bends="2mm left, 3mm left, 4mm left",
    )
    layout = build_layout(design)
    assert has_refusal(layout.findings)
    assert any(piece.role is Role.TOP_COPPER for piece in layout.pieces[-3:])


@settings(max_examples=60, deadline=None)
@given(dual_edge_designs())
def test_any_design_has_a_layout(design: Design) -> None:
    layout = build_layout(design)
    assert {piece.name for piece in layout.pieces} >= {"ground plate", "element"}
    assert all(finding.message.endswith(".") for finding in layout.findings)


def test_foil_turned_over_the_rim_has_flaps_and_fold_lines() -> None:
    layout = build_layout(changed(stock__ground="rect:150mmx120mm", making__turnover="10mm"))
    ground = layout.pieces[0]
    cut = shapely.union_all([polygon(one) for one in (ground.region, *ground.flaps)])
    flat = polygon(ground.region)
    # Four trapezia: the sides less 10 mm of slant at each end, 10 mm deep.
    assert cut.area - flat.area == pytest.approx(2 * 10 * (140 + 110) * MM * MM, rel=1e-9)
    assert cut.bounds == pytest.approx((-85 * MM, -70 * MM, 85 * MM, 70 * MM))
    folds = [mark for mark in layout.marks if mark.kind is MarkKind.FOLD]
    assert sum(math.dist(*mark.points) for mark in folds) == pytest.approx(2 * 270 * MM)
    assert not has_refusal(layout.findings)


@pytest.mark.parametrize("ground", ["disc:200mm", "rect:90mmx90mm"])
def test_foil_that_cannot_be_turned_over_is_refused(ground: str) -> None:
    layout = build_layout(changed(stock__ground=ground, making__turnover="45mm"))
    assert "turnover-too-wide" in codes(layout)
