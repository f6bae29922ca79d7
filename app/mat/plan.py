"""What the plan view shows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from app.mat.handles import Handle, Words, no_words

if TYPE_CHECKING:
    from core.layout.model import Layout
    from core.shapes.outline import Region


@dataclass(frozen=True)
class PlanState:
    """What the plan view shows.

    Attributes
    ----------
    layout : Layout or None
    handles : tuple of Handle
    words : callable
        What a handle stands at.
    is_stale : bool
        Whether the layout is that of an older design, because this one has none.
    note : str
        Words in the corner.
    ghost : tuple of Region
        Copper that is proposed.
    """

    layout: Layout | None
    handles: tuple[Handle, ...]
    words: Words = no_words
    is_stale: bool = False
    note: str = ""
    ghost: tuple[Region, ...] = ()
