"""The five cards of a design, in the order of the job."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.presenters.rows import CardState, Choice, Deed, Deeds, Field, Heading, Row, Rows
from core.design.feed import Corner, DualEdge
from core.design.polarisation import Polarisation
from core.design.spelled import bends_text
from core.design.stock import MOST_LAYERS, DiscGround
from core.materials.table import dielectrics, foils, processes
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.model import Design

POLARISATIONS = {
    Polarisation.RHCP: "right-hand",
    Polarisation.LHCP: "left-hand",
    Polarisation.LINEAR: "linear",
}
_FEEDS = (("dual-edge", "two branches, one delayed"), ("probe", "probe from behind"))
_SHAPES = (("disc", "disc"), ("rect", "rectangle"))
_OWN_EXAMPLE = "a name from the list, or your own values as er=2.33,tan=0.001"


def cards(design: Design) -> tuple[CardState, ...]:
    """All five cards, in the order of the job."""
    rows_of = Rows(design)
    parts = (_brief, _stock, _element, _feed, _making)
    return tuple(part(design, rows_of) for part in parts)


def _brief(design: Design, rows_of: Rows) -> CardState:
    brief = design.brief
    summary = (
        f"{format_quantity(brief.frequency, Quantity.FREQUENCY)}, "
        f"{POLARISATIONS[brief.polarisation]}, "
        f"{format_quantity(brief.impedance, Quantity.RESISTANCE)}"
    )
    polarisation = Choice(
        "brief.polarisation",
        "Polarisation",
        brief.polarisation.value,
        (
            ("rhcp", "right-hand circular"),
            ("lhcp", "left-hand circular"),
            ("linear", "linear"),
        ),
        tip="Sense seen along the way the wave travels (IEEE Std 145)",
    )
    rows: list[Row] = [
        rows_of.text("name", "Name"),
        rows_of.number("brief.frequency"),
        polarisation,
        rows_of.number("brief.impedance"),
        rows_of.number("brief.vswr", "VSWR up to"),
    ]
    if brief.polarisation is not Polarisation.LINEAR:
        rows.append(rows_of.number("brief.axial_ratio_db", "Axial ratio up to"))
    rows.append(rows_of.text("revision", "Revision", more=True))
    return CardState("brief", "Brief", summary, tuple(rows))


def _stock(design: Design, rows_of: Rows) -> CardState:
    stock = design.stock
    ground = stock.ground
    if isinstance(ground, DiscGround):
        shape, sides = "disc", [rows_of.number("stock.ground.diameter", "Diameter")]
        plate = f"{_mm(ground.diameter)} disc"
    else:
        shape = "rect"
        sides = [
            rows_of.number("stock.ground.width", "Width (x)"),
            rows_of.number("stock.ground.length", "Length (y)"),
        ]
        plate = f"{_mm(ground.width)} × {_mm(ground.length)}"
    spacer = " + ".join(
        f"{_mm(layer.thickness)} {layer.material}" for layer in reversed(stock.spacer)
    )
    rows: list[Row] = [
        Choice(
            "stock.foil",
            "Foil",
            stock.foil.name,
            tuple((name, name) for name in foils()),
            tip="Conductor of the element and the ground plate",
        ),
        rows_of.number("stock.foil.thickness", "Foil thickness", more=True),
        rows_of.number("stock.foil.conductivity", "Conductivity", more=True),
        *_layer_rows(design, rows_of),
        Choice("ground-shape", "Ground plate", shape, _SHAPES),
        *sides,
        rows_of.number("stock.ground.offset_x", "Ground offset x", more=True),
        rows_of.number("stock.ground.offset_y", "Ground offset y", more=True),
    ]
    return CardState("stock", "Stock", f"{spacer}, {plate}", tuple(rows))


def _layer_rows(design: Design, rows_of: Rows) -> list[Row]:
    """Spacer layers from the top down, as they lie on the bench."""
    count = len(design.stock.spacer)
    names = [*(own.name for own in design.materials), *dielectrics()]
    rows: list[Row] = []
    for i in range(count, 0, -1):
        layer, key = design.stock.spacer[i - 1], f"stock.spacer.{i}"
        name = f"Layer {i}" if count > 1 else "Spacer"
        known = tuple((one, one) for one in dict.fromkeys([layer.material, *names]))
        rows += [
            Deeds(_layer_title(i, count), _layer_deeds(i, count)),
            Choice(
                f"{key}.material",
                "Material",
                layer.material,
                known,
                typed=True,
                tip=f"{name}: {_OWN_EXAMPLE}",
            ),
            rows_of.number(f"{key}.thickness", "Thickness"),
            rows_of.number(f"{key}.eps_r", f"{name} permittivity", more=True),
            rows_of.number(f"{key}.loss_tangent", f"{name} loss tangent", more=True),
        ]
    return rows


def _layer_deeds(i: int, count: int) -> tuple[Deed, ...]:
    """Buttons of a layer; alone it can only get company."""
    add = Deed(f"layer.add.{i}", "Add a layer on top", "add", count < MOST_LAYERS)
    if count == 1:
        return (add,)
    return (
        Deed(f"layer.up.{i}", "Move up", "up", i < count),
        Deed(f"layer.down.{i}", "Move down", "down", i > 1),
        Deed(f"layer.remove.{i}", "Remove", "remove"),
        add,
    )


def _layer_title(i: int, count: int) -> str:
    if count == 1:
        return "Spacer"
    place = {1: ", on the ground", count: ", under the foil"}.get(i, "")
    return f"Layer {i}{place}"


def _element(design: Design, rows_of: Rows) -> CardState:
    sides = design.element
    rows = (rows_of.number("element.width"), rows_of.number("element.length"))
    return CardState("element", "Element", f"{_mm(sides.width)} × {_mm(sides.length)}", rows)


def _feed(design: Design, rows_of: Rows) -> CardState:
    feed = design.feed
    kind = "dual-edge" if isinstance(feed, DualEdge) else "probe"
    rows: list[Row] = [Choice("feed", "Feed", kind, _FEEDS)]
    if isinstance(feed, DualEdge):
        rows += _dual_edge_rows(design, feed, rows_of)
        title = "Branches"
        summary = f"{_mm(feed.delay_length)} delay, {_mm(feed.first.width)} and "
        summary += f"{_mm(feed.second.width)} wide"
    else:
        rows += [rows_of.number("feed.x"), rows_of.number("feed.y")]
        title, summary = "Feed", f"probe at {_mm(feed.x)}, {_mm(feed.y)}"
    rows += [
        Heading("Probe", more=True),
        rows_of.number("feed.probe.diameter", "Pin diameter", more=True),
        rows_of.number("feed.probe.pad", "Pad diameter", more=True),
        rows_of.number("feed.probe.clearance", "Hole in the ground", more=True),
    ]
    return CardState("feed", title, summary, tuple(rows))


def _dual_edge_rows(design: Design, feed: DualEdge, rows_of: Rows) -> list[Row]:
    far = "left" if design.brief.polarisation is Polarisation.LHCP else "right"
    rows: list[Row] = []
    for part, title in (("first", "First, lower side"), ("second", f"Delayed, {far} side")):
        rows += [
            Heading(title),
            rows_of.number(f"feed.{part}.landing", tip="From the shared corner along the side"),
            rows_of.number(f"feed.{part}.gap", tip="From copper edge to copper edge"),
            rows_of.number(f"feed.{part}.width"),
        ]
    rows += [
        Heading("Delay strip"),
        rows_of.number("feed.delay_length", "Length", tip="Along its middle"),
        rows_of.number("feed.delay_width", "Width"),
        rows_of.number("feed.tee", "Tee", tip="From the first branch along the strip"),
        Heading("Lead-in", more=True),
        rows_of.number("feed.lead_in.length", "Length", more=True),
        rows_of.number("feed.lead_in.width", "Width", more=True),
        Field(
            "feed.lead_in.bends",
            "Bends",
            bends_text(feed.lead_in.bends),
            tip="Such as 12mm left, 20mm right; or none",
            more=True,
        ),
        Choice(
            "feed.corners",
            "Corners",
            feed.corners.value,
            tuple((corner.value, corner.value) for corner in Corner),
            more=True,
        ),
    ]
    return rows


def _making(design: Design, rows_of: Rows) -> CardState:
    making = design.making
    rows: tuple[Row, ...] = (
        Choice(
            "making.process",
            "Process",
            making.process,
            tuple((name, name.replace("-", " ")) for name in processes()),
            tip="Loads what the process can hold",
        ),
        rows_of.number("making.tolerance", tip="How far a cut edge strays"),
        rows_of.number("making.narrowest_strip"),
        rows_of.number("making.narrowest_gap"),
        rows_of.number("making.edge_margin", "Ground margin"),
        rows_of.number("making.undercut", "Undercut", tip="Artwork grows by this on every side"),
    )
    summary = f"{making.process.replace('-', ' ')}, ± {_mm(making.tolerance)}"
    return CardState("making", "Making", summary, rows)


def _mm(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=4)
