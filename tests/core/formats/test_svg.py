"""SVG as librsvg shows it, and as a cutter's program would read it."""

import re
import xml.etree.ElementTree as ET

import pytest
from drawn_designs import DRAWN
from measuring import MM_PER_INCH, area, centroid, ink, svg_picture

from core.drawing.paper import PAPERS
from core.drawing.parts import bounds
from core.drawing.sheet import Anchor, Box, Circle, Group, Line, Purpose, Sheet, Text, look
from core.drawing.template import template_pages, template_sheet
from core.errors import ExportError
from core.formats.svg import svg_bytes
from core.layout.build import build_layout, top_copper
from core.shapes.outline import Region, polygon

DPI = 300
SVG = "{http://www.w3.org/2000/svg}"
A4 = PAPERS["a4"]


def template(name, **options):
    return template_sheet(DRAWN[name], build_layout(DRAWN[name]), A4, **options)


def root(sheet):
    return ET.fromstring(svg_bytes(sheet))


def layers(sheet):
    return {group.get("id"): group for group in root(sheet).findall(f"{SVG}g")}


def test_distances_are_true_over_200_mm(dotted):
    covered = ink(svg_picture(svg_bytes(dotted), DPI))
    near = [
        centroid(covered, DPI, x - 3, 240 - y - 3, 6) for x, y in [(15, 12), (215, 12), (15, 222)]
    ]
    assert near[1][0] - near[0][0] == pytest.approx(200.0, abs=0.02)
    assert near[0][1] - near[2][1] == pytest.approx(210.0, abs=0.02)
    assert near[0] == pytest.approx((15.0, 228.0), abs=0.02)


def test_area_with_holes_and_arcs_both_ways_is_true(holed):
    sheet, exact = holed
    assert area(ink(svg_picture(svg_bytes(sheet), DPI)), DPI) == pytest.approx(exact, rel=5e-4)


@pytest.mark.parametrize("name", DRAWN)
def test_the_copper_of_a_template_is_true(name):
    (copper,) = [group for group in template(name).groups if group.purpose is Purpose.COPPER]
    shape = bounds([Region(area.rings[0]) for area in copper.items])
    box = Box(shape.left - 1e-3, shape.bottom - 1e-3, shape.right + 1e-3, shape.top + 1e-3)
    exact = sum(polygon(region).area for region in top_copper(build_layout(DRAWN[name]))) * 1e6
    dpi = 2400 if name == "tiny" else 600
    covered = ink(svg_picture(svg_bytes(Sheet("", box, (copper,))), dpi))
    assert area(covered, dpi) == pytest.approx(exact, rel=5e-4)


@pytest.mark.parametrize(
    ("name", "width", "height"), [("tiny", "210", "297"), ("huge", None, None)]
)
def test_the_size_is_told_in_millimetres(name, width, height):
    sheet = template(name)
    width = width or f"{sheet.box.width * 1e3:.4f}".rstrip("0").rstrip(".")
    height = height or f"{sheet.box.length * 1e3:.4f}".rstrip("0").rstrip(".")
    attributes = root(sheet).attrib
    assert attributes["width"] == f"{width}mm"
    assert attributes["height"] == f"{height}mm"
    assert attributes["viewBox"] == f"0 0 {width} {height}"


def test_the_picture_is_as_large_as_the_sheet_says():
    picture = svg_picture(svg_bytes(template("tiny")), DPI)
    assert picture.shape[1] * MM_PER_INCH / DPI == pytest.approx(210.0, abs=0.1)
    assert picture.shape[0] * MM_PER_INCH / DPI == pytest.approx(297.0, abs=0.1)


@pytest.mark.parametrize("name", DRAWN)
def test_nothing_in_it_trips_a_cutter(name):
    text = svg_bytes(template(name)).decode()
    for trap in ("transform", "<use", "clipPath", "<style", "class=", "style="):
        assert trap not in text
    numbers = re.findall(r"\d+\.(\d+)", "".join(re.findall(r' d="([^"]*)"', text)))
    assert max(len(decimals) for decimals in numbers) <= 4


