"""DXF read back by ezdxf: units, layers, areas, drills; and by hand where it matters."""

import io
import math
from math import pi

import pytest
import shapely
from drawn_designs import DRAWN, changed
from ezdxf import recover

from core.design.edit import with_texts
from core.drawing.artwork import artwork_sheet
from core.errors import LayoutError
from core.formats.dxf import dxf_bytes
from core.layout.build import build_layout, top_copper
from core.layout.model import Role
from core.shapes.outline import polygon

LAYERS = {"COPPER_TOP", "COPPER_BOTTOM", "OUTLINE", "DRILL", "SCORE", "NOTES"}


def written(design, **options):
    return dxf_bytes(artwork_sheet(design, build_layout(design)), **options)


def read(data):
    document, auditor = recover.read(io.BytesIO(data))
    assert not auditor.errors
    assert not auditor.fixes
    return document


def rings(document, layer):
    """Corners of every closed polyline of a layer, arcs flattened to 0.1 µm, mm."""
    lines = document.modelspace().query(f"LWPOLYLINE[layer=='{layer}']")
    return [corners(line) for line in lines]


def corners(line):
    points = []
    for edge in line.virtual_entities():
        if edge.dxftype() == "LINE":
            points.append((edge.dxf.start.x, edge.dxf.start.y))
            continue
        arc = [(point.x, point.y) for point in edge.flattening(1e-4)]
        near = points[-1] if points else (line[0][0], line[0][1])
        turned = math.dist(arc[0], near) > math.dist(arc[-1], near)
        points += arc[::-1] if turned else arc
    return points


def even_odd(rings_):
    """Area of nested rings, mm²."""
    shape = shapely.Polygon()
    for ring in rings_:
        shape = shape.symmetric_difference(shapely.Polygon(ring))
    return shape


def exact_copper(design, role):
    layout = build_layout(design)
    regions = (
        top_copper(layout)
        if role is Role.TOP_COPPER
        else [piece.region for piece in layout.pieces if piece.role is role]
    )
    return shapely.union_all([polygon(region, 1e-7) for region in regions])


@pytest.mark.parametrize("name", DRAWN)
@pytest.mark.parametrize("true_arcs", [False, True])
@pytest.mark.parametrize(
    ("layer", "role"), [("COPPER_TOP", Role.TOP_COPPER), ("COPPER_BOTTOM", Role.GROUND_COPPER)]
)
def test_copper_has_the_area_of_the_layout(name, true_arcs, layer, role):
    document = read(written(DRAWN[name], true_arcs=true_arcs))
    exact = exact_copper(DRAWN[name], role).area * 1e6
    assert even_odd(rings(document, layer)).area == pytest.approx(exact, rel=1e-4)


@pytest.mark.parametrize("name", ["round", "tiny", "left"])
@pytest.mark.parametrize("undercut_um", [20.0, 60.0])
@pytest.mark.parametrize("true_arcs", [False, True])
def test_copper_is_grown_by_the_undercut_allowance(name, undercut_um, true_arcs):
    plain = DRAWN[name]
    design = changed_undercut(plain, undercut_um)
    document = read(written(design, true_arcs=true_arcs))
    for layer, role in (("COPPER_TOP", Role.TOP_COPPER), ("COPPER_BOTTOM", Role.GROUND_COPPER)):
        grown = exact_copper(plain, role).buffer(undercut_um * 1e-6, join_style="mitre")
        got = even_odd(rings(document, layer))
        assert got.area == pytest.approx(grown.area * 1e6, rel=1e-4)
        assert got.area > exact_copper(plain, role).area * 1e6 * 1.0001


def changed_undercut(design, micrometres):
    return with_texts(design, [("making.undercut", f"{micrometres} um")])


def test_an_allowance_that_closes_a_gap_is_refused_with_the_place():
    design = changed_undercut(DRAWN["tiny"], 650.0)  # the gaps are 1.2 mm
    with pytest.raises(LayoutError, match=r"closes the gap at x .*mm, y .*mm") as caught:
        written(design)
    assert caught.value.field == "making.undercut"


