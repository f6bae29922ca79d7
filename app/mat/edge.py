"""What the edge-on view shows of a design, and its handles."""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil
from typing import TYPE_CHECKING

from app.mat.handles import Handle, Pull, Words, no_words
from core.constants import SPEED_OF_LIGHT
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.design.model import Design
    from core.layout.model import Layout

SLIDER_STEP = 5e-5  # m
_SLIDER_REACH = 0.15  # of the wavelength in air


@dataclass(frozen=True)
class EdgeState:
    """What the edge-on view and its slider show.

    Attributes
    ----------
    layout : Layout or None
    handles : tuple of Handle
    words : callable
        What a handle stands at.
    layers : tuple of (str, float, float)
        Material and its words, underside and thickness (m), from the ground up.
    spacing, widest : float
        What the slider sets, and its upper end, m.
    spacing_words : str
    is_stale : bool
    """

    layout: Layout | None
    handles: tuple[Handle, ...]
    words: Words = no_words
    layers: tuple[tuple[str, str, float, float], ...] = ()
    spacing: float = 0.0
    widest: float = 0.0
    spacing_words: str = ""
    is_stale: bool = False


def spacing_key(design: Design) -> str:
    """Parameter that the spacing slider sets: the thickness of the thickest layer."""
    layers = design.stock.spacer
    thickest = max(range(len(layers)), key=lambda i: layers[i].thickness)
    return f"stock.spacer.{thickest + 1}.thickness"


def edge_handles(design: Design) -> tuple[Handle, ...]:
    """One handle on top of every layer, the top one first."""
    handles, height = [], 0.0
    many = len(design.stock.spacer) > 1
    for i, layer in enumerate(design.stock.spacer, 1):
        height += layer.thickness
        key = f"stock.spacer.{i}.thickness"
        label = f"Layer {i}" if many else "Spacing"
        handles.append(Handle(key, label, 0.0, height, (Pull(key, (0.0, 1.0)),)))
    return tuple(reversed(handles))


def edge_state(design: Design, layout: Layout | None, words: Words, is_stale: bool) -> EdgeState:
    """State of the edge-on view for a design and the layout to draw."""
    layers, z = [], 0.0
    for layer in design.stock.spacer:
        thick = format_quantity(layer.thickness, Quantity.LENGTH, digits=4)
        layers.append((layer.material, f"{thick} {layer.material}", z, layer.thickness))
        z += layer.thickness
    thickest = max(layer.thickness for layer in design.stock.spacer)
    reach = max(_SLIDER_REACH * SPEED_OF_LIGHT / design.brief.frequency, thickest)
    return EdgeState(
        layout,
        edge_handles(design),
        words,
        tuple(layers),
        thickest,
        ceil(reach / SLIDER_STEP) * SLIDER_STEP,
        format_quantity(thickest, Quantity.LENGTH, digits=4),
        is_stale,
    )
