"""What the plan view shows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from app.mat.handles import Handle, Words, no_words

if TYPE_CHECKING:
    from PySide6.QtCore import QRect

    from app.mat.camera import Camera
    from app.mat.current import CurrentState
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


@dataclass(frozen=True)
class Sight:
    """What is looked at, and from where.

    Attributes
    ----------
    state : PlanState
    camera : Camera
    area : QRect
        The view without its rulers.
    shows_dimensions : bool
    current : CurrentState
        What was solved.
    phase : float
        Instant that it is seen at, rad.
    """

    state: PlanState
    camera: Camera
    area: QRect
    shows_dimensions: bool
    current: CurrentState
    phase: float