def test_each_purpose_has_its_layer_and_its_colour():
    found = layers(template("round"))
    assert {"copper", "score", "drill", "pads", "cut-inside", "cut-outside", "dimensions"} <= set(
        found
    )
    colours = {}
    for name in ("score", "drill", "cut-inside", "cut-outside"):
        lines = [element for element in found[name] if element.tag != f"{SVG}title"]
        assert all(element.get("fill") == "none" for element in lines)
        assert all(float(element.get("stroke-width")) <= 0.1 for element in lines)
        (colours[name],) = {element.get("stroke") for element in lines}
    assert len(set(colours.values())) == len(colours)
    order = list(found)
    assert order.index("cut-inside") < order.index("cut-outside")


def test_cut_lines_are_single_closed_paths_with_true_arcs():
    found = layers(template("round"))
    for name in ("cut-inside", "cut-outside"):
        for path in found[name]:
            data = path.get("d")
            assert data.count("M") == data.count("Z") == 1
    discs = [p.get("d") for p in found["cut-outside"] if "A 100 100" in p.get("d")]
    assert len(discs) == 2
    assert found["copper"][0].get("fill-rule") == "evenodd"
    assert found["copper"][0].get("stroke") == "none"


def test_words_are_text_and_those_that_read_upwards_are_outlines_with_a_title():
    found = layers(template("probe"))
    said = [element.text for element in found["notes"].iter(f"{SVG}text")]
    assert "Café Ωmega <&> λ/4" in said
    upward = [title.text for title in found["dimensions"].iter(f"{SVG}title")]
    assert "length 54 mm" in upward


@pytest.mark.parametrize(
    ("anchor", "low", "high"),
    [(Anchor.START, 0.0, 1.0), (Anchor.MIDDLE, -0.5, 0.5), (Anchor.END, -1.0, 0.0)],
)
def test_upward_words_lie_where_upright_ones_would_turned_by_a_quarter(anchor, low, high):
    text = Text(20e-3, 50e-3, "HHHH", 5e-3, anchor, upright=False)
    sheet = Sheet("", Box(0, 0, 40e-3, 100e-3), (Group(Purpose.NOTES, (text,)),))
    covered = ink(svg_picture(svg_bytes(sheet), DPI)) > 0.5
    rows, columns = (axis * MM_PER_INCH / DPI for axis in covered.nonzero())
    length = 4 * 0.752 * 5.0  # advance of H, thousandths of the body, from the font
    assert columns.min() == pytest.approx(20.0 - 0.729 * 5.0, abs=0.15)
    assert columns.max() == pytest.approx(20.0, abs=0.15)
    assert 100.0 - rows.max() == pytest.approx(50.0 + low * length, abs=0.7)  # side bearings
    assert 100.0 - rows.min() == pytest.approx(50.0 + high * length, abs=0.7)


def test_lines_and_circles_lie_where_they_should():
    items = (Line(((1e-3, 2e-3), (3e-3, 2.00005e-3))), Circle(5e-3, 5e-3, 1.5e-3))
    sheet = Sheet("", Box(0, 0, 10e-3, 10e-3), (Group(Purpose.FOLD, items),))
    (layer,) = layers(sheet).values()
    line, circle = list(layer)
    assert line.get("points") == "1,8 3,8" or line.get("points") == "1,8 3,7.9999"
    assert (circle.get("cx"), circle.get("cy"), circle.get("r")) == ("5", "5", "0.75")
    assert float(line.get("stroke-dasharray")) == pytest.approx(look(Purpose.FOLD).dash * 1e3)


def test_a_tile_is_refused():
    tile = template_pages(DRAWN["huge"], build_layout(DRAWN["huge"]), A4)[-1]
    with pytest.raises(ExportError, match="PDF only"):
        svg_bytes(tile)


def test_the_same_sheet_gives_the_same_bytes():
    assert svg_bytes(template("left")) == svg_bytes(template("left"))
