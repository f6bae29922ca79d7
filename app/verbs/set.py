"""``kerfwave set``: change parameters of a project, checked like an edit in the window."""

from __future__ import annotations

from typing import TYPE_CHECKING, TextIO

from app.verbs.arguments import BadInputError, VerbParser, add_file, add_json, add_output, load
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text, table, value_text
from core.design.edit import parameters, with_texts
from core.design.record import to_record
from core.layout.build import build_layout
from core.materials.table import folded
from core.storage.project import write_project

if TYPE_CHECKING:
    from argparse import Namespace
    from pathlib import Path

    from core.design.model import Design


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    add_file(parser)
    parser.add_argument(
        "changes",
        metavar="KEY=VALUE",
        nargs="+",
        help="dotted name and new value, such as element.length=41.5mm, "
        'stock.spacer="air:10mm + card:1mm", stock.ground=disc:200mm, feed=probe',
    )
    add_output(parser, "write the changed project there and leave FILE as it is")
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Change the project, write it and print what changed."""
    before = load(words.file)
    after = with_texts(before, _pairs(words.changes))
    findings = build_layout(after).findings
    goal = words.output or words.file
    write_project(goal, after, replace=words.replace or _is_same_file(goal, words.file))
    if words.json:
        record = {
            "file": str(goal),
            "changed": [row[0] for row in _differences(before, after)],
            "design": to_record(after),
            "findings": findings_record(findings),
        }
        out.write(json_text(record))
        return
    nothing = "nothing changed: these are the values already\n"
    out.write(table(_differences(before, after)) or nothing)
    out.write(findings_text(findings))
    out.write(f"written to {goal}\n")


def _is_same_file(goal: Path, file: Path) -> bool:
    try:
        return goal.samefile(file)
    except OSError:  # there is no such goal yet, or it has no name that could be
        return False


def _pairs(changes: list[str]) -> list[tuple[str, str]]:
    """Keys and values; a key without a value, or given twice, is refused."""
    pairs: dict[str, tuple[str, str]] = {}
    for change in changes:
        key, equals, value = change.partition("=")
        key = key.strip()
        if not equals or not key:
            raise BadInputError(
                f"{change[:40]!r} is no change; accepted: KEY=VALUE, such as element.length=41.5mm"
            )
        if folded(key) in pairs:
            raise BadInputError(f"{key[:40]!r} is given twice; accepted: each key once")
        pairs[folded(key)] = key, value
    return list(pairs.values())


def _differences(before: Design, after: Design) -> list[tuple[str, str]]:
    """Changed keys with their old and new values, in the order of the job."""
    old = {parameter.key: value_text(parameter) for parameter in parameters(before)}
    new = {parameter.key: value_text(parameter) for parameter in parameters(after)}
    keys = [*new, *(key for key in old if key not in new)]
    return [
        (key, f"{old.get(key, '(none)')} -> {new.get(key, '(none)')}")
        for key in keys
        if old.get(key) != new.get(key)
    ]
