"""``kerfwave show``: all parameters, what follows from them, and what can't be built."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, TextIO

import shapely

from app.verbs.arguments import VerbParser, add_file, add_json, load
from app.verbs.derived import derive
from app.verbs.findings import findings_record, findings_text
from app.verbs.output import json_text, table, value_text
from core.design.edit import parameters
from core.design.record import short_code, to_record
from core.findings import has_refusal
from core.layout.build import build_layout
from core.layout.model import Role
from core.shapes.outline import polygon

if TYPE_CHECKING:
    from argparse import Namespace

    from app.verbs.derived import Derived
    from core.design.model import Design
    from core.layout.model import Layout, Piece


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    add_file(parser)
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Print the project."""
    design = load(words.file)
    layout = build_layout(design)
    derived = derive(design, layout)
    if words.json:
        out.write(json_text(_record(design, layout, derived)))
    else:
        out.write(_text(design, layout, derived))


def _text(design: Design, layout: Layout, derived: Derived) -> str:
    rows = [(one.key, value_text(one), one.label) for one in parameters(design)]
    findings = findings_text(layout.findings, "  ")
    if not has_refusal(layout.findings):
        findings = f"  nothing keeps this from being built\n{findings}"
    return (
        f"{design.name}, revision {design.revision}, code {short_code(design)}\n"
        f"\nParameters\n{table(rows, '  ')}"
        f"\nDerived\n{derived.text('  ')}"
        f"\nFindings\n{findings}"
    )


def _record(design: Design, layout: Layout, derived: Derived) -> dict[str, Any]:
    return {
        "code": short_code(design),
        "design": to_record(design),
        "derived": derived.record(),
        "findings": findings_record(layout.findings),
        "layout": [_piece_record(piece) for piece in layout.pieces],
        "holes": [
            {
                "name": hole.name,
                "x_m": hole.x,
                "y_m": hole.y,
                "diameter_m": hole.diameter,
                "through": hole.through,
            }
            for hole in layout.holes
        ],
        "ports": [
            {
                "name": port.name,
                "x_m": port.x,
                "y_m": port.y,
                "diameter_m": port.diameter,
                "impedance_ohm": port.impedance,
            }
            for port in layout.ports
        ],
    }


def _piece_record(piece: Piece) -> dict[str, Any]:
    outline = shapely.orient_polygons(polygon(piece.region))
    return {
        "name": piece.name,
        "role": piece.role.value,
        # The ground plane is the upper face of its plate; of all others the underside counts.
        "z_m": 0.0 if piece.role is Role.GROUND_COPPER else piece.z,
        "thickness_m": piece.thickness,
        "material": piece.material,
        "is_cut": piece.cut,
        "outline": shapely.geometry.mapping(outline),
    }
