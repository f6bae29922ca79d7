"""Tiles put together again by their marks alone, from the pages as poppler shows them."""

from itertools import product

import numpy as np
import pytest
from drawn_designs import DRAWN
from measuring import MM_PER_INCH, pdf_picture

from core.drawing.paper import PAPERS
from core.drawing.sheet import Circle, Purpose, Text
from core.drawing.template import template_pages
from core.formats.pdf import pdf_bytes
from core.layout.build import build_layout

DPI = 300
PIXEL = MM_PER_INCH / DPI


def marks_shown(sheet):
    """{(letter, number): place in mm from the upper left corner} of marks wholly on a page."""
    (group,) = [g for g in sheet.groups if g.purpose is Purpose.REGISTRATION]
    circles = [item for item in group.items if isinstance(item, Circle)]
    letters = [item.text for item in group.items if isinstance(item, Text)]
    clip, found = group.clip, {}
    for number, (circle, letter) in enumerate(zip(circles, letters, strict=True)):
        across = clip.left + 3e-3 < circle.x < clip.right - 3e-3
        if across and clip.bottom + 3e-3 < circle.y < clip.top - 3e-3:
            found[letter, number] = (circle.x * 1e3, (sheet.box.length - circle.y) * 1e3)
    return found


def measured(picture, place):
    """Where the cross of a mark really is on the page: the middle of its dark lines."""
    x, y = (round(axis / PIXEL) for axis in place)
    half = round(2.6 / PIXEL)
    part = picture[y - half : y + half, x - half : x + half].max(axis=2) < 110.0
    columns, rows = part.sum(axis=0), part.sum(axis=1)
    strong = 0.6 * 2 * half
    column = np.flatnonzero(columns > strong).mean() + 0.5
    row = np.flatnonzero(rows > strong).mean() + 0.5
    return np.array([(x - half + column) * PIXEL, (y - half + row) * PIXEL])


@pytest.fixture(scope="module")
def ground_pages():
    """(sheet, picture) of the four tiles of a ground plate of 300 x 300 mm on A4."""
    sheets = template_pages(DRAWN["huge"], build_layout(DRAWN["huge"]), PAPERS["a4"])
    data = pdf_bytes(sheets)
    return [(sheets[i], pdf_picture(data, i + 1, DPI)) for i in range(3, 7)]


def test_a_plate_of_300_mm_comes_together_within_a_fifth_of_a_millimetre(ground_pages):
    places = [
        {name: measured(picture, place) for name, place in marks_shown(sheet).items()}
        for sheet, picture in ground_pages
    ]
    offsets = [np.zeros(2)]
    for i in range(1, 4):
        shared = [(j, name) for j, name in product(range(i), places[i]) if name in places[j]]
        assert len(shared) >= 2
        steps = np.array([offsets[j] + places[j][n] - places[i][n] for j, n in shared])
        assert np.ptp(steps, axis=0).max() < 0.1  # the marks agree with each other
        offsets.append(steps.mean(axis=0))
    red = []
    for (sheet, picture), offset in zip(ground_pages, offsets, strict=True):
        foot = round((sheet.box.length - sheet.groups[0].clip.bottom) * 1e3 / PIXEL)
        r, g, b = (picture[:foot, :, colour] for colour in range(3))
        rows, columns = np.nonzero((r > 150) & (g < 110) & (b < 110))
        red.append(np.column_stack([columns + 0.5, rows + 0.5]) * PIXEL + offset)
    outline = np.concatenate(red)
    width, length = np.ptp(outline, axis=0)
    line = 0.1  # the outer edges of the line, and the pixels it falls on
    assert width - line == pytest.approx(300.0, abs=0.2)
    assert length - line == pytest.approx(300.0, abs=0.2)
