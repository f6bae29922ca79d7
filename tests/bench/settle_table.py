"""Settle a table of briefs by the field solver and write docs/settling.md.

Run from the top of the checkout, again and again until it says that all rows are done; it
stops after the seconds given and goes on from the rows kept in the file:
python tests/bench/settle_table.py ROWS.jsonl [SECONDS]
"""

from __future__ import annotations

import json
import sys
import time
from collections.abc import Iterator
from dataclasses import asdict, dataclass, replace
from pathlib import Path
from statistics import median

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))

from core.constants import SPEED_OF_LIGHT
from core.design import spelled
from core.design.feed import DualEdge
from core.design.model import Brief, Design
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, Stock
from core.fullwave.mesh import Level
from core.layout.build import build_layout
from core.response.polarisation import axial_ratio_db
from core.sizing.seed import seed_design
from core.sizing.settle import Settling, settle
from core.sizing.solved import FieldSpot

SEED = 0
RANDOM_AIR, RANDOM_BOARDS = 20, 20
GOAL = 1.5

HEAD = """# Designs settled by the field check

Written by `tests/bench/settle_table.py`. Each row is one call of settling from an unsized
seed: goals VSWR 1.5 and axial ratio 1.5 dB at the frequency, judged on the finest mesh. The
right-hand design is settled; "left-hand" is the mirror image solved afresh on the finest mesh.
A solve is one factorisation at one frequency, most of them on the coarse mesh; the finest
level's share stands behind the plus. Seconds of processor are summed over all cores; wall time
is that of one process on a busy two-core machine, its load average beside it. Strips, gaps and
margins keep to the process; boards are photo-etched with strips of at least 0.3 mm, taken as
infinite, and {knife}.

**Method.** What is missing is told by two complex numbers, in units of what the goals allow:
the reflection coefficient, and the wrong-hand over the wanted field at boresight. Free are both
sides, landings, gaps, widths of branches and delay strip, tee, and length, width and bends of a
lead-in, or the place of a probe; ground plate, pin, stock and process are kept. The search
starts from the design as given if that is near, otherwise from what equations size, brought
into tune where it is far off: seven solved frequencies and a rational fit say by what ratio to
scale it in plan. If that does not settle, four rough families of feeds are tried. From a start,
differences between what is solved on the coarse mesh and a base model, the tangent of the live
model, are learnt by a Gaussian process: space mapping (J. W. Bandler and others, IEEE Trans.
Microw. Theory Techn. 42, 1994, 2536-2544). Least squares on the corrected model within a region
of trust, by sequential quadratic programming under the margins of what can be built, give the
next design to solve; where the base leads astray every freedom is tried once in turn. The
coarse mesh so known is the base for the finest one, on which mostly one to four are solved.

Random briefs: numpy's `default_rng({seed})`; {air} over air (0.03 to 0.08 wavelength thick,
0.8 to 3 GHz, discs of 0.7 to 1.1 wavelength, knife) and {boards} boards (0.02 to 0.06
wavelength in the dielectric, permittivity 2.2 to 4.5, loss tangent 0.001 to 0.02, 1 to 6 GHz).

"""


@dataclass(frozen=True)
class Case:
    """One row: what is asked for."""

    name: str
    spacer: str
    frequency: float
    diameter: float
    process: str
    feed: str = "dual-edge"
    polarisation: Polarisation = Polarisation.RHCP

    @property
    def design(self) -> Design:
        """Unsized seed."""
        brief = Brief(self.frequency, self.polarisation, 50.0, GOAL, GOAL)
        stock = Stock(
            spelled.spacer(self.spacer), spelled.foil("copper-35"), DiscGround(self.diameter)
        )
        making = spelled.making(self.process)
        if self.process == "photo-etch":
            making = replace(making, narrowest_strip=0.3e-3)
        return seed_design("table", brief, stock, making, self.feed)


