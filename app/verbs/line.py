"""``kerfwave line``: one microstrip line over a spacer, or the width for an impedance."""

from __future__ import annotations

from math import log
from typing import TYPE_CHECKING, Any, Final, TextIO

from app.verbs.arguments import VerbParser, add_json, add_spacer, layers, quantity
from app.verbs.output import json_text, table
from core.lines.microstrip import line_properties, width_for_impedance
from core.lines.stack import Layer
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from argparse import Namespace

_FREQUENCY: Final = 2.45e9  # Hz
_FOIL: Final = 35e-6  # m, the common weight of copper on boards
_COPPER: Final = 58e6  # S/m
_NEPER_IN_DB: Final = 20.0 / log(10.0)


def add(parser: VerbParser) -> None:
    """Declare the words that the verb takes."""
    add_spacer(
        parser, "layers from the ground up, such as FR-4:1.6mm; every one counts", required=True
    )
    what = parser.add_mutually_exclusive_group(required=True)
    what.add_argument(
        "--width", metavar="Q", type=quantity(Quantity.LENGTH, 1e-6, 1.0), help="of the strip"
    )
    what.add_argument(
        "--impedance",
        metavar="Q",
        type=quantity(Quantity.RESISTANCE, 1.0, 500.0),
        help="wanted; the width for it is found",
    )
    parser.add_argument(
        "--frequency",
        metavar="Q",
        type=quantity(Quantity.FREQUENCY),
        default=_FREQUENCY,
        help="2.45 GHz if left out",
    )
    parser.add_argument(
        "--foil-thickness",
        metavar="Q",
        type=quantity(Quantity.LENGTH, 0.0, 3e-3),
        default=_FOIL,
        help="of the copper, 35 µm if left out; 0 for a strip of no thickness",
    )
    add_json(parser)


def run(words: Namespace, out: TextIO) -> None:
    """Print what the line does."""
    spacer = layers(words.spacer)
    stack = tuple(Layer(one.thickness, one.eps_r, one.loss_tangent) for one in spacer)
    foil = words.foil_thickness
    width = words.width
    if width is None:
        width = width_for_impedance(
            words.impedance, stack, words.frequency, conductor_thickness=foil
        )
    line = line_properties(
        width, stack, words.frequency, conductor_thickness=foil, conductivity=_COPPER
    )
    attenuation = float(line.dielectric_attenuation + line.conductor_attenuation)
    record = {
        "z0_ohm": float(line.characteristic_impedance),
        "eps_eff": float(line.eps_eff),
        "guided_wavelength_m": float(line.guided_wavelength),
        "loss_db_per_m": _NEPER_IN_DB * attenuation,
        "width_m": width,
    }
    out.write(json_text(record) if words.json else _text(record, words))


def _text(record: dict[str, Any], words: Namespace) -> str:
    spacer = " + ".join(
        f"{one.material} {format_quantity(one.thickness, Quantity.LENGTH)}"
        for one in layers(words.spacer)
    )
    frequency = format_quantity(words.frequency, Quantity.FREQUENCY)
    foil = format_quantity(words.foil_thickness, Quantity.LENGTH)
    rows = [
        ("width", format_quantity(record["width_m"], Quantity.LENGTH)),
        ("characteristic impedance", format_quantity(record["z0_ohm"], Quantity.RESISTANCE)),
        ("effective permittivity", format_quantity(record["eps_eff"], Quantity.RATIO)),
        ("guided wavelength", format_quantity(record["guided_wavelength_m"], Quantity.LENGTH)),
        ("loss", f"{record['loss_db_per_m']:.3g} dB/m"),
    ]
    return f"Strip of {foil} foil over {spacer}, at {frequency}\n{table(rows, '  ')}"
