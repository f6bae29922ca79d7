"""Every measured patch: mode, peak of the resistance and best match; writes docs/validation.md.

Run from the top of the checkout: python tests/bench/validate_measured.py
"""

from __future__ import annotations

import sys
import tomllib
from dataclasses import replace
from functools import partial
from pathlib import Path

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1])]

from bench.validation import kept_rows, percent, write_table
from board_shapes import board_patch

from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.layout.model import Role
from core.progress import SILENT
from core.shapes.outline import Region, circle

PUBLISHED = Path(__file__).parents[1] / "published"
PLACES = tuple(np.round(np.arange(0.04, 0.43, 0.02), 2))
"""Of the probe, in lengths from the middle."""
BELOW, ABOVE = 0.86, 1.26  # band looked at, of the published frequency


def published_rows() -> dict[str, dict]:
    """Rectangles and discs by their names."""
    squares = tomllib.loads((PUBLISHED / "patch_resonance.toml").read_text("utf-8"))
    discs = tomllib.loads((PUBLISHED / "disc_resonance.toml").read_text("utf-8"))
    rows = [*squares["kara"]["rows"], *squares["chang"]["rows"], *discs["rows"]]
    return {row["id"]: row for row in rows}


def layout_of(row: dict, place: float):
    """Layout of a row with its probe at a place."""
    width = row.get("width", 2.0 * row.get("radius", 0.0))
    length = row.get("length", width)
    layout = board_patch(width, length, row["height"], row["eps_r"], row["frequency"], place)
    if "radius" not in row:
        return layout
    disc = Region(circle(width))
    pieces = tuple(
        replace(piece, region=disc) if piece.role is Role.TOP_COPPER else piece
        for piece in layout.pieces
    )
    return replace(layout, pieces=pieces)


def solved(row: dict, place: float, level: Level = Level.FINE) -> dict:
    """Mode, peak of the resistance and least reflection, frequencies over the published one."""
    across = np.linspace(BELOW, ABOVE, 1601)
    response = respond(layout_of(row, place), row["frequency"] * across, SILENT, level)
    sweep = response.sweep
    modes = [mode for mode in response.modes if mode.name == "along y"]
    mode = min(modes, key=lambda one: abs(one.frequency / row["frequency"] - 1.0))
    # The peak that belongs to the mode: of what is within two of its widths.
    near = abs(sweep.frequency / mode.frequency - 1.0) < 2.0 / mode.quality_factor
    peak = int(np.argmax(np.where(near, sweep.z_in.real, -np.inf)))
    best = int(np.argmin(abs(sweep.s11)))
    return {
        "place": float(place),
        "mode": mode.frequency / row["frequency"],
        "q": mode.quality_factor,
        "peak": float(across[peak]),
        "resistance": float(sweep.z_in.real[peak]),
        "match": float(across[best]) if 0 < best < len(across) - 1 else None,
        "s11": float(abs(sweep.s11[best])),
    }


def best_match(row: dict) -> dict:
    """The probe's place at which the row's least reflection is least."""
    tried = [solved(row, place) for place in PLACES]
    inside = [one for one in tried if one["match"] is not None] or tried
    return min(inside, key=lambda one: one["s11"])


def line(name: str, row: dict, found: dict) -> list[str]:
    """One row of the table."""
    size = f"{1e3 * row['radius']:g}" if "radius" in row else f"{1e3 * row['length']:g}"
    match = "beyond the band" if found["match"] is None else percent(found["match"])
    gate = "" if found["q"] <= 50.0 else "no" if not within(found) else "yes"
    return [
        name,
        f"{size}, {1e3 * row['height']:g} mm, {row['eps_r']:g}",
        f"{1e-6 * row['frequency']:.0f}",
        f"{found['place']:g}",
        f"{found['s11']:.2f}",
        match,
        percent(found["peak"]),
        percent(found["mode"]),
        f"{found['q']:.0f}",
        gate,
    ]


def within(found: dict) -> bool:
    """Whether the best match lies within 3 % of what was published."""
    return found["match"] is not None and abs(found["match"] - 1.0) < 0.03


def main() -> None:
    """Solve what has not been solved and write the table."""
    rows = published_rows()
    found = kept_rows(__file__, {name: partial(best_match, row) for name, row in rows.items()})
    head = ("row", "length or radius, height, permittivity", "published, MHz", "probe", "least S11")
    head += ("best match", "resistance peak", "mode", "Q", "within 3 %")
    write_table("measured", head, (line(name, rows[name], found[name]) for name in rows))


if __name__ == "__main__":
    main()
