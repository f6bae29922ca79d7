"""Patches on boards against what was measured, and discs against finite elements."""

import tomllib
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from board_shapes import IDEAL, board_disc, board_patch

from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.lines.stack import Layer
from core.progress import SILENT

PUBLISHED = Path(__file__).parents[2] / "published"


def table(name):
    return tomllib.loads((PUBLISHED / f"{name}.toml").read_text(encoding="utf-8"))


DISCS, MODES = table("disc_resonance"), table("disc_modes")
BY_NAME = {row["id"]: row for row in DISCS["rows"]}
# The rows with Q over 50 (docs/validation.md).
THIN = [
    *table("patch_resonance")["kara"]["rows"][:4],
    *(BY_NAME[name] for name in ("D01", "D03", "D05", "D07", "D11", "D13")),
]


def layout_of(row, feed):
    if "radius" in row:
        return board_disc(row["radius"], row["height"], row["eps_r"], row["frequency"], feed)
    size = (row["width"], row["length"], row["height"])
    return board_patch(*size, row["eps_r"], row["frequency"], feed)


@pytest.mark.parametrize("row", THIN, ids=lambda row: row["id"])
def test_measured_patches_of_high_q(row):
    # Where the probe stood is not told; nor how lossy the board was: 0.001 is taken.
    across = row["frequency"] * np.linspace(0.94, 1.06, 241)
    match = abs(respond(layout_of(row, 0.14), across, SILENT, Level.COARSE).sweep.s11)
    assert match.min() < 0.6
    best = across[int(np.argmin(match))]
    assert best == pytest.approx(row["frequency"], rel=DISCS["tolerance"])


@pytest.mark.parametrize("mode", MODES["rows"], ids=lambda mode: mode["id"])
def test_disc_has_the_mode_that_finite_elements_find(mode):
    # No equation, no mesh, no source in common; a probe near the middle hardly moves the mode.
    row = BY_NAME[mode["id"]]
    layout = replace(layout_of(row, 0.05), stack=(Layer(row["height"], row["eps_r"]),), foil=IDEAL)
    band = mode["frequency"] * np.linspace(0.95, 1.05, 11)
    modes = respond(layout, band, SILENT, Level.FINE).modes
    found = min(modes, key=lambda one: abs(one.frequency - mode["frequency"]))
    assert found.frequency == pytest.approx(mode["frequency"], rel=MODES["tolerance"])
    assert found.quality_factor == pytest.approx(mode["quality"], rel=MODES["quality_tolerance"])


def test_round_copper_is_meshed_round():
    # Eight facets on this board make the mode 2.3 % low: no coarser than the cells.
    row = BY_NAME["D11"]
    coarse, fine = (
        min(
            respond(
                layout_of(row, 0.05), 1.015e9 * np.linspace(0.95, 1.05, 11), SILENT, level
            ).modes,
            key=lambda one: abs(one.frequency - 1.015e9),
        ).frequency
        for level in (Level.COARSE, Level.FINE)
    )
    assert coarse == pytest.approx(fine, rel=4e-3)
