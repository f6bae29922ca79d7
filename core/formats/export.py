"""What can be exported: one table of kinds, each with its file name and its writer."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable
from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from core.drawing.artwork import artwork_sheet
from core.drawing.paper import PAPERS, Paper
from core.drawing.template import template_pages, template_sheet
from core.errors import ExportError, LayoutError
from core.findings import Severity
from core.formats.csv_list import cut_list_bytes
from core.materials.table import find

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.design.model import Design
    from core.layout.model import Layout

_LONGEST_NAME: Final = 48  # characters of the design's name in a file name


@dataclass(frozen=True)
class ExportOptions:
    """How to export.

    Attributes
    ----------
    paper : str
        Name of a paper for templates: a4, a3, letter, tabloid.
    mirrored : bool
        Templates as seen from behind; artwork never is.
    field_check : str
        How the field solver has checked this very layout; empty where it has not.
    true_arcs : bool
        Artwork with arcs instead of facets.
    """

    paper: str = "a4"
    mirrored: bool = False
    field_check: str = ""
    true_arcs: bool = False


@dataclass(frozen=True)
class ExportedFile:
    """A file to write: its name, without a folder, and what goes into it."""

    name: str
    data: bytes


@dataclass(frozen=True)
class Kind:
    """One kind of export.

    Attributes
    ----------
    title : str
        For people.
    suffix : str
        End of the file name.
    write : callable
        Makes the bytes.
    turns : bool
        Whether mirroring changes it.
    """

    title: str
    suffix: str
    write: Callable[[Design, Layout, ExportOptions], bytes]
    turns: bool = False


# The writers load their libraries when they are first used: loaded here, they would slow the
# start of the window and of every verb.


def _template_svg(design: Design, layout: Layout, options: ExportOptions) -> bytes:
    from core.formats.svg import svg_bytes  # noqa: PLC0415

    return svg_bytes(
        template_sheet(
            design,
            layout,
            paper_named(options.paper),
            field_check=options.field_check,
            mirrored=options.mirrored,
        )
    )


def _template_pdf(design: Design, layout: Layout, options: ExportOptions) -> bytes:
    from core.formats.pdf import pdf_bytes  # noqa: PLC0415

    return pdf_bytes(
        template_pages(
            design,
            layout,
            paper_named(options.paper),
            field_check=options.field_check,
            mirrored=options.mirrored,
        )
    )


def _artwork_dxf(design: Design, layout: Layout, options: ExportOptions) -> bytes:
    from core.formats.dxf import dxf_bytes  # noqa: PLC0415

    sheet = artwork_sheet(design, layout, field_check=options.field_check)
    return dxf_bytes(sheet, true_arcs=options.true_arcs)


def _cut_list_csv(_design: Design, layout: Layout, _options: ExportOptions) -> bytes:
    return cut_list_bytes(layout)


KINDS: Final = MappingProxyType(
    {
        "template-svg": Kind("Cutting template, SVG", "template.svg", _template_svg, turns=True),
        "template-pdf": Kind("Cutting template, PDF", "template.pdf", _template_pdf, turns=True),
        "artwork-dxf": Kind("Artwork, DXF", "artwork.dxf", _artwork_dxf),
        "cutlist-csv": Kind("Cut list, CSV", "cutlist.csv", _cut_list_csv),
    }
)


def paper_named(name: str) -> Paper:
    """Paper by name.

    Parameters
    ----------
    name : str
        a4, a3, letter or tabloid; case does not matter.

    Returns
    -------
    Paper

    Raises
    ------
    InputError
        If the name is not known.
    """
    return find(PAPERS, name, "paper", "paper")


def export_files(
    design: Design, layout: Layout, kinds: Iterable[str], options: ExportOptions
) -> tuple[ExportedFile, ...]:
    """Make files of a design.

    Parameters
    ----------
    design : Design
    layout : Layout
        Of that design.
    kinds : iterable of str
        Keys of `KINDS`; each is made once.
    options : ExportOptions

    Returns
    -------
    tuple of ExportedFile
        In the order of the kinds.

    Raises
    ------
    InputError
        If a kind or the paper is not known.
    ExportError
        If the design cannot be built, or its undercut allowance closes a gap.
    """
    wanted = dict.fromkeys(find(KINDS, kind, "kind of export", "as") for kind in kinds)
    paper_named(options.paper)
    refusals = [one for one in layout.findings if one.severity is Severity.REFUSAL]
    if refusals:
        first = refusals[0]
        more = f" ({len(refusals) - 1} more)" if len(refusals) > 1 else ""
        raise ExportError(f"this design cannot be built: {first.message} {first.remedy}{more}")
    try:
        return tuple(
            ExportedFile(file_name(design, kind, options), kind.write(design, layout, options))
            for kind in wanted
        )
    except LayoutError as error:
        raise ExportError(str(error)) from error


def file_name(design: Design, kind: Kind, options: ExportOptions) -> str:
    """File name of an export: plain letters, digits and hyphens, never empty.

    Parameters
    ----------
    design : Design
    kind : Kind
    options : ExportOptions

    Returns
    -------
    str
        Such as "glider-r1-template.pdf".
    """
    name = _plain(design.name)[:_LONGEST_NAME].strip("-") or "antenna"
    revision = _plain(design.revision) or "0"
    turned = "mirrored-" if options.mirrored and kind.turns else ""
    return f"{name}-r{revision}-{turned}{kind.suffix}"


def _plain(text: str) -> str:
    """Text in lower-case ASCII letters, digits and single hyphens."""
    letters = unicodedata.normalize("NFKD", text).encode("ascii", "ignore").decode().lower()
    return re.sub(r"[^a-z0-9]+", "-", letters).strip("-")