def required() -> Iterator[Case]:
    """Rows that must settle."""
    for thickness in (6, 10):
        for diameter in (85, 95, 105, 115, 125):
            name = f"air {thickness} mm, disc {diameter} mm"
            yield Case(name, f"air:{thickness}mm", 2.45e9, diameter * 1e-3, "knife")
    for diameter in (105, 125):
        name = f"air 15 mm, disc {diameter} mm"
        yield Case(name, "air:15mm", 2.45e9, diameter * 1e-3, "knife")
    yield Case("FR-4 1.6 mm, 2.45 GHz", "FR-4:1.6mm", 2.45e9, 0.1, "photo-etch")
    yield Case("FR-4 1.6 mm, 5.7 GHz", "FR-4:1.6mm", 5.7e9, 0.06, "photo-etch")


def probes() -> Iterator[Case]:
    """Rows of probe-fed designs."""
    for polarisation in (Polarisation.LINEAR, Polarisation.RHCP):
        for name, spacer, frequency, diameter, process in (
            ("air 6 mm", "air:6mm", 2.45e9, 0.125, "knife"),
            ("FR-4 1.6 mm, 2.45 GHz", "FR-4:1.6mm", 2.45e9, 0.1, "photo-etch"),
            ("FR-4 1.6 mm, 5.7 GHz", "FR-4:1.6mm", 5.7e9, 0.06, "photo-etch"),
            ("permittivity 2.2, 3.2 mm", "er=2.2,tan=0.001:3.2mm", 2.45e9, 0.1, "photo-etch"),
        ):
            full = f"{polarisation.value}, {name}"
            yield Case(full, spacer, frequency, diameter, process, "probe", polarisation)


def drawn() -> Iterator[Case]:
    """Random rows."""
    rng = np.random.default_rng(SEED)
    for number in range(1, RANDOM_AIR + 1):
        frequency = float(rng.uniform(0.8e9, 3e9))
        wavelength = SPEED_OF_LIGHT / frequency
        height_mm = rng.uniform(0.03, 0.08) * wavelength * 1e3
        diameter = round(rng.uniform(0.7, 1.1) * wavelength, 3)
        yield Case(f"air {number}", f"air:{height_mm:.1f}mm", frequency, diameter, "knife")
    for number in range(1, RANDOM_BOARDS + 1):
        frequency = float(rng.uniform(1e9, 6e9))
        permittivity, loss = rng.uniform(2.2, 4.5), rng.uniform(0.001, 0.02)
        guided = SPEED_OF_LIGHT / frequency / permittivity**0.5
        height_mm = rng.uniform(0.02, 0.06) * guided * 1e3
        spacer = f"er={permittivity:.2f},tan={loss:.4f}:{height_mm:.2f}mm"
        diameter = round(2.0 * guided, 3)
        yield Case(f"board {number}", spacer, frequency, diameter, "photo-etch")


def other_sense(settling: Settling) -> tuple[float, float]:
    """VSWR and axial ratio of the mirror image, solved afresh; the ratio negative if right-hand."""
    design = settling.design
    mirrored = replace(design, brief=replace(design.brief, polarisation=Polarisation.LHCP))
    admittance, e_x, e_y = FieldSpot()(build_layout(mirrored), design.brief.frequency, Level.FINE)
    reflection = abs((1 - 50 * admittance) / (1 + 50 * admittance))
    ratio = float(axial_ratio_db(e_x, e_y))
    is_left = abs(e_x - 1j * e_y) > abs(e_x + 1j * e_y)
    return (1 + reflection) / (1 - reflection), ratio if is_left else -ratio


def settled(case: Case) -> dict[str, object]:
    """Settle a case: what the table says of it."""
    load = Path("/proc/loadavg")
    begin, busy = time.perf_counter(), time.process_time()
    settling = settle(case.design)
    seconds, busy = time.perf_counter() - begin, time.process_time() - busy
    feed = settling.design.feed
    is_linear = case.polarisation is Polarisation.LINEAR
    return {
        **asdict(case),
        "polarisation": case.polarisation.value,
        "met": settling.met,
        "reason": settling.reason,
        "vswr": settling.vswr,
        "ratio": settling.axial_ratio_db,
        "mirrored": None if is_linear else other_sense(settling),
        "lead": feed.lead_in.length if isinstance(feed, DualEdge) else 0.0,
        "solves": settling.solves,
        "fine": settling.fine_solves,
        "seconds": seconds,
        "busy": busy,
        "load": load.read_text().split()[0] if load.exists() else "",
    }


