"""The five cards of a design, in the order of the job: what each says while it is closed."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from app.presenters.card_rows import brief_rows, element_rows, feed_rows, making_rows, stock_rows
from app.presenters.rows import CardState, Rows
from core.design.feed import DualEdge
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.model import Design

_POLARISATIONS = {
    Polarisation.RHCP: "right-hand",
    Polarisation.LHCP: "left-hand",
    Polarisation.LINEAR: "linear",
}


def cards(design: Design) -> tuple[CardState, ...]:
    """All five cards."""
    rows_of = Rows(design)
    brief, stock, feed = design.brief, design.stock, design.feed
    fed_by = "Branches" if isinstance(feed, DualEdge) else "Feed"
    parts = (
        ("brief", "Brief", (brief, design.name, design.revision), _brief, brief_rows),
        ("stock", "Stock", (stock, design.materials), _stock, stock_rows),
        ("element", "Element", (design.element,), _element, element_rows),
        ("feed", fed_by, (feed, brief), _feed, feed_rows),
        ("making", "Making", (design.making,), _making, making_rows),
    )
    return tuple(
        CardState(name, title, source, partial(summary, design), partial(rows, design, rows_of))
        for name, title, source, summary, rows in parts
    )


def _brief(design: Design) -> str:
    brief = design.brief
    return (
        f"{format_quantity(brief.frequency, Quantity.FREQUENCY)}, "
        f"{_POLARISATIONS[brief.polarisation]}, "
        f"{format_quantity(brief.impedance, Quantity.RESISTANCE)}"
    )


def _stock(design: Design) -> str:
    layers, ground = design.stock.spacer, design.stock.ground
    spacer = " + ".join(f"{_mm(layer.thickness)} {layer.material}" for layer in reversed(layers))
    if isinstance(ground, DiscGround):
        return f"{spacer}, {_mm(ground.diameter)} disc"
    return f"{spacer}, {_mm(ground.width)} × {_mm(ground.length)}"


def _element(design: Design) -> str:
    return f"{_mm(design.element.width)} × {_mm(design.element.length)}"


def _feed(design: Design) -> str:
    feed = design.feed
    if isinstance(feed, DualEdge):
        return f"{_mm(feed.delay_length)} delay strip"
    return f"probe at {_mm(feed.x)}, {_mm(feed.y)}"


def _making(design: Design) -> str:
    return f"{design.making.process.replace('-', ' ')}, ± {_mm(design.making.tolerance)}"


def _mm(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=4)
