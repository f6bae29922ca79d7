"""Three whole designs over four meshes and several edge rows; writes docs/validation.md.

Run from the top of the checkout: python tests/bench/validate_convergence.py
"""

from __future__ import annotations

import sys
from functools import partial
from itertools import pairwise, product
from pathlib import Path

import numpy as np
from scipy.optimize import brentq

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1])]

from bench.validation import kept_rows, write_table
from board_shapes import board_dual_edge
from fullwave_shapes import thick_air, thin_air
from mesh_variants import REFERENCE, meshes

from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.respond import respond
from core.fullwave.solvers import MOST_AIR_LIKE
from core.layout.build import build_layout
from core.lines.stack import series_permittivity
from core.progress import SILENT

DESIGNS = {
    "air 6 mm": lambda: build_layout(thin_air()),
    "air 15 mm": lambda: build_layout(thick_air()),
    "FR-4 1.6 mm": board_dual_edge,
}
LEVELS = {
    "coarse": (Level.COARSE, None),
    "normal": (Level.NORMAL, None),
    "fine": (Level.FINE, None),
    "reference": (Level.FINE, REFERENCE),
}
ROWS = {"none": 0.0, "0.2": 0.2, "0.1": 0.1, "0.05": 0.05}
"""Width of the row of edge cells in spacer heights; the solver's own is 0.1."""
NARROWER = {"0.025": 0.025, "0.0125": 0.0125}
"""Rows tried on the reference mesh alone."""
FREQUENCIES = np.linspace(2.3e9, 2.6e9, 61)
_SHIFTS = np.linspace(-5e-3, 5e-3, 101)  # common shifts of frequency tried


def solved(design: str, level: str, row: str) -> dict:
    """What a mesh says of a design over the band."""
    layout = DESIGNS[design]()
    name, finest = LEVELS[level]
    with meshes(finest, (ROWS | NARROWER)[row]):
        air = series_permittivity(layout.stack) <= MOST_AIR_LIKE
        mesh = (build_mesh if air else build_board_mesh)(layout, name)
        response = respond(layout, FREQUENCIES, SILENT, name)
    sweep = response.sweep
    right, wrong = sweep.e_x + 1j * sweep.e_y, sweep.e_x - 1j * sweep.e_y
    mode = min(response.modes, key=lambda one: abs(one.frequency - 2.45e9))
    return {
        "triangles": len(mesh.triangles),
        "mode": mode.frequency,
        "q": mode.quality_factor,
        "s11": [sweep.s11.real.tolist(), sweep.s11.imag.tolist()],
        "ratio": [(wrong / right).real.tolist(), (wrong / right).imag.tolist()],
    }


def curve(found: dict, name: str) -> np.ndarray:
    """Complex values over the band."""
    real, imaginary = found[name]
    return np.array(real) + 1j * np.array(imaginary)


def apart(one: dict, other: dict, name: str) -> float:
    """Largest difference over the band."""
    return float(abs(curve(one, name) - curve(other, name)).max())


def after_shift(one: dict, other: dict) -> tuple[float, float, float]:
    """Largest differences of match and of ratio after the common shift that suits best."""
    inner = FREQUENCIES[2:-2]

    def moved(shift: float, name: str) -> float:
        there = np.interp(inner * (1.0 + shift), FREQUENCIES, curve(one, name))
        return float(abs(there - curve(other, name)[2:-2]).max())

    shift = min(_SHIFTS, key=lambda s: moved(s, "s11"))
    return moved(shift, "s11"), moved(shift, "ratio"), float(shift)


def order(steps: list[float], sizes: np.ndarray) -> str:
    """Power p of the cell size h (triangles to the power -1/2) that three levels follow.

    (h1^p - h2^p)/(h2^p - h3^p) is the ratio of their differences.
    """
    first, second, third = sizes / sizes[-1]

    def miss(p: float) -> float:
        return (first**p - second**p) / (second**p - third**p) - abs(steps[0] / steps[1])

    signs = steps[0] * steps[1] > 0.0 and miss(0.2) * miss(12.0) < 0.0
    return f"{brentq(miss, 0.2, 12.0):.1f}" if signs else "none"


