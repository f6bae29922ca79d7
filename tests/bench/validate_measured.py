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
from board_shapes import board_disc, board_patch

from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.progress import SILENT

PUBLISHED = Path(__file__).parents[1] / "published"
PLACES = tuple(np.round(np.arange(0.04, 0.43, 0.02), 2))
"""Of the probe, in lengths from the middle."""
WIDE, CLOSE = (0.86, 1.26), (0.92, 1.08)
"""Bands looked at, of the published frequency: the close one for a Q over 18, since a sweep over
40 % can miss a narrow resonance (docs/validation.md)."""

NARROW = 0.05  # band looked at for the mode, to both sides


def published_rows() -> dict[str, dict]:
    """Rectangles and discs by their names."""
    squares = tomllib.loads((PUBLISHED / "patch_resonance.toml").read_text("utf-8"))
    discs = tomllib.loads((PUBLISHED / "disc_resonance.toml").read_text("utf-8"))
    rows = [*squares["kara"]["rows"], *squares["chang"]["rows"], *discs["rows"]]
    return {row["id"]: row for row in rows}


def layout_of(row: dict, place: float):
    """Layout of a row with its probe at a place."""
    if "radius" in row:
        return board_disc(row["radius"], row["height"], row["eps_r"], row["frequency"], place)
    size = (row["width"], row["length"], row["height"])
    return board_patch(*size, row["eps_r"], row["frequency"], place)


def solved(row: dict, place: float, band: tuple[float, float]) -> dict:
    """Mode, peak of the resistance and least reflection, frequencies over the published one."""
    across = np.linspace(*band, 1601)
    response = respond(layout_of(row, place), row["frequency"] * across, SILENT, Level.FINE)
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
    band = CLOSE if told_mode(row, 0.2, row["frequency"])["q"] > 18.0 else WIDE
    tried = [solved(row, place, band) for place in PLACES]
    inside = [one for one in tried if one["match"] is not None] or tried
    best = min(inside, key=lambda one: one["s11"])
    return best | told_mode(row, best["place"], best["mode"] * row["frequency"])


def told_mode(row: dict, place: float, near: float) -> dict:
    """The mode from a narrow band about it: over a wide one its Q may be a fifth off."""
    layout = replace(layout_of(row, place), frequency=near)
    band = near * np.linspace(1.0 - NARROW, 1.0 + NARROW, 11)
    modes = respond(layout, band, SILENT, Level.FINE).modes
    along = [mode for mode in modes if mode.name == "along y"]
    mode = min(along, key=lambda one: abs(one.frequency - near))
    return {"mode": mode.frequency / row["frequency"], "q": mode.quality_factor}


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
