import pytest

from core.design.defaults import default_design
from core.design.edit import parameters, value_at, with_number, with_text, with_texts
from core.design.feed import DualEdge, ProbeFeed, Turn
from core.design.model import Design
from core.design.polarisation import Polarisation
from core.errors import CoreError, InputError, OutOfRangeError


def test_every_numeric_parameter_takes_its_own_value_back() -> None:
    design = default_design()
    for parameter in parameters(design):
        if parameter.spec is not None:
            assert isinstance(parameter.value, float)
            assert with_number(design, parameter.key, parameter.value) == design


def test_an_edit_moves_only_what_it_names() -> None:
    design = default_design()
    changed = with_text(design, "element.length", "41,5 mm")
    before = {one.key: one.value for one in parameters(design)}
    after = {one.key: one.value for one in parameters(changed)}
    assert {key for key in before if before[key] != after[key]} == {"element.length"}
    assert after["element.length"] == 0.0415


@pytest.mark.parametrize(
    ("key", "text", "where"),
    [
        ("element.length", "-3", "element.length"),
        ("element.length", "nonsense", "element.length"),
        ("element.length", "inf", "element.length"),
        ("element.width", "900 m", "element.width"),
        ("brief.frequency", "1 Hz", "brief.frequency"),
        ("brief.polarisation", "upside-down", "brief.polarisation"),
        ("brief.polarisation", "linear", "dual-edge"),
        ("stock.spacer", "cheese:3mm", "cheese"),
        ("stock.spacer", "air", "MATERIAL:THICKNESS"),
        ("stock.spacer", "er=0.5:1mm", "er"),
        ("stock.spacer.3", "air:1mm", "1 to 1"),
        ("stock.ground", "hexagon:3mm", "disc:DIAMETER"),
        ("stock.ground", "rect:3mm", "rect:WIDTHxLENGTH"),
        ("element", "disc:30mm", "rect:WIDTHxLENGTH"),
        ("making.process", "teeth", "board-house"),
        ("feed", "wishful", "dual-edge"),
        ("feed.lead_in.bends", "left", "left or right|no bend"),
        ("feed.lead_in.bends", "20mm left, 10mm left", "rising"),
        ("feed.probe.pad", "1 mm", "feed.probe.pad"),
        ("feed.third.gap", "1 mm", "no parameter"),
        ("name", "two\nlines", "name"),
        ("", "1", "no parameter"),
        ("stock.spacer.x.thickness", "1 mm", "layer|parameter"),
    ],
)
def test_refusals_say_where_in_one_line(key: str, text: str, where: str) -> None:
    design = default_design()
    with pytest.raises(InputError, match=where) as refusal:
        with_text(design, key, text)
    assert "\n" not in str(refusal.value)
    assert design == default_design()


def test_changes_that_belong_together_may_come_in_any_order() -> None:
    changes = [("brief.polarisation", "linear"), ("feed", "probe")]
    for order in (changes, changes[::-1]):
        design = with_texts(default_design(), order)
        assert design.brief.polarisation is Polarisation.LINEAR
        assert isinstance(design.feed, ProbeFeed)


def test_changes_that_do_not_belong_together_are_refused_whole() -> None:
    with pytest.raises(CoreError, match="dual-edge"):
        with_texts(default_design(), [("brief.polarisation", "linear"), ("element.width", "50")])


def test_a_material_brings_its_values_and_keeps_the_thickness() -> None:
    design = with_text(default_design(), "stock.spacer.1.material", "FR 4")
    layer = design.stock.spacer[0]
    assert (layer.material, layer.eps_r, layer.loss_tangent) == ("FR-4", 4.3, 0.018)
    assert layer.thickness == 6e-3


def test_own_materials_go_before_the_table() -> None:
    design = with_text(default_design(), "materials.card", "er=2.1,tan=0.03")
    design = with_text(design, "stock.spacer", "air:5mm + Card:1mm")
    assert design.stock.spacer[1].eps_r == 2.1


def test_process_brings_what_it_can_hold_and_keeps_the_undercut() -> None:
    design = with_text(default_design(), "making.undercut", "20 um")
    design = with_text(design, "making.process", "Photo etch")
    assert design.making.narrowest_gap == 0.2e-3
    assert design.making.undercut == pytest.approx(20e-6)


def test_bends_read_with_decimal_commas() -> None:
    design = with_text(default_design(), "feed.lead_in.bends", "12,5mm left, 20 mm right")
    assert isinstance(design.feed, DualEdge)
    bends = design.feed.lead_in.bends
    assert [(bend.distance, bend.turn) for bend in bends] == [
        (0.0125, Turn.LEFT),
        (0.02, Turn.RIGHT),
    ]


def test_numbers_out_of_range_are_refused() -> None:
    with pytest.raises(OutOfRangeError, match=r"feed\.tee"):
        with_number(default_design(), "feed.tee", float("nan"))


def test_unknown_name_has_no_value() -> None:
    with pytest.raises(InputError, match="no parameter"):
        value_at(default_design(), "element.height")


def test_layers_are_counted_from_one_from_the_ground_up() -> None:
    design: Design = with_text(default_design(), "stock.spacer", "air:10mm+card:1mm")
    assert value_at(design, "stock.spacer.1.material") == "air"
    assert value_at(design, "stock.spacer.2.thickness") == 1e-3
