"""``kerfwave export``: template, artwork and cut list as files."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, TextIO

from app.verbs.arguments import BadInputError, VerbParser, add_file, add_json, load
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text
from core.drawing.paper import PAPERS
from core.errors import ExportError, FileError
from core.formats.export import KINDS, ExportOptions, export_files
from core.layout.build import build_layout
from core.storage.atomic import write_all_atomically

if TYPE_CHECKING:
    from argparse import Namespace


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    # Behind "--as WHAT ..." the file would count as one more kind, so that it comes first.
    parser.usage = (
        f"{parser.prog} FILE --as WHAT [WHAT ...] [--to DIR] [--paper NAME] [--mirrored] "
        "[--true-arcs] [--replace] [--json]"
    )
    add_file(parser)
    parser.add_argument(
        "--as",
        dest="kinds",
        metavar="WHAT",
        nargs="+",
        action="extend",
        required=True,
        help=f"{', '.join(KINDS)}; every one counts",
    )
    parser.add_argument(
        "--to",
        metavar="DIR",
        type=Path,
        default=Path(),
        help="folder to write to, made if it is not there; this one if left out",
    )
    parser.add_argument(
        "--paper",
        metavar="NAME",
        default="a4",
        help=f"of templates: {', '.join(PAPERS)}; a4 if left out",
    )
    parser.add_argument(
        "--mirrored", action="store_true", help="templates as seen from behind; artwork never is"
    )
    parser.add_argument(
        "--true-arcs", action="store_true", help="arcs in the artwork instead of fine facets"
    )
    parser.add_argument("--replace", action="store_true", help="overwrite files that are there")
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Make every file, then write all of them or none."""
    design = load(words.file)
    layout = build_layout(design)
    options = ExportOptions(words.paper, words.mirrored, true_arcs=words.true_arcs)
    try:
        made = export_files(design, layout, words.kinds, options)
    except ExportError as error:
        raise BadInputError(f"{words.file}: {error}") from error
    files = {words.to / one.name: one.data for one in made}
    _make_folder(words.to)
    write_all_atomically(files, replace=words.replace)
    if words.json:
        record = {
            "files": [str(path) for path in files],
            "field_checked": bool(options.field_check),
            "findings": findings_record(layout.findings),
        }
        out.write(json_text(record))
        return
    out.write("".join(f"written to {path}\n" for path in files))
    if not options.field_check:
        out.write("NOT FIELD-CHECKED: by equations alone, as every sheet says\n")
    out.write(findings_text(layout.findings))


def _make_folder(folder: Path) -> None:
    if folder.exists() and not folder.is_dir():
        raise BadInputError(f"--to: {folder} is a file; accepted: a folder")
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise FileError(
            f"{folder}: cannot be made ({error.strerror}); accepted: a folder you may write to",
            path=folder,
        ) from error
