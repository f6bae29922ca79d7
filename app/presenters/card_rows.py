"""Rows of the five cards."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.presenters.rows import Choice, Deed, Deeds, Field, Heading, Row, Rows
from core.design.feed import Corner, DualEdge
from core.design.polarisation import Polarisation
from core.design.spelled import bends_text
from core.design.stock import MOST_LAYERS, DiscGround
from core.materials.table import dielectrics, foils, processes

if TYPE_CHECKING:
    from core.design.model import Design

_FEEDS = (("dual-edge", "two branches, one delayed"), ("probe", "probe from behind"))
_SHAPES = (("disc", "disc"), ("rect", "rectangle"))
_OWN_EXAMPLE = "a name from the list, or your own values as er=2.33,tan=0.001"


def brief_rows(design: Design, rows_of: Rows) -> tuple[Row, ...]:
    """What the antenna must do."""
    brief = design.brief
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
    return tuple(rows)


def stock_rows(design: Design, rows_of: Rows) -> tuple[Row, ...]:
    """What it is made of."""
    stock = design.stock
    ground = stock.ground
    if isinstance(ground, DiscGround):
        shape, sides = "disc", [rows_of.number("stock.ground.diameter", "Diameter")]
    else:
        shape = "rect"
        sides = [
            rows_of.number("stock.ground.width", "Width (x)"),
            rows_of.number("stock.ground.length", "Length (y)"),
        ]
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
    return tuple(rows)


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


def element_rows(_design: Design, rows_of: Rows) -> tuple[Row, ...]:
    """Its two sides."""
    return (rows_of.number("element.width"), rows_of.number("element.length"))


def feed_rows(design: Design, rows_of: Rows) -> tuple[Row, ...]:
    """How it is fed."""
    feed = design.feed
    kind = "dual-edge" if isinstance(feed, DualEdge) else "probe"
    rows: list[Row] = [Choice("feed", "Feed", kind, _FEEDS)]
    if isinstance(feed, DualEdge):
        rows += _dual_edge_rows(design, feed, rows_of)
    else:
        rows += [rows_of.number("feed.x"), rows_of.number("feed.y")]
    rows += [
        Heading("Probe", more=True),
        rows_of.number("feed.probe.diameter", "Pin diameter", more=True),
        rows_of.number("feed.probe.pad", "Pad diameter", more=True),
        rows_of.number("feed.probe.clearance", "Hole in the ground", more=True),
    ]
    return tuple(rows)


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


def making_rows(design: Design, rows_of: Rows) -> tuple[Row, ...]:
    """How it is cut."""
    making = design.making
    return (
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
        rows_of.number("making.turnover", "Turned over", tip="Foil folded over the plate's rim"),
    )
