"""Modes of discs on boards against finite elements; writes docs/validation.md.

Run from the top of the checkout, with the extra `validation`:
python tests/bench/validate_disc_modes.py
"""

from __future__ import annotations

import sys
from dataclasses import replace
from functools import partial
from pathlib import Path

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1])]

from bench.disc_modes import disc_mode
from bench.validate_measured import layout_of, published_rows
from bench.validation import kept_rows, percent, write_table
from board_shapes import IDEAL

from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.lines.stack import Layer
from core.progress import SILENT

PROBE = 0.12  # of the diameter from the middle: hardly moves the mode


def solved(row: dict, level: Level) -> tuple[float, float]:
    """Frequency (Hz) and Q by the method of moments, nothing lost."""
    layers = (Layer(row["height"], row["eps_r"]),)
    layout = replace(layout_of(row, PROBE), stack=layers, foil=IDEAL)
    response = respond(layout, row["frequency"] * np.linspace(0.9, 1.1, 11), SILENT, level)
    modes = [mode for mode in response.modes if mode.name == "along y"]
    mode = min(modes, key=lambda one: abs(one.frequency / row["frequency"] - 1.0))
    return mode.frequency, mode.quality_factor


def compared(row: dict) -> dict:
    """Both, on two meshes each."""
    fine = solved(row, Level.FINE)
    return {
        "normal": solved(row, Level.NORMAL),
        "fine": fine,
        "elements": [
            disc_mode(row["radius"], row["height"], row["eps_r"], fine[0], fineness)
            for fineness in (0.5, 1.0)
        ],
    }


def line(name: str, row: dict, found: dict) -> list[str]:
    """One row of the table."""
    coarse, true = found["elements"]
    return [
        name,
        f"{1e3 * row['radius']:g}, {1e3 * row['height']:g} mm, {row['eps_r']:g}",
        f"{1e-6 * true[0]:.1f} MHz, {true[1]:.1f}",
        percent(true[0] / coarse[0], 2),
        percent(found["normal"][0] / true[0], 2),
        percent(found["fine"][0] / true[0], 2),
        percent(found["normal"][1] / true[1]),
        percent(found["fine"][1] / true[1]),
        percent(true[0] / row["frequency"]),
    ]


def main() -> None:
    """Solve what has not been solved and write the table."""
    rows = {name: row for name, row in published_rows().items() if "radius" in row}
    found = kept_rows(__file__, {name: partial(compared, row) for name, row in rows.items()})
    head = ("row", "radius, height, permittivity", "elements: mode, Q", "their last refinement")
    head += ("normal mesh", "fine mesh", "Q, normal", "Q, fine", "elements over published")
    write_table("discs", head, (line(name, rows[name], found[name]) for name in rows))


if __name__ == "__main__":
    main()
