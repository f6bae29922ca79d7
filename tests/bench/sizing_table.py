"""Size a table of briefs by the live model and write docs/sizing.md.

Run from the top of the checkout: python tests/bench/sizing_table.py
"""

from __future__ import annotations

import sys
import time
from pathlib import Path
from statistics import median

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))

from core.design import spelled
from core.design.model import Brief
from core.design.polarisation import Polarisation
from core.design.stock import RectangleGround, Stock
from core.layout.build import build_layout
from core.live.respond import respond
from core.progress import SILENT
from core.response.model import Reading
from core.sizing.seed import seed_design
from core.sizing.size import Sizing, size

FREQUENCIES = (868e6, 1.296e9, 2.45e9, 5.8e9, 10e9)
STOCKS = (  # spacer, process; thickness in wavelengths where it scales with the frequency
    ("air", 0.04, "knife"),
    ("foam", 0.05, "knife"),
    ("foam+card", 0.05, "knife"),
    ("FR-4:0.8mm", None, "toner-etch"),
    ("FR-4:1.6mm", None, "toner-etch"),
    ("low-loss:1.524mm", None, "board-house"),
)
FEEDS = (
    ("dual-edge", "rhcp"),
    ("dual-edge", "lhcp"),
    ("probe", "rhcp"),
    ("probe", "lhcp"),
    ("probe", "linear"),
)

HEAD = """# Sizes by the live model

Written by `tests/bench/sizing_table.py`. Each row is one call of the sizing, ground plate
fitted half a wavelength beyond the element; VSWR and axial ratio (dB) are the live model's own
estimate at the frequency, `trust` is what it says of its match: where it reads unknown, nobody
should cut by it. "Met" means by that estimate alone: of designs that were sized so and then
solved, docs/live-errors.md tells what became; those in docs/settling.md are solved. With two
branches and wherever both modes are driven the estimate only seeds the field solver. FR-4 at 5.8
and 10 GHz stands here to show the limits, not as advice. Two branches with linear polarisation
are refused.

"""
COLUMNS = (
    "frequency",
    "spacer",
    "process",
    "feed",
    "polarisation",
    "met",
    "VSWR",
    "axial ratio",
    "trust in match",
    "evaluations",
    "what stood in the way",
)


def spacer_text(spacer: str, thickness: float | None, frequency: float) -> str:
    """Spacer as typed, thickness rounded to half a millimetre where it scales."""
    if thickness is None:
        return spacer
    height_mm = max(1.0, round(thickness * 299_792_458 / frequency * 2e3) / 2)
    if spacer == "foam+card":
        return f"foam:{height_mm:g}mm + card:0.5mm"
    return f"{spacer}:{height_mm:g}mm"


def row(frequency: float, spacer: str, process: str, feed: str, sense: str) -> tuple[str, Sizing]:
    """One line of the table."""
    brief = Brief(frequency, Polarisation(sense), vswr=1.5, axial_ratio_db=1.5)
    stock = Stock(spelled.spacer(spacer), spelled.foil("copper-35"), RectangleGround(0.1, 0.1))
    seed = seed_design("table", brief, stock, spelled.making(process), feed)
    sizing = size(seed, fit_ground=True)
    response = respond(build_layout(sizing.design), np.array([frequency]), SILENT)
    trust = response.trust[Reading.MATCH].level.value
    ratio = "" if sense == "linear" else f"{min(sizing.axial_ratio_db, 60):.2f}"
    why = "" if sizing.met else sizing.reason
    line = (
        f"| {frequency / 1e9:g} GHz | {spacer} | {process} | {feed} | {sense} "
        f"| {'yes' if sizing.met else 'no'} | {sizing.vswr:.2f} | {ratio} | {trust} "
        f"| {sizing.evaluations} | {why} |"
    )
    return line, sizing


def main() -> None:
    """Write the table and print how long sizing took."""
    lines, sizings, seconds = [], [], []
    for frequency in FREQUENCIES:
        for name, thickness, process in STOCKS:
            for feed, sense in FEEDS:
                spacer = spacer_text(name, thickness, frequency)
                begin = time.perf_counter()
                line, sizing = row(frequency, spacer, process, feed, sense)
                seconds.append(time.perf_counter() - begin)
                lines.append(line)
                sizings.append(sizing)
    met = sum(one.met for one in sizings)
    head = [f"| {' | '.join(COLUMNS)} |", "|" + "---|" * len(COLUMNS)]
    text = HEAD + "\n".join([*head, *lines]) + f"\n\n{met} of {len(lines)} met.\n"
    Path("docs/sizing.md").write_text(text, encoding="utf-8")
    print(
        f"{met} of {len(lines)} met; median {median(seconds):.2f} s, longest {max(seconds):.2f} s"
    )


if __name__ == "__main__":
    main()
