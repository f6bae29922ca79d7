from dataclasses import replace

import numpy as np
import pytest

from core.design import spelled
from core.design.defaults import default_design
from core.design.model import Brief, Design, Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, RectangleGround, Stock
from core.errors import Cancelled, InputError
from core.findings import has_refusal
from core.layout.build import build_layout
from core.live.respond import respond
from core.progress import SILENT
from core.sizing.seed import seed_design
from core.sizing.size import Sizing, size


def seed(
    spacer: str,
    frequency: float,
    process: str,
    feed: str,
    polarisation: str,
    element: Element | None = None,
) -> Design:
    stock = Stock(spelled.spacer(spacer), spelled.foil("copper-35"), RectangleGround(0.6, 0.6))
    brief = Brief(frequency, Polarisation(polarisation))
    return seed_design("test", brief, stock, spelled.making(process), feed, element)


ROWS = [
    ("polystyrene:6mm", 2.32e9, "knife", "dual-edge", "rhcp"),
    ("air:6mm+card:1mm", 2.45e9, "knife", "dual-edge", "lhcp"),
    ("air:10mm", 0.868e9, "scissors", "dual-edge", "rhcp"),
    ("FR-4:1.6mm", 2.45e9, "toner-etch", "dual-edge", "rhcp"),
    ("FR-4:0.8mm", 2.45e9, "photo-etch", "dual-edge", "lhcp"),
    ("low-loss:1.524mm", 5.8e9, "board-house", "dual-edge", "rhcp"),
    ("FR-4:1.6mm", 2.45e9, "toner-etch", "probe", "linear"),
    ("FR-4:1.6mm", 2.45e9, "toner-etch", "probe", "rhcp"),
    ("foam:5mm", 2.45e9, "knife", "probe", "lhcp"),
    ("er=2.2:1.588mm", 10e9, "photo-etch", "probe", "linear"),
]


@pytest.mark.parametrize(("spacer", "frequency", "process", "feed", "polarisation"), ROWS)
def test_sized_design_meets_its_brief_when_it_is_read_again(
    spacer: str, frequency: float, process: str, feed: str, polarisation: str
) -> None:
    sizing = size(seed(spacer, frequency, process, feed, polarisation), fit_ground=True)
    assert sizing.met, sizing.reason
    layout = build_layout(sizing.design)
    assert not has_refusal(layout.findings)
    response = respond(layout, np.array([frequency]), SILENT)
    assert float(response.spot.vswr) == pytest.approx(sizing.vswr, rel=1e-9)
    assert float(response.spot.vswr) <= 1.5
    if polarisation != "linear":
        assert float(response.spot.axial_ratio_db) <= 1.5
        right, left = (response.spot.gain_dbi(Polarisation(one)) for one in ("rhcp", "lhcp"))
        assert (right > left) == (polarisation == "rhcp")


def test_sizing_moves_sides_and_strips_only() -> None:
    before = default_design()
    after = size(before).design
    assert after.brief == before.brief
    assert after.stock == before.stock
    assert after.making == before.making
    assert after.feed.probe == before.feed.probe


def test_lengths_come_out_in_hundredths_of_a_millimetre() -> None:
    design = size(seed(*ROWS[3])).design
    for length in (design.element.width, design.feed.first.landing, design.feed.delay_width):  # type: ignore[union-attr]
        assert length * 1e5 == pytest.approx(round(length * 1e5), abs=1e-6)


def test_delay_strip_takes_exactly_the_way_round_the_corner() -> None:
    codes = {one.code for one in build_layout(size(seed(*ROWS[0])).design).findings}
    assert not codes & {"landing-slid", "detour", "delay-too-short"}


@pytest.mark.parametrize("feed", ["dual-edge", "probe"])
def test_given_element_is_kept(feed: str) -> None:
    element = Element(56e-3, 53e-3)
    design = seed("polystyrene:6mm", 2.32e9, "knife", feed, "rhcp", element)
    assert size(design, keep_element=True).design.element == element


def test_ground_plate_is_fitted_half_a_wavelength_beyond() -> None:
    design = seed(*ROWS[0])
    disc = replace(design, stock=replace(design.stock, ground=DiscGround(0.2)))
    for one in (design, disc):
        layout = build_layout(size(one, fit_ground=True).design)
        assert layout.ground_reach >= 0.5 * 299792458 / 2.32e9
        assert layout.feed.over_ground


def test_what_cannot_be_met_is_said_with_what_stood_in_the_way() -> None:
    sizing = size(seed("air:34mm", 0.7e9, "knife", "probe", "linear"))
    assert not sizing.met
    assert "too inductive" in sizing.reason
    assert "\n" not in sizing.reason


def test_strips_too_wide_for_the_element_are_named() -> None:
    sizing = size(seed("er=10.2,tan=0.002:2.66mm", 2.25e9, "scissors", "dual-edge", "rhcp"))
    assert not sizing.met
    assert "scissors" in sizing.reason


def test_left_hand_size_is_the_right_hand_one_mirrored() -> None:
    spacer, frequency, process, feed, _ = ROWS[3]
    right, left = (size(seed(spacer, frequency, process, feed, one)) for one in ("rhcp", "lhcp"))
    assert right.design.feed == left.design.feed
    assert right.vswr == pytest.approx(left.vswr, rel=1e-9)


def test_sizing_can_be_cancelled() -> None:
    class Stop:
        def step(self, done: int, total: int) -> None:
            raise Cancelled

    with pytest.raises(Cancelled):
        size(default_design(), progress=Stop())


def test_linear_dual_edge_is_refused() -> None:
    with pytest.raises(InputError, match="dual-edge"):
        seed("air:6mm", 2.45e9, "knife", "dual-edge", "linear")


def test_same_brief_gives_the_same_design() -> None:
    first: Sizing = size(seed(*ROWS[0]))
    assert first == size(seed(*ROWS[0]))


@pytest.mark.parametrize(
    ("feed", "polarisation"), [("probe", "rhcp"), ("probe", "linear"), ("dual-edge", "rhcp")]
)
def test_a_spacer_that_leaves_no_element_is_told_in_words(feed: str, polarisation: str) -> None:
    sizing = size(seed("FR-4:117mm", 2.32e9, "knife", feed, polarisation))
    assert not sizing.met
    assert sizing.reason.endswith(".")
