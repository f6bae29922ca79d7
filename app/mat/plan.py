"""What the plan view shows."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping

    from app.mat.handles import Handle
    from core.layout.model import Layout
    from core.shapes.outline import Region


@dataclass(frozen=True)
class PlanState:
    """What the plan view shows.

    Attributes
    ----------
    layout : Layout or None
    handles : tuple of Handle
    words : mapping of str
        What each handle stands at, by its name.
    is_stale : bool
        Whether the layout is that of an older design, because this one has none.
    note : str
        Words in the corner.
    ghost : tuple of Region
        Copper that is proposed.
    """

    layout: Layout | None
    handles: tuple[Handle, ...]
    words: Mapping[str, str] = field(default_factory=dict)
    is_stale: bool = False
    note: str = ""
    ghost: tuple[Region, ...] = ()
