"""``kerfwave size``: from a brief and the stock at hand to a project."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final, TextIO

import numpy as np

from app.verbs.arguments import (
    VerbParser,
    add_json,
    add_output,
    add_spacer,
    layers,
    quantity,
    taken_by,
    word,
)
from app.verbs.engine import add_engine, trust_record, trust_text
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text, table, value_text
from app.verbs.progress import told_on_stderr
from core.constants import SPEED_OF_LIGHT
from core.design import spelled
from core.design.defaults import FEED_NAMES, default_design
from core.design.edit import parameters
from core.design.model import Brief
from core.design.polarisation import Polarisation
from core.design.record import to_record
from core.design.stock import DiscGround, Stock
from core.engines import ENGINES, FIELD, LIVE
from core.layout.build import build_layout
from core.materials.table import dielectrics, find, foils, folded, processes
from core.progress import SILENT
from core.response.model import Reading, Trust, TrustLevel
from core.sizing.seed import seed_design
from core.sizing.size import size
from core.storage.project import write_project
from core.units import Quantity

if TYPE_CHECKING:
    from argparse import Namespace
    from collections.abc import Callable, Mapping

    from core.design.model import Design
    from core.design.stock import SpacerLayer
    from core.sizing.settle import Settling
    from core.sizing.size import Sizing

_NAME: Final = "Sized antenna"
_BOARD: Final = "FR-4:1.6mm"
_BOARD_PROCESSES: Final = ("toner-etch", "photo-etch", "board-house")
_ROOM: Final = 2.2  # wavelengths of ground plate that the search has before it is fitted
_WIDEST: Final = 4.0  # m
_SHOWN: Final = ("stock.ground.", "element.", "feed.")
_LEFT_OUT: Final = "; if left out: live where it can tell the match and axial ratio, else field"
_SETTLING: Final = "settling: {done} designs solved; it gives up near {total}"
_READINGS: Final = "kerfwave readings --engine field will tell"


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    brief = default_design().brief
    _option(parser, "frequency", "Q", quantity(Quantity.FREQUENCY), "2.32 GHz", brief.frequency)
    _option(parser, "polarisation", "WORD", word(Polarisation), "rhcp", brief.polarisation)
    _option(parser, "impedance", "Q", quantity(Quantity.RESISTANCE), "50 ohm", brief.impedance)
    _option(parser, "vswr", "N", quantity(Quantity.RATIO), "what the process can hold")
    _option(parser, "axial-ratio", "Q", quantity(Quantity.DECIBEL), "what the process can hold")
    _option(parser, "feed", "KIND", str, "dual-edge, or probe for linear")
    add_spacer(parser, "layers from the ground up; polystyrene:6mm, or a board if it is etched")
    _option(parser, "foil", "NAME", taken_by(spelled.foil), "tape, or 35 µm copper on a board")
    _option(parser, "ground", "SHAPE", taken_by(spelled.ground), "a disc that is large enough")
    _option(parser, "element", "SHAPE", taken_by(spelled.element), "found; rect:WxL is kept")
    _option(parser, "process", "NAME", str, "knife, or toner-etch on a board")
    _option(parser, "name", "TEXT", str, _NAME, _NAME)
    add_engine(parser, None, _LEFT_OUT)
    add_output(parser, "write the project there")
    add_json(parser)
    parser.epilog = (
        f"feeds: {', '.join(FEED_NAMES)}\nprocesses: {', '.join(processes())}\n"
        f"materials: {', '.join(dielectrics())}, or er=2.33,tan=0.001\n"
        f"foils: {', '.join(foils())}\nshapes: disc:D or rect:WxL, such as disc:200mm"
    )


def run(words: Namespace, out: TextIO) -> None:
    """Size a design, write it and print what it came to."""
    seed = seed_design(
        words.name,
        _brief(words),
        _stock(words),
        spelled.making(_process(words)),
        _feed(words),
        words.element,
    )
    sized = _sized(seed, words)
    if words.output:
        write_project(words.output, sized.design, replace=words.replace)
    findings = build_layout(sized.design).findings
    if words.json:
        record = sized.record()
        record["file"] = str(words.output) if words.output else None
        record["findings"] = findings_record(findings)
        out.write(json_text(record))
        return
    written = f"written to {words.output}" if words.output else "not written: -o FILE was left out"
    told = findings_text(findings)
    out.write(
        f"{sized.reason}\n\n{_sizes(sized.design)}\n{trust_text(sized)}"
        + (f"\n{told}" if told else "")
        + f"\n{written}\n"
    )


@dataclass(frozen=True)
class _Sized:
    """What sizing came to, by equations or, from there, by the field solver."""

    sizing: Sizing
    settling: Settling | None
    trust: Mapping[Reading, Trust]

    @property
    def design(self) -> Design:
        return (self.settling or self.sizing).design

    @property
    def reason(self) -> str:
        if self.settling is None:
            return self.sizing.reason
        solves, fine = self.settling.solves, self.settling.fine_solves
        counted = f"{solves} designs solved, {fine} of them on the {self.settling.level.value} mesh"
        return f"{self.settling.reason}\n{counted}."

    def record(self) -> dict[str, Any]:
        """The same for programs."""
        told, settling = self.settling or self.sizing, self.settling
        return {
            "engine": LIVE if settling is None else FIELD,
            "met": told.met,
            "reason": told.reason,
            "vswr": told.vswr,
            "axial_ratio_db": told.axial_ratio_db,
            "evaluations": self.sizing.evaluations,
            "solves": 0 if settling is None else settling.solves,
            "fine_solves": 0 if settling is None else settling.fine_solves,
            "level": None if settling is None else settling.level.value,
            "design": to_record(told.design),
            "trust": trust_record(self),
        }


def _sized(seed: Design, words: Namespace) -> _Sized:
    """Size by equations; go on by the field solver where asked to, or where they cannot tell."""
    keeps = words.element is not None
    fits = words.ground is None and _room(words) < _WIDEST
    sizing = size(seed, keep_element=keeps, fit_ground=fits)
    layout = build_layout(sizing.design)
    trust = ENGINES[LIVE](layout, np.array([layout.frequency]), SILENT).trust
    if words.engine == LIVE or (words.engine is None and _is_told(trust)):
        return _Sized(sizing, None, trust)
    # Its libraries take half a second to load.
    from core.sizing.settle import settle  # noqa: PLC0415

    settling = settle(sizing.design, keep_element=keeps, progress=told_on_stderr(FIELD, _SETTLING))
    return _Sized(sizing, settling, _settled_trust(settling))


def _is_told(trust: Mapping[Reading, Trust]) -> bool:
    """Tell whether an engine can tell the match and the axial ratio."""
    asked = (Reading.MATCH, Reading.AXIAL_RATIO)
    return all(trust[reading].level is not TrustLevel.UNKNOWN for reading in asked)


def _settled_trust(settling: Settling) -> dict[Reading, Trust]:
    """Trust in what settling solves for; it works out nothing else."""
    solved = Trust(TrustLevel.GOOD, f"full-wave solution on the {settling.level.value} mesh")
    rest = Trust(TrustLevel.UNKNOWN, "sizing does not work it out", _READINGS)
    asked = (Reading.MATCH, Reading.AXIAL_RATIO)
    return {reading: solved if reading in asked else rest for reading in Reading}


def _option(
    parser: VerbParser,
    name: str,
    metavar: str,
    read: Callable[[str], Any],
    left_out: str,
    default: object = None,
) -> None:
    parser.add_argument(
        f"--{name}", metavar=metavar, type=read, default=default, help=f"if left out: {left_out}"
    )


def _spacer(words: Namespace) -> tuple[SpacerLayer, ...]:
    """Layers as given; else what goes with the process."""
    if words.spacer:
        return layers(words.spacer)
    if words.process and folded(words.process) in map(folded, _BOARD_PROCESSES):
        return spelled.spacer(_BOARD)
    return default_design().stock.spacer


def _is_board(words: Namespace) -> bool:
    """Tell whether the copper comes on the topmost layer, as on a laminate."""
    known = dielectrics().get(_spacer(words)[-1].material)
    return known is not None and known.is_board


def _process(words: Namespace) -> str:
    return str(words.process or (_BOARD_PROCESSES[0] if _is_board(words) else "knife"))


def _feed(words: Namespace) -> str:
    is_linear = words.polarisation is Polarisation.LINEAR
    return str(words.feed or ("probe" if is_linear else "dual-edge"))


def _brief(words: Namespace) -> Brief:
    holds = find(processes(), _process(words), "process", "process")
    return Brief(
        words.frequency,
        words.polarisation,
        words.impedance,
        holds.vswr if words.vswr is None else words.vswr,
        holds.axial_ratio_db if words.axial_ratio is None else words.axial_ratio,
    )


def _stock(words: Namespace) -> Stock:
    foil = words.foil or spelled.foil("copper-35" if _is_board(words) else "copper-tape")
    return Stock(_spacer(words), foil, words.ground or DiscGround(_room(words)))


def _room(words: Namespace) -> float:
    """Diameter of the ground plate to search on, m."""
    return float(min(_ROOM * SPEED_OF_LIGHT / words.frequency, _WIDEST))


def _sizes(design: Design) -> str:
    return table(
        (
            (one.key, value_text(one), one.label)
            for one in parameters(design)
            if one.key.startswith(_SHOWN)
        ),
        "  ",
    )
