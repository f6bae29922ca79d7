"""Where the field check may begin: shapes of dual-edge feeds that have settled before."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.design.feed import Branch, DualEdge, LeadIn
from core.design.model import Element
from core.sizing.knobs import on_grid
from core.sizing.seed import starting_values

if TYPE_CHECKING:
    from core.design.model import Design


@dataclass(frozen=True)
class _Shape:
    """Landings and lead-in by the element's side; tee by the strip's length."""

    first: float
    second: float
    tee: float
    lead: float = 0.0


_SHAPES: tuple[_Shape, ...] = (
    _Shape(0.48, 0.48, 0.4, 0.4),
    _Shape(0.25, 0.48, 0.5),
    _Shape(0.48, 0.25, 0.02, 0.25),
    _Shape(0.48, 0.25, 0.02),
)
_STRIP, _GAP = 0.06, 0.03  # of the side


def family_starts(design: Design, *, keep_element: bool = False) -> tuple[Design, ...]:
    """Rough designs on the same stock, one of each family of shapes.

    Parameters
    ----------
    design : Design
        Its brief, stock, process, probe and corners are kept; if it has a lead-in, shapes
        with one come first.
    keep_element : bool
        Whether its sides are kept too; otherwise they are those of a resonant square.

    Returns
    -------
    tuple of Design
        The likeliest first; none for a probe feed. They may not be buildable yet.
    """
    feed = design.feed
    if not isinstance(feed, DualEdge):
        return ()
    if not keep_element:
        square = on_grid(starting_values(design.brief, design.stock).square)
        design = replace(design, element=Element(square, square))
    shapes = _SHAPES
    if feed.lead_in.length > 0.0:
        shapes = tuple(sorted(_SHAPES, key=lambda shape: shape.lead == 0.0))
    return tuple(_shaped(design, feed, shape) for shape in shapes)


def _shaped(design: Design, feed: DualEdge, shape: _Shape) -> Design:
    making, side = design.making, min(design.element.width, design.element.length)
    width = on_grid(max(making.narrowest_strip, _STRIP * side))
    clear = making.narrowest_gap + (feed.probe.pad - width) / 2
    gap = on_grid(max(making.narrowest_gap, _GAP * side, clear))
    first, second = on_grid(shape.first * side), on_grid(shape.second * side)
    length = on_grid(first + second + 2 * gap + width)
    return replace(
        design,
        feed=replace(
            feed,
            first=Branch(first, gap, width),
            second=Branch(second, gap, width),
            delay_width=width,
            delay_length=length,
            tee=on_grid(shape.tee * length),
            lead_in=LeadIn(on_grid(shape.lead * side), width),
        ),
    )
