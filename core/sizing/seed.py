"""Where sizing starts: closed forms, and what follows from the stock and the process."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import ceil
from typing import TYPE_CHECKING

from core.constants import SPEED_OF_LIGHT
from core.design.defaults import feed_named
from core.design.feed import DualEdge, ProbePin
from core.design.model import Design, Element
from core.layout.model import Foil
from core.lines.stack import Layer, series_permittivity
from core.live.element import seed_width
from core.live.modes import element_modes
from core.live.resonance import resonant_length
from core.sizing.knobs import GRID, on_grid

if TYPE_CHECKING:
    from core.design.model import Brief, Making
    from core.design.stock import Stock

THICKEST = 0.06  # free-space wavelengths; thicker, the live model cannot tell in any case
_SMALLEST_SIDE = 1e-3  # m; stops the search for a side where the spacer uses it all up
_THIN_PIN_UNDER = 14e-3  # side of an element that gets the pin of a thin coax, m


@dataclass(frozen=True)
class Start:
    """Closed-form starting values for a brief on a stock.

    Attributes
    ----------
    square : float
        Side of a square element that resonates at the frequency, m.
    width, length : float
        Of a linearly polarised element, m.
    quality : float
        Q of the square element's modes.
    """

    square: float
    width: float
    length: float
    quality: float


def starting_values(brief: Brief, stock: Stock) -> Start:
    """Closed-form starting values for a brief on a stock.

    Parameters
    ----------
    brief : Brief
    stock : Stock

    Returns
    -------
    Start
    """
    layers = tuple(Layer(one.thickness, one.eps_r, one.loss_tangent) for one in stock.spacer)
    frequency, eps_r = brief.frequency, series_permittivity(layers)
    square = SPEED_OF_LIGHT / (2.0 * frequency * eps_r**0.5)
    for _ in range(30):  # a contraction: the extension hardly depends on the width
        square = max(resonant_length(frequency, square, layers), _SMALLEST_SIDE)
    width = seed_width(frequency, eps_r)
    length = max(resonant_length(frequency, width, layers), _SMALLEST_SIDE)
    foil = Foil(stock.foil.thickness, stock.foil.conductivity)
    modes = element_modes(square, square, layers, foil)
    return Start(square, width, length, modes.x.losses.total)


def seed_design(
    name: str,
    brief: Brief,
    stock: Stock,
    making: Making,
    feed_name: str,
    element: Element | None = None,
) -> Design:
    """Unsized design for a brief: closed-form sides and a feed of the named kind.

    Parameters
    ----------
    name : str
    brief : Brief
    stock : Stock
    making : Making
    feed_name : str
        "dual-edge" or "probe".
    element : Element, optional
        Kept as given.

    Returns
    -------
    Design

    Raises
    ------
    InputError
        If the feed is not known or does not go with the polarisation.
    """
    if element is None:
        start = starting_values(brief, stock)
        element = Element(on_grid(start.square), on_grid(start.square))
    pin = _pin(min(element.width, element.length))
    feed = feed_named(feed_name, element, making, stock.height, pin)
    if isinstance(feed, DualEdge):
        gap = _gap(brief, stock, making, pin)
        feed = replace(
            feed, first=replace(feed.first, gap=gap), second=replace(feed.second, gap=gap)
        )
    return Design(name, brief, stock, element, feed, making)


def _gap(brief: Brief, stock: Stock, making: Making, pin: ProbePin) -> float:
    """Gap between element and strips: one spacer thickness where that lets equations tell.

    A quarter of it on thicker spacers, where they cannot in any case. The pad must clear the
    element from the middle of the narrowest strip.
    """
    height = stock.height
    thin = height * brief.frequency / SPEED_OF_LIGHT <= THICKEST
    clear = making.narrowest_gap + (pin.pad - making.narrowest_strip) / 2
    gap = max(making.narrowest_gap, clear, height if thin else height / 4)
    return on_grid(ceil(gap / GRID - 1e-6) * GRID)


def _pin(side: float) -> ProbePin:
    """Pin of a common coax or panel jack, or of thin coax under a small element."""
    if side < _THIN_PIN_UNDER:
        return ProbePin(0.51e-3, 1.1e-3, 1.6e-3)
    return ProbePin(1.27e-3, 2.6e-3, 4.1e-3)