def level_lines(found: dict[str, dict]):
    """Lines of the table of levels, each against the reference on the finest row."""
    for design, row in product(DESIGNS, ROWS):
        true = found[f"{design}, reference, 0.05"]
        for level in LEVELS:
            one = found[f"{design}, {level}, {row}"]
            match, ratio, shift = after_shift(one, true)
            yield [
                design,
                row,
                level,
                str(one["triangles"]),
                f"{one['mode'] / 1e6:.1f}",
                f"{100.0 * (one['mode'] / true['mode'] - 1.0):+.2f} %",
                f"{100.0 * (one['q'] / true['q'] - 1.0):+.1f} %",
                f"{apart(one, true, 's11'):.4f}",
                f"{apart(one, true, 'ratio'):.4f}",
                f"{match:.4f}, {ratio:.4f} at {100.0 * shift:+.2f} %",
            ]


def order_lines(found: dict[str, dict]):
    """Lines of the table of successive differences."""
    for design, row, name in product(DESIGNS, ROWS, ("mode", "s11", "ratio")):
        levels = [found[f"{design}, {level}, {row}"] for level in LEVELS]
        if name == "mode":
            steps = [(b["mode"] - a["mode"]) / 1e6 for a, b in pairwise(levels)]
            shown = [f"{step:+.2f} MHz" for step in steps]
        else:
            steps = [apart(a, b, name) for a, b in pairwise(levels)]
            shown = [f"{step:.4f}" for step in steps]
        ratios = [f"{abs(a / b):.1f}" if b else "" for a, b in pairwise(steps)]
        sizes = np.array([one["triangles"] for one in levels]) ** -0.5
        orders = [order(steps[i : i + 2], sizes[i : i + 3]) for i in (0, 1)]
        agree = levels[-1]["mode"] / levels[-2]["mode"] - 1.0
        last = f"{100.0 * agree:+.2f} %" if name == "mode" else ""
        yield [design, row, name, *shown, *ratios, *orders, last]


def row_lines(found: dict[str, dict]):
    """Lines of the table of rows, each against the one before, on the reference mesh."""
    for design in DESIGNS:
        rows = [row for row in (*ROWS, *NARROWER) if row != "none"]
        for wide, narrow in pairwise(rows):
            one, other = (found[f"{design}, reference, {row}"] for row in (wide, narrow))
            yield [
                design,
                f"{wide} to {narrow}",
                f"{100.0 * (other['mode'] / one['mode'] - 1.0):+.2f} %",
                f"{100.0 * (other['q'] / one['q'] - 1.0):+.1f} %",
                f"{apart(other, one, 's11'):.4f}",
                f"{apart(other, one, 'ratio'):.4f}",
            ]


def main() -> None:
    """Solve what has not been solved and write the tables."""
    cases = {
        f"{design}, {level}, {row}": partial(solved, design, level, row)
        for design, row, level in product(DESIGNS, ROWS, LEVELS)
    }
    cases |= {
        f"{design}, reference, {row}": partial(solved, design, "reference", row)
        for design, row in product(DESIGNS, NARROWER)
    }
    found = kept_rows(__file__, cases)
    head = ("design", "edge row", "level", "triangles", "mode, MHz", "mode", "Q", "S11", "ratio")
    write_table("convergence", (*head, "S11, ratio after a shift"), level_lines(found))
    head = ("design", "edge row", "of", "coarse-normal", "normal-fine", "fine-reference")
    head += ("first over second", "second over third", "order, first three", "last three")
    head += ("finest two apart",)
    write_table("orders", head, order_lines(found))
    write_table("rows", ("design", "edge row", "mode", "Q", "S11", "ratio"), row_lines(found))


if __name__ == "__main__":
    main()
