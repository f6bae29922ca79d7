"""``kerfwave readings``: what the antenna does over frequency, held against its brief."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, TextIO

from app.verbs.arguments import VerbParser, add_file, add_json, load, quantity, whole_number
from app.verbs.engine import add_engine, add_mesh, trust_text
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text, table
from app.verbs.progress import told_on_stderr
from app.verbs.response_record import response_record
from app.verbs.solved import add_solved, asked, solve, solved_record, solved_text
from core.design.polarisation import Polarisation
from core.engines import ENGINES, FIELD, LIVE
from core.layout.build import build_layout
from core.response.bands import DEFAULT_POINTS, frequency_grid
from core.response.judge import SENSE_WORDS, State, judge
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from argparse import Namespace

    from app.verbs.solved import Solved
    from core.design.model import Brief, Design
    from core.findings import Finding
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
    add_mesh(parser)
    add_solved(parser)
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Work the response out and print it."""
    design = load(words.file)
    brief = design.brief
    frequencies = frequency_grid(brief.frequency, words.start, words.end, words.points)
    layout = build_layout(design)
    progress = told_on_stderr(words.engine)
    wanted = asked(words, layout)
    answer: Solved | None = None
    if words.engine == FIELD:
        answer = solve(layout, frequencies, brief, wanted, progress)
        response = answer.response
    else:
        response = ENGINES[words.engine](layout, frequencies, progress)
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    if words.json:
        record = response_record(response, brief)
        if answer is not None:
            record |= solved_record(answer, wanted, brief)
        record["verdicts"] = [
            {"reading": one.reading, "state": one.state, "sentence": one.sentence}
            for one in verdicts
        ]
        record["findings"] = findings_record(layout.findings)
        out.write(json_text(record))
    else:
        more = "" if answer is None else solved_text(answer, wanted, brief)
        out.write(_text(design, response, verdicts, layout.findings, more))


def _text(
    design: Design,
    response: Response,
    verdicts: tuple[Verdict, ...],
    findings: tuple[Finding, ...],
    more: str,
) -> str:
    brief, sweep = design.brief, response.sweep
    low, high = (format_quantity(float(f), Quantity.FREQUENCY) for f in sweep.frequency[[0, -1]])
    parts = [
        f"{design.name}, by the {_WHO[response.engine]}, {low} to {high}\nBrief: {_asked(brief)}\n",
        table((_MARKS[one.state], _sentence(one)) for one in verdicts),
        more,
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
