"""What the antenna will do, in sentences, and what stands in the way of making it."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import lru_cache
from typing import TYPE_CHECKING

from app.presenters.check_words import CheckState
from app.presenters.offer import OfferState
from core.design.polarisation import Polarisation
from core.findings import Severity
from core.materials.cautions import cautions_for
from core.materials.table import dielectrics
from core.response.judge import State
from core.response.model import Reading
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.evaluation import Evaluation
    from app.field_check import Checked
    from core.design.model import Design
    from core.response.judge import Verdict
    from core.response.model import Response

_ENGINES = {"live": "live model, by equations", "field": "field solver"}
_NAMES = {
    Reading.RESONANCE: "resonance",
    Reading.MATCH: "match",
    Reading.AXIAL_RATIO: "axial ratio",
    Reading.GAIN: "gain",
    Reading.EFFICIENCY: "efficiency",
    Reading.BANDS: "bands",
    Reading.PATTERN: "pattern",
}
_ASKED = (Reading.MATCH, Reading.AXIAL_RATIO)


@dataclass(frozen=True)
class Line:
    """One line: the icon that goes before it, what the icon means, and the words.

    Attributes
    ----------
    icon : str
        Name in the assets: met, likely, missed, unknown, noted, refusal, warning, note.
    words : str
    field : str
        Where a press on it leads; empty for a line that leads nowhere.
    tip : str
    """

    icon: str
    words: str
    field: str = ""
    tip: str = ""


@dataclass(frozen=True)
class ReadingsState:
    """What the Readings show.

    Attributes
    ----------
    engine : str
    lines, findings, cautions, pieces : tuple of Line
    is_stale : bool
        The lines belong to the last layout that could be drawn.
    can_size : bool
        Whether sizing is offered.
    offer : OfferState
        What sizing is at, or proposes.
    check : CheckState
        What the field check is at.
    """

    engine: str
    lines: tuple[Line, ...]
    findings: tuple[Line, ...]
    cautions: tuple[Line, ...]
    pieces: tuple[Line, ...] = ()
    is_stale: bool = False
    can_size: bool = False
    offer: OfferState = field(default_factory=OfferState)
    check: CheckState = field(default_factory=CheckState)


def readings_state(
    current: Evaluation, drawn: Evaluation, checked: Checked | None = None
) -> ReadingsState:
    """Readings of the current design, solved ones first, or of the last one that had any."""
    shown = current if current.response is not None else drawn
    if checked is not None:
        shown = checked.evaluation
    lines: tuple[Line, ...] = ()
    engine = ""
    if shown.response is not None:
        lines = verdict_lines(shown.response, shown.verdicts)
        name = shown.response.engine
        engine = checked.words if checked is not None else _ENGINES.get(name, name)
    asked = [one for one in shown.verdicts if one.reading in _ASKED]
    met = [one.state in (State.MET, State.LIKELY) for one in asked]
    return ReadingsState(
        engine=engine,
        lines=lines,
        findings=_finding_lines(current),
        cautions=caution_lines(current.design),
        pieces=_piece_lines(current),
        is_stale=checked is None and shown is not current,
        can_size=not (met and all(met)) or not current.is_buildable,
    )


def verdict_lines(response: Response, verdicts: tuple[Verdict, ...]) -> tuple[Line, ...]:
    """Sentences, those that are unknown for the same reason joined into one."""
    lines: list[Line] = []
    unknown: dict[str, list[Reading]] = {}
    for verdict in verdicts:
        if verdict.state is State.UNKNOWN:
            trust = response.trust[verdict.reading]
            remedy = f" {trust.remedy[:1].upper()}{trust.remedy[1:]}." if trust.remedy else ""
            unknown.setdefault(f"{trust.reason}.{remedy}", []).append(verdict.reading)
    told: set[str] = set()
    for verdict in verdicts:
        trust = response.trust[verdict.reading]
        if verdict.state is not State.UNKNOWN:
            tip = f"{_NAMES[verdict.reading].capitalize()}: {trust.level}. {trust.reason}."
            lines.append(Line(verdict.state.value, verdict.sentence, tip=tip))
            continue
        reason = next(one for one, readings in unknown.items() if verdict.reading in readings)
        if reason not in told:
            told.add(reason)
            words = _listed([_NAMES[reading] for reading in unknown[reason]])
            lines.append(Line("unknown", f"{words.capitalize()} unknown: {reason}"))
    return tuple(lines)


def caution_lines(design: Design) -> tuple[Line, ...]:
    """Cautions for the process and the stock."""
    occasions = {design.making.process}
    table = dielectrics()
    for layer in design.stock.spacer:
        material = table.get(layer.material)
        if material is not None and material.melts:
            occasions.add("heat")
        if material is not None and material.drinks_water:
            occasions.add("water")
    lines = [Line("warning", f"{one.topic}: {one.text}") for one in cautions_for(occasions)]
    if design.brief.polarisation is not Polarisation.LINEAR:
        words = "Opposite senses barely hear each other, and a reflector reverses the sense. "
        lines.append(Line("note", words + "Circular to linear costs 3 dB."))
    return tuple(lines)


def _finding_lines(current: Evaluation) -> tuple[Line, ...]:
    """What cannot be made first, then warnings, then notes."""
    order = list(Severity)
    lines = []
    if current.problem:
        lines.append(Line("refusal", current.problem, current.problem_field))
    for one in sorted(current.findings, key=lambda finding: order.index(finding.severity)):
        lines.append(Line(one.severity.value, one.message, one.field, one.remedy))
    return tuple(lines)


def _piece_lines(current: Evaluation) -> tuple[Line, ...]:
    """Flat list of the pieces, the top one first, as they lie on each other."""
    pieces = current.layout.pieces if current.layout is not None else ()
    return tuple(
        Line("noted", f"{one.name}: {_length(one.thickness)} {one.material}, {_place(one.z)}")
        for one in reversed(pieces)
    )


def _place(z: float) -> str:
    return f"{_length(z)} above the ground plane" if z > 0.0 else "at the ground plane"


@lru_cache(256)
def _length(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=4)


def _listed(words: list[str]) -> str:
    return " and ".join(filter(None, [", ".join(words[:-1]), words[-1]]))