@pytest.mark.parametrize("name", DRAWN)
def test_copper_stands_where_the_layout_has_it(name):
    document = read(written(DRAWN[name]))
    exact = shapely.affinity.scale(
        exact_copper(DRAWN[name], Role.TOP_COPPER), 1e3, 1e3, origin=(0, 0)
    )
    got = even_odd(rings(document, "COPPER_TOP"))
    assert got.symmetric_difference(exact).area < 2e-4 * exact.area


def test_facets_stray_from_their_arc_by_no_more_than_five_micrometres():
    document = read(written(DRAWN["round"]))
    (ground,) = [r for r in rings(document, "COPPER_BOTTOM") if len(r) > 200]
    circle = shapely.Point(0, 0).buffer(100.0, quad_segs=20000).exterior
    assert shapely.hausdorff_distance(shapely.LinearRing(ground), circle) < 5.2e-3


def test_true_arcs_take_two_corners_for_a_disc():
    document = read(written(DRAWN["round"], true_arcs=True))
    lines = document.modelspace().query("LWPOLYLINE[layer=='COPPER_BOTTOM']")
    assert [len(line) for line in lines] == [2, 2]
    assert all(abs(bulge) == 1.0 for line in lines for *_, bulge in line)


def test_the_header_declares_millimetres():
    document = read(written(DRAWN["round"]))
    assert document.dxfversion == "AC1015"  # R2000
    assert document.header["$INSUNITS"] == 4
    assert document.header["$MEASUREMENT"] == 1
    assert document.header["$LUNITS"] == 2


@pytest.mark.parametrize("name", DRAWN)
def test_only_plain_entities_on_the_stated_layers(name):
    document = read(written(DRAWN[name]))
    assert set(LAYERS) <= {layer.dxf.name for layer in document.layers}
    for entity in document.modelspace():
        assert entity.dxf.layer in LAYERS
        assert entity.dxftype() in {"LWPOLYLINE", "CIRCLE", "TEXT"}
        if entity.dxf.layer in {"COPPER_TOP", "COPPER_BOTTOM", "OUTLINE"}:
            assert entity.dxftype() == "LWPOLYLINE"
            assert entity.closed


@pytest.mark.parametrize("name", DRAWN)
def test_the_probe_is_drilled_once_where_it_stands(name):
    document = read(written(DRAWN[name]))
    (drill,) = document.modelspace().query("*[layer=='DRILL']")
    (port,) = build_layout(DRAWN[name]).ports
    assert drill.dxftype() == "CIRCLE"
    assert (drill.dxf.center.x, drill.dxf.center.y) == pytest.approx(
        (port.x * 1e3, port.y * 1e3), abs=1e-5
    )
    assert drill.dxf.radius * 2 == pytest.approx(port.diameter * 1e3)


def test_outlines_are_not_doubled():
    document = read(written(DRAWN["card"]))
    assert len(rings(document, "OUTLINE")) == 1
    assert even_odd(rings(document, "OUTLINE")).area == pytest.approx(9000.0)


def test_the_outline_of_an_air_spaced_plate_is_its_ground():
    document = read(written(changed(("stock.spacer", "air:8mm"))))
    assert even_odd(rings(document, "OUTLINE")).area == pytest.approx(pi * 1e4, rel=1e-5)


def test_the_clearance_is_open_in_the_ground_copper():
    document = read(written(DRAWN["round"]))
    clearance = min(shapely.Polygon(ring).area for ring in rings(document, "COPPER_BOTTOM"))
    assert clearance == pytest.approx(pi / 4 * 4.1**2, rel=1e-4)


def test_notes_are_ascii_and_say_what_is_in_the_file():
    document = read(written(changed_undercut(DRAWN["probe"], 30.0)))
    said = [text.dxf.text for text in document.modelspace().query("TEXT")]
    assert all(text.isascii() for text in said)
    joined = "\n".join(said)
    for wanted in ("Cafe", "undercut allowance 0.03 mm", "unit mm", "NOT FIELD-CHECKED"):
        assert wanted in joined


def test_the_same_design_gives_the_same_bytes():
    assert written(DRAWN["round"]) == written(DRAWN["round"])
