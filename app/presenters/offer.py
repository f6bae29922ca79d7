"""What sizing is at or proposes, in words: by equations, and by field check."""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite
from typing import TYPE_CHECKING

from core.design.edit import parameters
from core.design.polarisation import Polarisation
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.jobs.settling import Best, Settled
    from core.design.model import Brief, Design
    from core.sizing.size import Sizing

_UNTOLD = "The best that the equations find."  # their numbers would be taken for the antenna's
_DOUBT = (
    "An estimate, not to cut by: equations cannot vouch for it here. "
    "Settling by field check can go on from it."
)
_PLACES = {"feed.first.": "First branch", "feed.second.": "Second branch"}


@dataclass(frozen=True)
class OfferState:
    """One line about sizing, and what can be done about it.

    Attributes
    ----------
    words : str
        Empty where nothing is told.
    icon : str
        Name in the assets: met, likely, missed, unknown, noted or note.
    changes : tuple of str
        Each length that would change, old and new.
    is_busy, is_proposal : bool
        Something is being worked out, or can be taken or left; neither for a mere note.
    can_settle : bool
        Whether settling is offered beside a proposal.
    """

    words: str = ""
    icon: str = "noted"
    changes: tuple[str, ...] = ()
    is_busy: bool = False
    is_proposal: bool = False
    can_settle: bool = False


def sizing_offer(design: Design, sizing: Sizing, is_known: bool) -> OfferState:
    """Proposal of the equations for a design, and whether they can vouch for its match."""
    told = sizing.reason if is_known or not sizing.met else _UNTOLD
    icon = "likely" if sizing.met else "missed"
    return OfferState(
        f"Dashed on the Mat. {told}{'' if is_known else f' {_DOUBT}'}",
        icon if is_known else "unknown",
        changed_lengths(design, sizing.design),
        is_proposal=True,
        can_settle=not is_known,
    )


def settling_offer(done: int, best: Best | None, brief: Brief, seconds: float) -> OfferState:
    """What settling is at."""
    if not done:
        return OfferState("Settling by field check: preparing the solver…", is_busy=True)
    words = f"Settling by field check: {_counted(done, 'solve')} in {seconds:.0f} s."
    if best is not None:
        reached = _reached(best.vswr, best.axial_ratio_db, brief)
        words += f" Best so far, dashed on the Mat: {reached} ({best.level} mesh)."
    return OfferState(words, is_busy=True)


def settled_offer(design: Design, settled: Settled, seconds: float) -> OfferState:
    """Proposal of the field solver for a design; a note where it would change nothing."""
    brief = design.brief
    is_met = settled.met or (
        settled.vswr <= brief.vswr
        and (_is_linear(brief) or settled.axial_ratio_db <= brief.axial_ratio_db)
    )
    icon = "met" if is_met else "missed"
    if not isfinite(settled.vswr):
        return OfferState(settled.reason, icon)
    within = " That is within the brief." if is_met and not settled.met else ""
    told = (
        f"{settled.reason}{within} {_counted(settled.solves, 'solve')}, "
        f"{settled.fine_solves} of them on the {settled.level} mesh, {seconds:.0f} s."
    )
    if settled.design == design:
        return OfferState(f"Nothing would change. {told}", icon)
    changes = changed_lengths(design, settled.design)
    return OfferState(f"Dashed on the Mat. {told}", icon, changes, is_proposal=True)


def changed_lengths(before: Design, after: Design) -> tuple[str, ...]:
    """Each number of a design that another one has different, as old and new."""
    old = {one.key: one.value for one in parameters(before)}
    changes = []
    for one in parameters(after):
        was = old.get(one.key)
        if was == one.value or not isinstance(one.value, float) or not isinstance(was, float):
            continue
        place = next((name for start, name in _PLACES.items() if one.key.startswith(start)), "")
        label = f"{place}, {one.label.lower()}" if place else one.label
        changes.append(f"{label} {_length(was)} → {_length(one.value)}")
    return tuple(changes)


def _reached(vswr: float, axial_ratio_db: float, brief: Brief) -> str:
    words = f"VSWR {vswr:.2f}"
    return (
        words if _is_linear(brief) else f"{words}, axial ratio {min(axial_ratio_db, 60.0):.1f} dB"
    )


def _is_linear(brief: Brief) -> bool:
    return brief.polarisation is Polarisation.LINEAR


def _length(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=5)


def _counted(number: int, word: str) -> str:
    return f"{number} {word}" if number == 1 else f"{number} {word}s"
