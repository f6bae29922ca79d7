"""PDF as poppler and PDFium show it: scale, areas, print settings, fonts, words."""

import numpy as np
import pypdfium2
import pytest
from drawn_designs import DRAWN
from measuring import area, centroid, ink, pdf_picture, pdf_text, run

from core.design.record import short_code
from core.drawing.paper import PAPERS
from core.drawing.sheet import Box, Group, Purpose, Sheet, Text
from core.drawing.template import template_pages
from core.formats.pdf import pdf_bytes
from core.layout.build import build_layout

DPI = 600
A4 = PAPERS["a4"]
NEAR = [(15, 12), (215, 12), (15, 222), (215, 222)]


def template(name, paper=A4, **options):
    return pdf_bytes(template_pages(DRAWN[name], build_layout(DRAWN[name]), paper, **options))


def pdfium_picture(data, dpi):
    document = pypdfium2.PdfDocument(data)
    picture = document[0].render(scale=dpi / 72).to_numpy()[:, :, :3].astype(float)
    document.close()
    return picture


@pytest.mark.parametrize("render", [pdf_picture, pdfium_picture])
def test_distances_are_true_over_200_mm(dotted, render):
    covered = ink(render(pdf_bytes([dotted]), dpi=DPI))
    places = [centroid(covered, DPI, x - 3, 240 - y - 3, 6) for x, y in NEAR]
    assert places[1][0] - places[0][0] == pytest.approx(200.0, abs=0.05)
    assert places[0][1] - places[2][1] == pytest.approx(210.0, abs=0.05)
    assert np.hypot(*np.subtract(places[3], places[0])) == pytest.approx(290.0, abs=0.05)


def test_area_with_holes_and_arcs_both_ways_is_true(holed):
    sheet, exact = holed
    covered = ink(pdf_picture(pdf_bytes([sheet]), dpi=DPI))
    assert area(covered, DPI) == pytest.approx(exact, rel=5e-4)


@pytest.mark.parametrize("name", ["a4", "a3", "letter", "tabloid"])
def test_pages_have_the_size_of_the_paper_to_a_micrometre(name):
    document = pypdfium2.PdfDocument(template("tiny", PAPERS[name]))
    sizes = sorted(side / 72 * 25.4 for side in document[0].get_size())
    document.close()
    paper = PAPERS[name]
    assert sizes == pytest.approx(sorted((paper.width * 1e3, paper.length * 1e3)), abs=1e-3)


def test_viewers_are_asked_not_to_scale():
    data = template("round")
    assert data.startswith(b"%PDF-1.6")
    assert b"/PrintScaling /None" in data


def test_the_only_font_is_embedded_as_a_subset():
    rows = run("pdffonts", "-", data=template("probe")).decode().splitlines()[2:]
    assert rows
    for row in rows:
        assert "DejaVuSans" in row
        assert row.split()[-5:-2] == ["yes", "yes", "yes"]  # embedded, subset, to Unicode


def test_words_come_back_whole():
    said = pdf_text(template("probe"), 1)
    for wanted in (
        "Café Ωmega <&> λ/4",
        short_code(DRAWN["probe"]),
        "NOT FIELD-CHECKED",
        "Print at 100 %, actual size",
        "Seen from the front",
        "copper-tape 50 µm",
    ):
        assert wanted in said


def test_pages_come_in_order_and_name_their_place():
    data = template("huge")
    for page in (1, 4, 15):
        assert f"Page {page} of 15" in pdf_text(data, page)
    assert "ground plate, row 2 of 2, column 1 of 2" in pdf_text(data, 6)


def test_what_lies_outside_a_tile_is_not_shown():
    box = Box(0, 0, 0.1, 0.1)
    whole = Group(Purpose.NOTES, (Text(0.02, 0.05, "H" * 20, 5e-3),))
    cut = Group(Purpose.NOTES, whole.items, clip=Box(0.0, 0.0, 0.04, 0.1))
    for group, shown in ((whole, True), (cut, False)):
        covered = ink(pdf_picture(pdf_bytes([Sheet("", box, (group,))]), dpi=100))
        right = covered[:, round(0.041 / 0.0254 * 100) :]
        assert bool(right.max() > 0.5) is shown


def test_the_same_sheets_give_the_same_bytes():
    assert template("huge") == template("huge")
    assert template("tiny") != template("left")


@pytest.mark.parametrize("name", ["\U0001f600 field", "地 面", "", "a\u0301 \u200d", "مرحبا"])
def test_any_name_can_be_written(name):
    box = Box(0, 0, 0.1, 0.1)
    data = pdf_bytes([Sheet(name, box, (Group(Purpose.NOTES, (Text(0.0, 0.0, name, 3e-3),)),))])
    assert pdf_picture(data, dpi=25.4).shape[:2] == pytest.approx((100, 100), abs=1)
