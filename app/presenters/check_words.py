"""What the field check is at, in words."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.design.polarisation import Polarisation

if TYPE_CHECKING:
    from app.field_check import Checked, FieldCheck
    from app.tail_check import TailCheck

CANCEL, CHECK_NOW, TRY_CABLE = "Cancel", "Check now", "Try a cable"


@dataclass(frozen=True)
class CheckState:
    """One line about the field check.

    Attributes
    ----------
    words : str
        Empty where it is switched off.
    before : str
        What was solved before the last edit; empty where nothing was.
    button : str
        What can be done about it; empty for nothing.
    cable : str
        What a cable behind the plate changes; empty where it was not asked.
    cable_tip : str
        What else it changes.
    """

    words: str = ""
    before: str = ""
    button: str = ""
    cable: str = ""
    cable_tip: str = ""


def check_state(field: FieldCheck, tail: TailCheck) -> CheckState:
    """Line about the field check as it stands."""
    if not field.is_on:
        return CheckState()
    current, last = field.current, field.last
    before = _before(last) if current is None and last is not None else ""
    busy = field.busy or ("Solving with a cable behind the plate…" if tail.is_busy else "")
    if busy:
        return CheckState(busy, before, CANCEL)
    if field.problem:
        return CheckState(f"No field check: {field.problem}", before)
    if field.is_stopped:
        return CheckState("Field check stopped until the next edit.", before, CHECK_NOW)
    if current is not None:
        quick = "Solved on a quick mesh; the chosen one follows when the hand rests."
        return CheckState(
            f"Sheets will say: field-checked, {current.level} mesh." if current.mark else quick,
            button=TRY_CABLE if tail.can_start else "",
            cable=tail.words,
            cable_tip=tail.details,
        )
    return CheckState("The field check follows when the hand rests.", before)


def _before(checked: Checked) -> str:
    """Headline of an answer that an edit has overtaken."""
    shown = checked.evaluation
    assert shown.response is not None
    spot = shown.response.spot
    words = f"Solved before this edit: VSWR {float(spot.vswr):.2f}"
    if shown.design.brief.polarisation is not Polarisation.LINEAR:
        words += f", axial ratio {float(spot.axial_ratio_db):.1f} dB"
    return f"{words} ({checked.level} mesh)."
