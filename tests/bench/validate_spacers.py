"""Thin sheets over and under foam, on a wide plate, against the layered solver on endless ground.

Run from the top of the checkout: python tests/bench/validate_spacers.py
"""

from __future__ import annotations

import sys
from functools import partial
from itertools import product
from pathlib import Path

TESTS = Path(__file__).parents[1]
sys.path[:0] = [str(TESTS.parent), str(TESTS), str(TESTS / "core" / "fullwave")]

from bench.validation import kept_rows, percent, write_table
from test_spacer import patch, pole

from core.fullwave.board_kernels import BoardKernels
from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.layered_system import build_layered_system, solve_layered
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.system import build_system, solve
from core.lines.stack import Layer, series_permittivity, total_thickness

DISC = 0.245  # two wavelengths wide: its rim moves the mode by 0.01 % in air


def stacks(height: float) -> dict[str, tuple[Layer, ...]]:
    """Stacks of one height, m."""
    card = height / 6.0
    return {
        "air": (Layer(height, 1.0),),
        "foam 1.07": (Layer(height, 1.07),),
        "foam, card 3.0 under the foil": (Layer(height - card, 1.07), Layer(card, 3.0)),
        "card 3.0 on the plate, foam": (Layer(card, 3.0), Layer(height - card, 1.07)),
        "foam, film 3.0 under the foil": (Layer(height - 1e-4, 1.07), Layer(1e-4, 3.0)),
        "1.3": (Layer(height, 1.3),),
    }


def compared(height: float, name: str) -> dict:
    """Mode and Q of both solvers."""
    layers = stacks(height)[name]
    layout = patch(layers, disc=DISC)
    guess = 2.42e9 * (1.0 - 12.0 * (height - 6e-3)) / series_permittivity(layers) ** 0.5
    system = build_system(build_mesh(layout, Level.NORMAL), layout.foil, layers)
    board = build_board_mesh(layout, Level.NORMAL)
    layered = build_layered_system(board, BoardKernels(layers, layout.foil, 1.1 * guess))
    return {
        "finite": pole(lambda f: solve(system, f), guess),
        "endless": pole(lambda f: solve_layered(layered, f), guess),
    }


def main() -> None:
    """Solve what has not been solved and write the table."""
    cases = list(product((3e-3, 6e-3, 10e-3), stacks(6e-3)))
    found = kept_rows(
        __file__,
        {f"{1e3 * h:g} mm, {name}": partial(compared, h, name) for h, name in cases},
    )
    lines = []
    for (height, name), row in zip(cases, found.values(), strict=True):
        air = found[f"{1e3 * height:g} mm, air"]
        (finite, q), (endless, other) = row["finite"], row["endless"]
        lines.append(
            [
                f"{1e3 * total_thickness(stacks(height)[name]):g} mm",
                name,
                f"{1e-6 * endless:.1f}, {other:.1f}",
                percent(endless / air["endless"][0], 2),
                percent(finite / endless, 2),
                percent(q / other),
            ]
        )
    head = ("height", "spacer", "layered: mode, MHz, Q", "from air", "free space: mode", "its Q")
    write_table("spacers", head, lines)


if __name__ == "__main__":
    main()
