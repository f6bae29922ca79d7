"""Time live evaluations and sizing over 200 different designs, and print them.

Run from the top of the checkout: python tests/bench/live_speed.py
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))

from core.design.defaults import default_design
from core.design.edit import with_texts
from core.design.model import Design
from core.engines import ENGINES
from core.layout.build import build_layout
from core.live.respond import sample
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.sizing.size import size

DESIGNS = 200
SIZINGS = 30
SPACERS = (
    "air:6mm",
    "foam:5mm",
    "FR-4:1.6mm",
    "polystyrene:6mm",
    "foam:5mm + card:0.4mm",
    "card:0.5mm + foam:6mm + card:0.5mm",
)


def different_designs() -> Iterator[Design]:
    """Designs that share nothing that a cache could keep."""
    random = np.random.default_rng(20_240_611)
    for i in range(DESIGNS):
        width, length = random.uniform(48.0, 60.0, 2)
        first, second = random.uniform(8.0, 22.0, 2)
        yield with_texts(
            default_design(),
            [
                ("stock.spacer", SPACERS[i % len(SPACERS)]),
                ("element.width", f"{width:.3f} mm"),
                ("element.length", f"{length:.3f} mm"),
                ("feed.first.landing", f"{first:.3f} mm"),
                ("feed.second.landing", f"{second:.3f} mm"),
                ("feed.first.width", f"{random.uniform(2.0, 4.0):.3f} mm"),
                ("feed.second.width", f"{random.uniform(2.0, 4.0):.3f} mm"),
                ("feed.delay_width", f"{random.uniform(2.0, 5.0):.3f} mm"),
                ("feed.delay_length", f"{random.uniform(45.0, 70.0):.3f} mm"),
                ("feed.lead_in.length", f"{random.uniform(0.0, 25.0):.3f} mm"),
            ],
        )


def live(design: Design) -> None:
    """Layout and response at 201 frequencies, as a drag step needs them."""
    layout = build_layout(design)
    ENGINES["live"](layout, frequency_grid(layout.frequency), SILENT)


def one_frequency(design: Design) -> None:
    """What one step of a sizing needs, and the layout."""
    layout = build_layout(design)
    sample(layout, np.array([layout.frequency]))


def report(name: str, work: Callable[[Design], object], designs: list[Design]) -> None:
    """Print median, 99th percentile and longest time of some work over the designs."""
    seconds = []
    for design in designs:
        begin = time.perf_counter()
        work(design)
        seconds.append(time.perf_counter() - begin)
    middle, high = np.percentile(seconds, [50, 99])
    print(
        f"{name:<36} {len(designs):>4} designs  median {middle * 1e3:8.2f} ms"
        f"  99 % {high * 1e3:8.2f} ms  longest {max(seconds) * 1e3:8.2f} ms"
    )


def main() -> None:
    """Print the figures."""
    designs = list(different_designs())
    live(designs[0])  # imports and first touches
    report("layout", build_layout, designs)
    report("layout and response, 201 points", live, designs)
    report("layout and response, one frequency", one_frequency, designs)
    report("size", size, designs[:SIZINGS])


if __name__ == "__main__":
    main()
