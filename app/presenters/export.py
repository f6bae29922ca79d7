"""Exports: which files, what the sheet looks like, and where they go."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.drawing.template import template_pages
from core.errors import LayoutError
from core.findings import Severity
from core.formats.export import KINDS, ExportOptions, export_files, file_name, paper_named
from core.storage.atomic import write_all_atomically

if TYPE_CHECKING:
    from pathlib import Path

    from app.evaluation import Evaluation
    from core.drawing.sheet import Sheet


@dataclass(frozen=True)
class ExportRequest:
    """What to write, and where.

    Attributes
    ----------
    kinds : tuple of str
        Keys of the table of exports.
    options : ExportOptions
    folder : Path
    replace : bool
        Whether files of these names may be replaced.
    """

    kinds: tuple[str, ...]
    options: ExportOptions
    folder: Path
    replace: bool


def kinds() -> tuple[tuple[str, str], ...]:
    """Kinds of export and their names for people."""
    return tuple((key, kind.title) for key, kind in KINDS.items())


def obstacle(shown: Evaluation) -> str:
    """Why nothing of this design may be cut; empty where it may."""
    if shown.layout is None:
        return shown.problem
    refusals = [one for one in shown.findings if one.severity is Severity.REFUSAL]
    return f"This design cannot be built: {refusals[0].message}" if refusals else ""


def preview(shown: Evaluation, options: ExportOptions) -> tuple[Sheet, ...]:
    """Pages of the template as they will be printed; none where it cannot be drawn."""
    if shown.layout is None:
        return ()
    try:
        return template_pages(
            shown.design,
            shown.layout,
            paper_named(options.paper),
            field_check=options.field_check,
            mirrored=options.mirrored,
        )
    except LayoutError:
        return ()


def names(shown: Evaluation, request: ExportRequest) -> tuple[str, ...]:
    """Names of the files that a request would write."""
    return tuple(file_name(shown.design, KINDS[kind], request.options) for kind in request.kinds)


def taken(shown: Evaluation, request: ExportRequest) -> tuple[str, ...]:
    """Those of the names that the folder holds already."""
    return tuple(one for one in names(shown, request) if (request.folder / one).exists())


def write(shown: Evaluation, request: ExportRequest) -> tuple[str, ...]:
    """Write the files, all or none, and return their names.

    Raises
    ------
    ExportError
        If the design cannot be built.
    FileError
        If one cannot be written, or is there and may not be replaced.
    """
    assert shown.layout is not None
    files = export_files(shown.design, shown.layout, request.kinds, request.options)
    contents = {request.folder / one.name: one.data for one in files}
    write_all_atomically(contents, replace=request.replace)
    return tuple(one.name for one in files)
