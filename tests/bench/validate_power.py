"""Power balance and passivity of the twenty designs drawn by lot; writes docs/validation.md.

Run from the top of the checkout: python tests/bench/validate_power.py
"""

from __future__ import annotations

import sys
from functools import partial
from pathlib import Path

import numpy as np

TESTS = Path(__file__).parents[1]
sys.path[:0] = [str(TESTS.parent), str(TESTS), str(TESTS / "core" / "fullwave")]

from bench.validation import kept_rows, write_table
from lots import LOTS, drawn
from test_power_by_lot import BAND, board_balance, free_space_balance

from core.fullwave.mesh import Level
from core.fullwave.respond import respond
from core.fullwave.solvers import MOST_AIR_LIKE
from core.lines.stack import series_permittivity, total_thickness
from core.progress import SILENT


def balanced(number: int) -> dict:
    """Power found again, and the least conductance over the band."""
    name, layout = drawn(number)
    air = series_permittivity(layout.stack) <= MOST_AIR_LIKE
    balance, solutions = (free_space_balance if air else board_balance)(layout)
    band = np.linspace(BAND[0], BAND[-1], 201)
    sweep = respond(layout, band, SILENT, Level.COARSE).sweep
    return {
        "name": name,
        "stack": " + ".join(
            f"{1e3 * one.thickness:.2f} of {one.eps_r:.2f}" for one in layout.stack
        ),
        "turns": total_thickness(layout.stack) * 2.0 * np.pi * BAND[1] / 299_792_458,
        "lossy": bool(any(one.loss_tangent > 0.0 for one in layout.stack)),
        "lost": solutions[1].lost,
        "balance": balance,
        "conductance": float((1.0 / sweep.z_in).real.min()),
    }


def main() -> None:
    """Solve what has not been solved and write the table."""
    found = kept_rows(__file__, {f"lot-{n:02d}": partial(balanced, n) for n in range(LOTS)})
    head = ("design", "spacer or board, mm", "k0 h", "not into space", "found again", "least Re Y")
    lines = (
        [
            row["name"],
            row["stack"] + (", lossy" if row["lossy"] else ""),
            f"{row['turns']:.2f}",
            f"{row['lost']:.3f}",
            f"{row['balance']:.4f}",
            f"{1e3 * row['conductance']:.2f} mS",
        ]
        for row in found.values()
    )
    write_table("power", head, lines)


if __name__ == "__main__":
    main()
