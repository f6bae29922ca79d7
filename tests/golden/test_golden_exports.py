"""Exports against files kept from an earlier day: what is drawn, where, on which layer.

Files are read back and compared within a micrometre or two. After a change that is meant,
write them anew with `pytest tests/golden --regen-golden` and look at the difference.
"""

import csv
import io
import re
import xml.etree.ElementTree as ET

import ezdxf
import pypdfium2
import pytest
from drawn_designs import DRAWN

from core.formats.export import ExportOptions, export_files
from core.layout.build import build_layout

NAMES = ["tiny", "left", "probe"]
NUMBER = re.compile(r"-?\d+(?:\.\d+)?")
WITHIN_MM = 2e-3


def masked(text):
    """Text without the short code, which changes with every new parameter of a design."""
    return re.sub(r"code [0-9A-F]{6}", "code", text or "")


def numbers_and_words(text):
    """A text as its words and its numbers, which may differ a little."""
    return NUMBER.sub("#", text), [float(number) for number in NUMBER.findall(text)]


def read_svg(data):
    """One entry per element: its layer, tag, words and numbers."""
    found = []
    for group in ET.fromstring(data):
        for element in group.iter():
            parts = [f"{key}={value}" for key, value in sorted(element.attrib.items())]
            shape, numbers = numbers_and_words(" ".join(parts))
            found.append((group.get("id"), element.tag, shape, masked(element.text), numbers))
    return found


def read_dxf(data):
    document = ezdxf.read(io.StringIO(data.decode()))
    found = []
    for entity in document.modelspace():
        kind, words = entity.dxftype(), ""
        if kind == "LWPOLYLINE":
            numbers = [value for point in entity.get_points("xyb") for value in point]
            words = str(entity.closed)
        elif kind == "CIRCLE":
            numbers = [entity.dxf.center.x, entity.dxf.center.y, entity.dxf.radius]
        else:
            numbers = [entity.dxf.insert.x, entity.dxf.insert.y, entity.dxf.height]
            words = masked(entity.dxf.text)
        found.append((entity.dxf.layer, kind, "", words, numbers))
    return found


def read_csv(data):
    return [
        ("", "", *numbers_and_words(",".join(row)))
        for row in csv.reader(io.StringIO(data.decode(), newline=""))
    ]


def read_pdf(data):
    """One entry per drawn object: its page, kind and, but for text, its bounds in mm."""
    document = pypdfium2.PdfDocument(data)
    found = []
    for number, page in enumerate(document):
        size = [side / 72 * 25.4 for side in page.get_size()]
        found.append((number, "page", masked(page.get_textpage().get_text_bounded()), size))
        for item in page.get_objects():
            words = item.type == pypdfium2.raw.FPDF_PAGEOBJ_TEXT
            bounds = [] if words else [value / 72 * 25.4 for value in item.get_bounds()]
            found.append((number, item.type, "", bounds))
    document.close()
    return found


READERS = {
    "template-svg": read_svg,
    "template-pdf": read_pdf,
    "artwork-dxf": read_dxf,
    "cutlist-csv": read_csv,
}


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("kind", READERS)
def test_an_export_draws_what_it_drew_before(name, kind, golden):
    design = DRAWN[name]
    (file,) = export_files(design, build_layout(design), [kind], ExportOptions())
    suffix = file.name.rsplit(".", 1)[1]
    kept = READERS[kind](golden(f"{name}-{kind}.{suffix}", file.data))
    made = READERS[kind](file.data)
    assert [entry[:-1] for entry in made] == [entry[:-1] for entry in kept]
    for (*where, numbers), (*_, before) in zip(made, kept, strict=True):
        assert numbers == pytest.approx(before, abs=WITHIN_MM), where