def line(row: dict) -> str:
    """Row as text."""
    ratio, mirrored = "", ""
    if row["mirrored"]:
        ratio, mirrored = f"{row['ratio']:.2f}", "{:.2f}, {:.2f}".format(*row["mirrored"])
    height = float(row["spacer"].rpartition(":")[2].removesuffix("mm"))
    why = "" if row["met"] else row["reason"]
    lead = f"{row['lead'] * 1e3:.1f} mm" if row["lead"] else ""
    return (
        f"| {row['name']} | {row['frequency'] / 1e9:.3f} GHz | {row['spacer']} "
        f"| {height * row['frequency'] / SPEED_OF_LIGHT / 1e3:.3f} "
        f"| {row['diameter'] * 1e3:.0f} mm "
        f"| {'yes' if row['met'] else 'no'} | {row['vswr']:.2f} | {ratio} "
        f"| {mirrored} | {lead} | {row['solves'] - row['fine']} + {row['fine']} "
        f"| {row['busy']:.1f} | {row['seconds']:.1f} ({row['load']}) | {why} |"
    )


def table(rows: list[dict]) -> str:
    """Rows under a head, and how many met."""
    columns = (
        "brief",
        "frequency",
        "spacer",
        "wavelengths",
        "disc",
        "met",
        "VSWR",
        "axial ratio, dB",
        "left-hand",
        "lead-in",
        "solves",
        "processor, s",
        "wall, s (load)",
        "what stood in the way",
    )
    head = [f"| {' | '.join(columns)} |", "|" + "---|" * len(columns)]
    met = sum(row["met"] for row in rows)
    busy, solves = ([row[key] for row in rows] for key in ("busy", "solves"))
    end = (
        f"\n{met} of {len(rows)} met; median {median(solves):.0f} solves and "
        f"{median(busy):.1f} s of processor, most {max(solves)} and {max(busy):.1f} s.\n"
    )
    return "\n".join([*head, *map(line, rows), end])


def write(rows: dict[str, dict]) -> None:
    """Write the page."""
    groups = (required, probes, drawn)
    must, probe, random = ([rows[case.name] for case in cases()] for cases in groups)
    knife = spelled.making("knife")
    words = f"knives cut {knife.narrowest_strip * 1e3:g} mm strips"
    head = HEAD.format(knife=words, seed=SEED, air=RANDOM_AIR, boards=RANDOM_BOARDS)
    text = (
        f"{head}## Briefs that must settle\n\n{table(must)}\n"
        f"## Probe-fed designs\n\n{table(probe)}\n## Random briefs\n\n{table(random)}"
    )
    Path("docs/settling.md").write_text(text, encoding="utf-8")


def main() -> None:
    """Settle what is not settled yet, as far as time allows."""
    kept, end = Path(sys.argv[1]), time.perf_counter() + float((sys.argv[2:] or ["inf"])[0])
    texts = kept.read_text(encoding="utf-8").splitlines() if kept.exists() else []
    rows = {row["name"]: row for row in map(json.loads, texts)}
    cases = [*required(), *probes(), *drawn()]
    for case in cases:
        if case.name in rows:
            continue
        if time.perf_counter() > end:
            print(f"{len(rows)} of {len(cases)} rows done")
            return
        row = settled(case)
        rows[case.name] = row
        print(line(row), flush=True)
        with kept.open("a", encoding="utf-8") as file:
            file.write(json.dumps(row) + "\n")
    write(rows)
    print("all rows done")


if __name__ == "__main__":
    main()
