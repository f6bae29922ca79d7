"""Cut list read back by the csv module."""

import csv
import io
from dataclasses import replace
from math import pi

import pytest
from drawn_designs import DRAWN, changed

from core.design.stock import SpacerLayer
from core.formats.csv_list import cut_list_bytes
from core.layout.build import build_layout


def rows(design):
    text = cut_list_bytes(build_layout(design)).decode("utf-8")
    return list(csv.DictReader(io.StringIO(text, newline="")))


def test_the_header_names_the_units():
    assert list(rows(DRAWN["round"])[0]) == [
        "piece",
        "material",
        "quantity",
        "shape",
        "width_mm",
        "length_mm",
        "thickness_mm",
        "area_mm2",
        "strip_length_mm",
        "holes_mm",
    ]


def test_a_tape_build_lists_copper_ground_and_spacer():
    copper, ground, spacer = rows(DRAWN["round"])
    assert copper["piece"] == "element and branches"
    assert (copper["material"], copper["quantity"], copper["shape"]) == (
        "copper-tape",
        "1",
        "outline",
    )
    # From the element's far edge to the strip's: 27 + 27 + 7 + 4 mm.
    assert float(copper["width_mm"]) == float(copper["length_mm"]) == 65.0
    assert float(copper["strip_length_mm"]) == pytest.approx(54 + 2 * 9)
    assert float(copper["area_mm2"]) == pytest.approx(54 * 54 + 54 * 4 + 12 + 42, rel=1e-6)
    assert (ground["shape"], ground["width_mm"], ground["holes_mm"]) == ("disc", "200", "4.1")
    assert float(ground["area_mm2"]) == pytest.approx(pi * (1e4 - 2.05**2), rel=1e-8)
    assert (spacer["material"], spacer["thickness_mm"], spacer["holes_mm"]) == (
        "polystyrene",
        "6",
        "1.27",
    )
    assert ground["strip_length_mm"] == ""


def test_equal_layers_share_a_line():
    assert [row["quantity"] for row in rows(DRAWN["card"])[2:]] == ["2", "1"]


def test_air_is_not_on_the_list():
    assert "air" not in {row["material"] for row in rows(changed(("stock.spacer", "air:8mm")))}


def test_names_with_commas_and_quotes_come_back_whole():
    layer = SpacerLayer('foam, "pink" é', 6e-3, 1.1, 0.0)
    stock = replace(DRAWN["probe"].stock, spacer=(layer,))
    assert rows(replace(DRAWN["probe"], stock=stock))[2]["material"] == 'foam, "pink" é'


def test_the_same_layout_gives_the_same_bytes():
    layout = build_layout(DRAWN["huge"])
    assert cut_list_bytes(layout) == cut_list_bytes(build_layout(DRAWN["huge"]))
