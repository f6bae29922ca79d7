"""What the field solver can be asked for beyond the response: how sure, which way, with a cable."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from app.verbs.arguments import BadInputError, VerbParser, quantity
from app.verbs.output import table
from app.verbs.response_record import cut_records, sphere_record, tail_record
from core.engines import FIELD, NEXT_COARSER, respond_on_mesh
from core.errors import ModelError
from core.layout.tail import coax_tail
from core.response.change import change_details, change_text
from core.response.judge import SENSE_WORDS
from core.response.polarisation import axial_ratio_db, intended_power, sense
from core.response.sphere import pattern_cut
from core.response.spread import LEAST_SHIFT, with_spread
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from argparse import Namespace

    from numpy.typing import ArrayLike

    from core.design.model import Brief
    from core.design.polarisation import Polarisation
    from core.layout.model import Layout
    from core.layout.tail import Tail
    from core.progress import Progress
    from core.response.model import MeshReport, PatternCut, Response

_NORMAL: Final = "normal"
_TEXT_STEP: Final = 10.0  # degrees between the lines of a cut
_LINEAR: Final = 60.0  # dB


@dataclass(frozen=True)
class Asked:
    """What the words ask of the field solver.

    Attributes
    ----------
    level : str
    is_single : bool
        Nothing is solved on a coarser mesh.
    azimuths : tuple of float
        Of the cuts, rad.
    wants_sphere, wants_mesh : bool
    tail : Tail or None
    """

    level: str
    is_single: bool
    azimuths: tuple[float, ...]
    wants_sphere: bool
    wants_mesh: bool
    tail: Tail | None


@dataclass(frozen=True)
class Solved:
    """What it answers: the response, and the one with a coax tail."""

    response: Response
    hung: Response | None


def add_solved(parser: VerbParser) -> None:
    """Give a verb what only the field solver can tell."""
    parser.add_argument(
        "--single", action="store_true", help="solve on one mesh only: no plus and minus"
    )
    parser.add_argument(
        "--mesh-report", action="store_true", help="tell what the mesh is made of, in text too"
    )
    angle = quantity(Quantity.ANGLE)
    parser.add_argument(
        "--cut",
        metavar="ANGLE",
        action="append",
        type=angle,
        help="pattern in the plane at this azimuth from x, degrees; may be repeated",
    )
    parser.add_argument(
        "--sphere", action="store_true", help="with --json, the far field in all directions"
    )
    parser.add_argument(
        "--tail",
        action="store_true",
        help="solve it again with a cable behind the plate, half a wavelength long",
    )
    for name, kind, what in (
        ("length", Quantity.LENGTH, "how long the cable is"),
        ("diameter", Quantity.LENGTH, "how thick its braid is; 3 mm if left out"),
        ("drop", Quantity.LENGTH, "how far it runs straight back before it bends; no bend if not"),
        ("azimuth", Quantity.ANGLE, "where it runs after the bend, degrees from x; 0 if left out"),
    ):
        parser.add_argument(f"--tail-{name}", metavar="Q", type=quantity(kind), help=what)


def asked(words: Namespace, layout: Layout) -> Asked:
    """What the words ask, once it is clear that the engine can tell."""
    given = {
        "--mesh": words.mesh is not None,
        "--single": words.single,
        "--mesh-report": words.mesh_report,
        "--cut": bool(words.cut),
        "--sphere": words.sphere,
        "--tail": words.tail,
        "--tail-length": words.tail_length is not None,
        "--tail-diameter": words.tail_diameter is not None,
        "--tail-drop": words.tail_drop is not None,
        "--tail-azimuth": words.tail_azimuth is not None,
    }
    if words.engine != FIELD and any(given.values()):
        name = next(option for option, is_given in given.items() if is_given)
        raise BadInputError(
            f"{name}: the {words.engine} model cannot tell; accepted: with --engine {FIELD}"
        )
    if words.sphere and not words.json:
        raise BadInputError("--sphere: too much to read; accepted: with --json")
    if words.tail_azimuth is not None and words.tail_drop is None:
        raise BadInputError("--tail-azimuth: the cable has no bend; accepted: with --tail-drop")
    tail = None
    if any(is_given for option, is_given in given.items() if option.startswith("--tail")):
        tail = coax_tail(
            layout,
            words.tail_length,
            words.tail_diameter,
            words.tail_drop,
            words.tail_azimuth or 0.0,
        )
    return Asked(
        words.mesh or _NORMAL,
        words.single,
        tuple(words.cut or ()),
        words.sphere,
        words.mesh_report,
        tail,
    )


def solve(
    layout: Layout, frequencies: ArrayLike, brief: Brief, wanted: Asked, progress: Progress
) -> Solved:
    """Solve on the wanted mesh, on the next coarser one and with the cable, as asked."""
    hung = None
    if wanted.tail is not None:  # first, because it may be refused
        hung = respond_on_mesh(layout, frequencies, progress, wanted.level, wanted.tail)
    response = respond_on_mesh(layout, frequencies, progress, wanted.level)
    coarser = NEXT_COARSER.get(wanted.level)
    if coarser is not None and not wanted.is_single:
        # Where only the finer mesh will do, its readings stand, without plus and minus.
        with suppress(ModelError):
            other = respond_on_mesh(layout, frequencies, progress, coarser)
            response = with_spread(response, other, coarser, brief.polarisation)
    return Solved(response, hung)


def solved_record(answer: Solved, wanted: Asked, brief: Brief) -> dict[str, Any]:
    """What was asked for, for programs."""
    record: dict[str, Any] = {}
    if wanted.azimuths:
        record["cuts"] = cut_records(answer.response, wanted.azimuths, brief)
    if wanted.wants_sphere:
        record["sphere"] = sphere_record(answer.response, brief)
    if answer.hung is not None and wanted.tail is not None:
        record["tail"] = tail_record(answer.response, answer.hung, wanted.tail, brief)
    return record


def solved_text(answer: Solved, wanted: Asked, brief: Brief) -> str:
    """What was asked for, in lines."""
    response = answer.response
    parts = []
    if answer.hung is not None and wanted.tail is not None:
        both = response, answer.hung, brief.polarisation
        parts.append(
            f"{_tail_words(wanted.tail)}\n  {change_text(*both)}\n  {change_details(*both)}\n"
        )
    if response.sphere is not None:
        cuts = [pattern_cut(response.sphere, phi) for phi in wanted.azimuths]
        parts += [_cut_text(cut, brief.polarisation) for cut in cuts]
    if wanted.wants_mesh and response.mesh is not None:
        parts.append(_mesh_text(response.mesh))
    coarser = NEXT_COARSER.get(wanted.level)
    if response.spread is not None:
        against, shift = response.spread.against, 100.0 * LEAST_SHIFT
        parts.append(
            f"± is what changes from the {against} mesh to this one, and with a shift of "
            f"{shift:g} % in frequency.\n"
        )
    elif coarser is not None and not wanted.is_single:
        parts.append(f"± unknown: there is no solution on the {coarser} mesh.\n")
    return "\n".join(parts)


def _tail_words(tail: Tail) -> str:
    """What a coax tail is."""
    long, thick = (_mm(one) for one in (tail.length, tail.diameter))
    words = f"With a coax tail {long} long and {thick} thick"
    if tail.drop is None:
        return f"{words}, straight back:"
    azimuth = format_quantity(tail.azimuth, Quantity.ANGLE, digits=3)
    return f"{words}, {_mm(tail.drop)} back and then towards {azimuth} from x:"


def _cut_text(cut: PatternCut, polarisation: Polarisation) -> str:
    """Table of a cut, every ten degrees."""
    every = np.abs(np.remainder(np.degrees(cut.theta) + 0.5, _TEXT_STEP) - 0.5) < 1e-6
    e_theta, e_phi = cut.e_theta[every], cut.e_phi[every]
    gains = 10.0 * np.log10(intended_power(e_theta, e_phi, polarisation))
    ratios = axial_ratio_db(e_theta, e_phi)
    rows = [("degrees", "dBi", "axial ratio", "sense")]
    for i, theta in enumerate(np.degrees(cut.theta[every])):
        found = sense(complex(e_theta[i]), complex(e_phi[i]), polarisation)
        shown = f"{ratios[i]:.1f} dB" if ratios[i] < _LINEAR else f"over {_LINEAR:g} dB"
        word = "all but linear" if found is None else SENSE_WORDS[found]
        rows.append((f"{theta:.0f}", f"{gains[i]:.1f}", shown, word))
    azimuth = format_quantity(cut.phi, Quantity.ANGLE, digits=3)
    asked_for = SENSE_WORDS[polarisation]
    return f"Cut at {azimuth} from x, gain to {asked_for} waves\n{table(rows, '  ')}"


def _mesh_text(report: MeshReport) -> str:
    triangles = sum(sheet.triangles for sheet in report.sheets)
    rows = [("sheet", "triangles", "smallest angle", "longest edge")]
    for sheet in report.sheets:
        angle = format_quantity(sheet.smallest_angle, Quantity.ANGLE, digits=2)
        edge = f"{_mm(sheet.longest_edge)}, {sheet.longest_in_wavelengths:.3f} wavelength"
        rows.append((sheet.name, str(sheet.triangles), angle, edge))
    return (
        f"The {report.level} mesh: {triangles} triangles, {report.unknowns} unknowns\n"
        f"{table(rows, '  ')}"
    )


def _mm(length: float) -> str:
    return format_quantity(length, Quantity.LENGTH, digits=3)
