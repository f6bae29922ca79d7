"""Settling by field check, as it is done in the solver's process.

What is told here is light to load: the window never loads the solver itself.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite
from typing import TYPE_CHECKING

from core.design.polarisation import Polarisation
from core.layout.build import build_layout, top_copper
from core.shapes.outline import mirrored

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.design.model import Design
    from core.fullwave.mesh import Level
    from core.layout.model import Layout
    from core.progress import Progress
    from core.shapes.outline import Region
    from core.sizing.goal import Goal
    from core.sizing.solved import Spot


@dataclass(frozen=True)
class Best:
    """Best design solved so far: what it reached on which mesh, and its copper."""

    vswr: float
    axial_ratio_db: float
    level: str
    copper: tuple[Region, ...]


@dataclass(frozen=True)
class Settled:
    """What settling came to, and the copper of it.

    Attributes
    ----------
    design : Design
    met : bool
        Whether the goals of settling are reached, which may be stricter than the brief.
    reason : str
        What was reached, and what stood in the way where the goals were not.
    vswr, axial_ratio_db : float
        Infinite where nothing could be solved.
    solves, fine_solves : int
        Solutions in all, and of them on the mesh that it was judged on.
    level : str
    copper : tuple of Region
        None where nothing could be solved.
    """

    design: Design
    met: bool
    reason: str
    vswr: float
    axial_ratio_db: float
    solves: int
    fine_solves: int
    level: str
    copper: tuple[Region, ...]


def settled(design: Design, progress: Progress, tell: Callable[[Best], None]) -> Settled:
    """Settle a design, judged on the finest mesh; tells of each better one on the way."""
    # Loaded here: only the solver's process needs it, and it takes a second.
    from core.sizing.settle import settle, settling_goal  # noqa: PLC0415
    from core.sizing.solved import FieldSpot  # noqa: PLC0415

    is_left = design.brief.polarisation is Polarisation.LHCP
    spot = _WatchedSpot(FieldSpot(), settling_goal(design.brief), is_left, tell)
    found = settle(design, spot=spot, progress=progress)
    return Settled(
        design=found.design,
        met=found.met,
        reason=found.reason,
        vswr=found.vswr,
        axial_ratio_db=found.axial_ratio_db,
        solves=found.solves,
        fine_solves=found.fine_solves,
        level=found.level.value,
        copper=top_copper(build_layout(found.design)) if isfinite(found.vswr) else (),
    )


class _WatchedSpot:
    """Solves, and tells of each design that is better than those before it."""

    def __init__(self, spot: Spot, goal: Goal, is_left: bool, tell: Callable[[Best], None]) -> None:
        self._spot, self._goal, self._is_left = spot, goal, is_left
        self._tell = tell
        self._rank: tuple[bool, float] = (True, float("inf"))

    def __call__(
        self, layout: Layout, frequency: float, level: Level
    ) -> tuple[complex, complex, complex]:
        solved = self._spot(layout, frequency, level)
        if frequency == layout.frequency:
            self._compare(layout, solved, level)
        return solved

    def _compare(
        self, layout: Layout, solved: tuple[complex, complex, complex], level: Level
    ) -> None:
        missing = self._goal.missing(*solved)
        rank = (level.value != "fine", self._goal.worst(missing))
        if rank >= self._rank:
            return
        self._rank = rank
        copper = top_copper(layout)
        if self._is_left:  # its mirror image is what is solved
            copper = tuple(mirrored(region) for region in copper)
        self._tell(Best(*self._goal.reached(missing), level.value, copper))
