"""``kerfwave readings``: what the antenna does over frequency, held against its brief."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, TextIO

import numpy as np

from app.verbs.arguments import VerbParser, add_file, add_json, load, quantity, whole_number
from app.verbs.engine import add_engine, trust_record, trust_text
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text, table
from app.verbs.progress import told_on_stderr
from core.design.polarisation import Polarisation
from core.engines import ENGINES, FIELD, LIVE
from core.layout.build import build_layout
from core.response.bands import DEFAULT_POINTS, frequency_grid
from core.response.judge import SENSE_WORDS, State, judge
from core.response.polarisation import sense
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from argparse import Namespace

    from core.design.model import Brief, Design
    from core.findings import Finding
    from core.response.bands import Band
    from core.response.judge import Verdict
    from core.response.model import Response

_WHO: Final = {LIVE: "live model", FIELD: "field solver"}
_MARKS: Final = {
    State.MET: "met",
    State.LIKELY: "likely",
    State.MISSED: "missed",
    State.UNKNOWN: "unknown",
    State.NOTED: "",
}


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    add_file(parser)
    for name, what in (("from", "start"), ("to", "end")):
        parser.add_argument(
            f"--{name}",
            dest=what,
            metavar="Q",
            type=quantity(Quantity.FREQUENCY),
            help=f"{what} of the sweep; 10 %% beside the brief's frequency if left out",
        )
    parser.add_argument(
        "--points",
        metavar="N",
        type=whole_number,
        default=DEFAULT_POINTS,
        help=f"frequencies in the sweep, {DEFAULT_POINTS} if left out",
    )
    add_engine(parser)
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Work the response out and print it."""
    design = load(words.file)
    brief = design.brief
    frequencies = frequency_grid(brief.frequency, words.start, words.end, words.points)
    layout = build_layout(design)
    response = ENGINES[words.engine](layout, frequencies, told_on_stderr(words.engine))
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    if words.json:
        record = _record(response, brief)
        record["verdicts"] = [
            {"reading": one.reading, "state": one.state, "sentence": one.sentence}
            for one in verdicts
        ]
        record["findings"] = findings_record(layout.findings)
        out.write(json_text(record))
    else:
        out.write(_text(design, response, verdicts, layout.findings))


def _record(response: Response, brief: Brief) -> dict[str, Any]:
    """The response as programs read it; single values are at the brief's frequency."""
    sweep, spot = response.sweep, response.spot
    found = sense(complex(spot.e_x), complex(spot.e_y), brief.polarisation)
    behind = response.front_to_back
    return {
        "engine": response.engine,
        "brief_frequency_hz": response.frequency,
        "reference_impedance_ohm": response.reference_impedance,
        "frequency_hz": sweep.frequency,
        "s11": sweep.s11,
        "z_in_ohm": sweep.z_in,
        "vswr": sweep.vswr,
        "axial_ratio_db": sweep.axial_ratio_db,
        "gain_dbi": sweep.gain_dbi(brief.polarisation),
        "realised_gain_dbi": sweep.realised_gain_dbi(brief.polarisation),
        "efficiency": sweep.efficiency,
        "sense": None if found is None else found.value,
        "modes": [
            {"name": mode.name, "frequency_hz": mode.frequency, "q": mode.quality_factor}
            for mode in response.modes
        ],
        "vswr2_band_hz": _edges(response.vswr_band()),
        "axial_ratio_3db_band_hz": _edges(response.axial_ratio_band()),
        "directivity_dbi": 10.0 * np.log10(response.directivity),
        "beamwidth_deg": np.degrees(response.beamwidth),
        "front_to_back_db": None if behind is None else 10.0 * np.log10(behind),
        "trust": trust_record(response),
    }


def _edges(band: Band | None) -> tuple[float, float] | None:
    return None if band is None else (band.low, band.high)


def _text(
    design: Design,
    response: Response,
    verdicts: tuple[Verdict, ...],
    findings: tuple[Finding, ...],
) -> str:
    brief, sweep = design.brief, response.sweep
    low, high = (format_quantity(float(f), Quantity.FREQUENCY) for f in sweep.frequency[[0, -1]])
    parts = [
        f"{design.name}, by the {_WHO[response.engine]}, {low} to {high}\nBrief: {_asked(brief)}\n",
        table((_MARKS[one.state], _sentence(one)) for one in verdicts),
        trust_text(response),
        findings_text(findings),
    ]
    return "\n".join(part for part in parts if part)


def _asked(brief: Brief) -> str:
    where = format_quantity(brief.frequency, Quantity.FREQUENCY)
    port = format_quantity(brief.impedance, Quantity.RESISTANCE)
    asked = f"{SENSE_WORDS[brief.polarisation]} at {where}, VSWR up to {brief.vswr:g} on {port}"
    if brief.polarisation is Polarisation.LINEAR:
        return asked
    return f"{asked}, axial ratio up to {brief.axial_ratio_db:g} dB"


def _sentence(verdict: Verdict) -> str:
    """The sentence of a verdict; why one is unknown is told once, for all of them."""
    if verdict.state is not State.UNKNOWN:
        return verdict.sentence
    return f"{verdict.reading.replace('_', ' ').capitalize()}: not known, for the reason below."
