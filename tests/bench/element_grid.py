"""Resonances of bare elements on a grid of boards and heights, by both engines.

Solves what is missing from a file until time is up, then prints a table for
docs/models/element.md. Run from the top of the checkout, until it says that it is done:

    python tests/bench/element_grid.py FILE.jsonl [SECONDS]
"""

from __future__ import annotations

import json
import sys
import time
from itertools import product
from pathlib import Path
from typing import Any

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parent)]

from drawn_at_random import bare_element

from core.constants import SPEED_OF_LIGHT
from core.design import spelled
from core.design.model import Brief, Design, Element
from core.design.polarisation import Polarisation
from core.design.stock import RectangleGround, SpacerLayer, Stock
from core.engines import ENGINES, FIELD
from core.layout.build import build_layout
from core.live.modes import element_modes
from core.live.resonance import resonant_length
from core.progress import SILENT
from core.sizing.seed import seed_design

FREQUENCY = 2e9
HEIGHTS = (0.005, 0.015, 0.03, 0.045, 0.06, 0.075, 0.09, 0.105, 0.12)
PERMITTIVITIES = (1.0006, 1.067, 2.33, 2.55, 3.55, 4.3)
RATIOS = (0.7, 1.0, 1.3)  # width over length
REACH, POINTS = 0.2, 801


def main() -> None:
    """Solve until time is up, and print what there is."""
    path = Path(sys.argv[1])
    seconds = float(sys.argv[2]) if len(sys.argv) > 2 else 220.0
    rows = [json.loads(line) for line in path.read_text().splitlines()] if path.exists() else []
    done = {tuple(row["key"]) for row in rows}
    cases = list(product(HEIGHTS, PERMITTIVITIES, RATIOS))
    begin = time.monotonic()
    for key in cases:
        if key in done or time.monotonic() - begin > seconds:
            continue
        rows.append(_solved(key))
        with path.open("a", encoding="utf-8") as file:
            file.write(json.dumps(rows[-1]) + "\n")
    print(f"{len(rows)} of {len(cases)} solved\n\n{_table(rows)}")


def _element(key: tuple[float, float, float]) -> Design:
    """Element that the live model puts at the frequency, on a plate of a wavelength more."""
    height, eps_r, ratio = key
    wavelength = SPEED_OF_LIGHT / FREQUENCY
    layers = (SpacerLayer("slab", height * wavelength, eps_r, 0.0),)
    plate = RectangleGround(1.6 * wavelength, 1.6 * wavelength)
    stock = Stock(layers, spelled.foil("copper-35"), plate)
    brief = Brief(FREQUENCY, Polarisation.LINEAR)
    start = seed_design("grid", brief, stock, spelled.making("photo-etch"), "probe")
    stack = build_layout(start).stack
    length = start.element.length
    for _ in range(20):
        length = max(resonant_length(FREQUENCY, ratio * length, stack), 1e-3)
    return bare_element(
        seed_design(
            "grid",
            brief,
            stock,
            spelled.making("photo-etch"),
            "probe",
            Element(ratio * length, length),
        ),
        FREQUENCY,
    )


def _solved(key: tuple[float, float, float]) -> dict[str, Any]:
    layout = build_layout(_element(key))
    grid = FREQUENCY * np.linspace(1.0 - REACH, 1.0 + REACH, POINTS)
    response = ENGINES[FIELD](layout, grid, SILENT)
    peak = float(grid[int(np.argmax(response.sweep.z_in.real))])
    modes = [(one.frequency, one.quality_factor) for one in response.modes]
    return {"key": key, "mode": min(modes, key=lambda one: abs(one[0] - peak), default=None)}


def _table(rows: list[dict[str, Any]]) -> str:
    """Differences by height and permittivity, over the shapes: live less field, %."""
    lines = [
        f"| height | {' | '.join(f'er {one:.4g}' for one in PERMITTIVITIES)} |",
        "|" + "---|" * (len(PERMITTIVITIES) + 1),
    ]
    for height in HEIGHTS:
        cells = []
        for eps_r in PERMITTIVITIES:
            here = [row for row in rows if tuple(row["key"][:2]) == (height, eps_r)]
            cells.append("; ".join(_cell(row) for row in here if row["mode"]) or "-")
        lines.append(f"| {height:g} | {' | '.join(cells)} |")
    return "\n".join(lines)


def _cell(row: dict[str, Any]) -> str:
    layout = build_layout(_element(tuple(row["key"])))
    mode = element_modes(layout.element_width, layout.element_length, layout.stack, layout.foil).y
    return f"{100 * (mode.frequency / row['mode'][0] - 1):+.1f}"


if __name__ == "__main__":
    main()
