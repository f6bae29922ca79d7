"""Solve random designs by the field solver, for the live model to be held against.

Each line of the file is one design with what the field solver says of it: fed as it is, and
its bare element with a probe that drives the mode along y alone. The live model's side is
worked out afterwards, by live_errors.py. Run from the top of the checkout, again and again
until it says that it is done:

    python tests/bench/live_against_field.py FILE.jsonl [COUNT] [SECONDS]
"""

from __future__ import annotations

import json
import sys
import time
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parent)]

from drawn_at_random import SEED, bare_element, draw

from core.design.record import to_record
from core.engines import ENGINES, FIELD
from core.errors import CoreError
from core.layout.build import build_layout
from core.live.modes import element_modes
from core.progress import SILENT

if TYPE_CHECKING:
    from core.design.model import Design

COUNT, SECONDS = 200, 220.0
REACH, POINTS = 0.12, 241  # of the sweep about the brief's frequency
BARE_REACH, BARE_POINTS = 0.2, 801  # of the sweep about the live model's resonance


def main() -> None:
    """Solve what is missing from the file until time is up."""
    path = Path(sys.argv[1])
    count = int(sys.argv[2]) if len(sys.argv) > 2 else COUNT
    seconds = float(sys.argv[3]) if len(sys.argv) > 3 else SECONDS
    done = {json.loads(line)["number"] for line in _lines(path)}
    begin = time.monotonic()
    missing = [number for number in range(count) if number not in done]
    for number in missing:
        if time.monotonic() - begin > seconds:
            break
        with path.open("a", encoding="utf-8") as file:
            file.write(json.dumps(_solved(number)) + "\n")
        done.add(number)
    print(f"{len(done)} of {count} designs solved, seed {SEED}")


def _solved(number: int) -> dict[str, Any]:
    drawn = draw(number)
    record: dict[str, Any] = {
        "number": number,
        "stack": drawn.stack,
        "plate": drawn.plate,
        "perturbed": drawn.perturbed,
        "design": to_record(drawn.design),
    }
    try:
        record["fed"] = _fed(drawn.design)
        record["bare"] = _bare(drawn.design)
    except CoreError as error:
        record["refused"] = str(error)
    return record


def _fed(design: Design) -> dict[str, Any]:
    """All that the design does about its brief's frequency."""
    grid = design.brief.frequency * np.linspace(1.0 - REACH, 1.0 + REACH, POINTS)
    begin = time.perf_counter()
    response = ENGINES[FIELD](build_layout(design), grid, SILENT)
    sweep = response.sweep
    return {
        "seconds": time.perf_counter() - begin,
        "reach": REACH,
        "efficiency": sweep.efficiency.tolist(),
        **{
            name: np.stack([values.real, values.imag], axis=-1).tolist()
            for name, values in (("z_in", sweep.z_in), ("e_x", sweep.e_x), ("e_y", sweep.e_y))
        },
        "directivity": response.directivity,
        "trust": {one.value: trust.level.value for one, trust in response.trust.items()},
    }


def _bare(design: Design) -> dict[str, Any]:
    """Mode along y of the element, without its feed, and what it does at its resistance peak."""
    layout = build_layout(design)
    mode = element_modes(layout.element_width, layout.element_length, layout.stack, layout.foil).y
    grid = mode.frequency * np.linspace(1.0 - BARE_REACH, 1.0 + BARE_REACH, BARE_POINTS)
    response = ENGINES[FIELD](build_layout(bare_element(design, mode.frequency)), grid, SILENT)
    peak = int(np.argmax(response.sweep.z_in.real))
    at_peak = response.sweep.at(peak)
    gain = abs(complex(at_peak.e_x)) ** 2 + abs(complex(at_peak.e_y)) ** 2
    return {
        "frequency": mode.frequency,
        "modes": [(one.name, one.frequency, one.quality_factor) for one in response.modes],
        "peak": float(grid[peak]),
        "resistance": float(at_peak.z_in.real),
        "efficiency": float(at_peak.efficiency),
        "directivity": gain / float(at_peak.efficiency),
    }


def _lines(path: Path) -> list[str]:
    return path.read_text(encoding="utf-8").splitlines() if path.exists() else []


if __name__ == "__main__":
    main()
