"""Time the field solver stage by stage and against unknowns; write docs/speed.md and its plot.

Run from the top of the checkout, the library of linear algebra held to one thread so that
processor time is work and not waiting:
OPENBLAS_NUM_THREADS=1 python tests/bench/field_speed.py
"""

from __future__ import annotations

import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, replace
from pathlib import Path
from unittest.mock import patch

import numpy as np

TOP = Path(__file__).parents[2]
sys.path[:0] = [str(TOP), str(TOP / "tests"), str(Path(__file__).parent)]

from board_shapes import board_dual_edge
from cost_plot import cost_plot
from fullwave_shapes import thin_air
from stage_clock import STAGES, StageClock

from core.fullwave import respond as field
from core.fullwave.mesh import FINENESS, Level
from core.layout.build import build_layout
from core.layout.model import Layout
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.storage.project import write_project

RUNS = 5
SCALES = (0.25, 0.5, 0.7, 1.0, 1.4, 2.0, 2.5, 2.8)  # of the normal mesh's fineness, over air
BOARD_SCALES = (0.25, 0.5, 0.7, 1.0, 1.4, 2.0, 3.0, 4.0)
AT_ONCE = 1000  # unknowns at which one frequency is held against the matrix product
LIMITS = {("air", "normal"): 1.0, ("air", "fine"): 2.0, ("FR-4", "normal"): 1.5}  # s, elapsed


@dataclass(frozen=True)
class Cost:
    """Processor time of one frequency and of a sweep, s."""

    unknowns: int
    fill: float
    solve: float
    total: float


def layouts() -> dict[str, Layout]:
    """The designs that are timed."""
    return {"air": build_layout(thin_air()), "FR-4": board_dual_edge()}


def timed(layout: Layout, level: Level, runs: int = RUNS) -> tuple[StageClock, int]:
    """Best of some sweeps of 201 frequencies, and the unknowns."""
    clocks = []
    for _ in range(runs):
        clock = StageClock()
        with clock.running():
            field.respond(layout, frequency_grid(layout.frequency), SILENT, level)
        clocks.append(clock)
    return min(clocks, key=lambda one: one.elapsed), clocks[0].unknowns


@contextmanager
def scaled(scale: float) -> Iterator[None]:
    """The normal mesh made finer."""
    base = FINENESS[Level.NORMAL]
    finer = replace(
        base,
        across=base.across * scale,
        strip_aspect=base.strip_aspect / scale,
        per_wavelength=base.per_wavelength * scale,
        ground_detail=base.ground_detail / scale,
        probe_cell=base.probe_cell / scale,
    )
    with patch.dict(FINENESS, {Level.NORMAL: finer}):
        yield


def costs(layout: Layout, scales: tuple[float, ...]) -> list[Cost]:
    """Cost on ever finer meshes."""
    found = []
    for scale in scales:
        with scaled(scale):
            clock, unknowns = timed(layout, Level.NORMAL, 2)
        solved = clock.calls["solve"]
        found.append(
            Cost(
                unknowns,
                clock.seconds["fill"] / solved,
                clock.seconds["solve"] / solved,
                clock.total,
            )
        )
        print(f"{unknowns:>6} unknowns {clock.total:.2f} s")
    return found


def product_rate() -> float:
    """Complex multiplications with addition a second and core, of the library's matrix product."""
    n = 1000
    random = np.random.default_rng(1)
    matrix = random.standard_normal((n, n)) + 1j * random.standard_normal((n, n))
    seconds = []
    for _ in range(RUNS):
        begin = time.process_time()
        matrix @ matrix
        seconds.append(time.process_time() - begin)
    return n**3 / min(seconds)


def child(*words: str) -> tuple[float, float, str]:
    """Time elapsed, processor time and output of a process of its own."""
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    begin = time.perf_counter()
    done = subprocess.run(
        [sys.executable, *words], cwd=TOP, capture_output=True, text=True, check=True
    )
    elapsed = time.perf_counter() - begin
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    work = after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime
    return elapsed, work, done.stdout


def command_line() -> tuple[float, float]:
    """Best time elapsed and processor time of the verb, process start included."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "design.kerf"
        write_project(path, thin_air(), replace=False)
        runs = [
            child("-m", "app", "readings", str(path), "--engine", "field", "--json")
            for _ in range(3)
        ]
    return min(run[0] for run in runs), min(run[1] for run in runs)


def peak_memory(name: str, level: str) -> float:
    """Most memory that a process holds which solves one design, MB."""
    return float(child(__file__, "--memory", name, level)[2])


def solve_for_memory(name: str, level: str) -> None:
    """Solve one design and print the peak of this process."""
    layout = layouts()[name]
    field.respond(layout, frequency_grid(layout.frequency), SILENT, Level(level))
    # Not by getrusage: that starts from what the parent held.
    status = Path("/proc/self/status").read_text(encoding="ascii")
    print(float(status.split("VmHWM:")[1].split()[0]) / 1024)


def exponent(found: list[Cost], part: str) -> float:
    """Power of the unknowns that fits the four finest meshes."""
    last = found[-4:]
    x = np.log([cost.unknowns for cost in last])
    y = np.log([getattr(cost, part) for cost in last])
    return float(np.polyfit(x, y, 1)[0])


def sweep_table() -> list[str]:
    """Sweeps by design and level."""
    lines = [
        "| design | mesh | unknowns | elapsed, s | at most | processor, s | "
        + " | ".join(STAGES)
        + " | rest |",
        "|" + "---|" * (len(STAGES) + 7),
    ]
    for name, layout in layouts().items():
        for level in Level:
            timed(layout, level, 1)  # imports and first touches
            clock, unknowns = timed(layout, level)
            shares = " | ".join(
                f"{100 * one / clock.total:.0f} %" for one in clock.seconds.values()
            )
            limit = LIMITS.get((name, level.value), "")
            lines.append(
                f"| {name} | {level.value} | {unknowns} | {clock.elapsed:.2f} | {limit} "
                f"| {clock.total:.2f} | {shares} |"
            )
            print(lines[-1])
    return lines


def one_frequency(layout: Layout, scales: tuple[float, ...], rate: float) -> str:
    """Fill and solve at about a thousand unknowns against elimination at the product's rate."""
    with scaled(scales[0]):
        clock, unknowns = timed(layout, Level.NORMAL)
    solved = clock.calls["solve"]
    fill, solve = clock.seconds["fill"] / solved, clock.seconds["solve"] / solved
    floor = unknowns**3 / 3.0 / rate
    return (
        f"| {unknowns} | {1e3 * fill:.0f} | {1e3 * solve:.0f} | {1e3 * floor:.0f} "
        f"| {(fill + solve) / floor:.2f} |"
    )


def cost_table(found: list[Cost]) -> list[str]:
    """Costs by unknowns."""
    lines = ["| unknowns | fill, ms | solve, ms | sweep, s |", "|---|---|---|---|"]
    lines += [
        f"| {one.unknowns} | {1e3 * one.fill:.1f} | {1e3 * one.solve:.1f} | {one.total:.2f} |"
        for one in found
    ]
    powers = [f"{exponent(found, part):.2f}" for part in ("fill", "solve", "total")]
    return [*lines, f"| power, last four | {' | '.join(powers)} |"]


def main() -> None:
    """Measure, write the page and the plot."""
    rate = product_rate()
    sweeps = sweep_table()
    elapsed, work = command_line()
    both = layouts()
    thousand = one_frequency(both["air"], (1.27,), rate), one_frequency(both["FR-4"], (1.5,), rate)
    memory = {
        (name, level): peak_memory(name, level) for name in both for level in ("normal", "fine")
    }
    air, board = costs(both["air"], SCALES), costs(both["FR-4"], BOARD_SCALES)
    picture = TOP / "docs" / "pictures" / "field-cost.svg"
    picture.write_text(cost_plot({"air": air, "FR-4": board}), encoding="utf-8")
    text = (TOP / "docs" / "speed.md").read_text(encoding="utf-8")
    start, rest = text.split("<!-- measured -->\n")[0], text.split("<!-- end -->\n")[1]
    measured = "\n".join(
        [
            "## Sweeps\n",
            *sweeps,
            "",
            f"`kerfwave readings --engine field` of the air design, normal mesh, from the start of "
            f"the process, kernels compiled: {elapsed:.1f} s elapsed, {work:.1f} s of processor "
            "time; at most 4 s.\n",
            "## One frequency\n",
            "| unknowns | fill, ms | solve, ms | elimination at the product's rate, ms | ratio |",
            "|---|---|---|---|---|",
            *thousand,
            "",
            f"Processor time; the complex matrix product runs at {8e-9 * rate:.0f} GFLOP/s and "
            "core. At most 3.\n",
            "## Memory\n",
            "| design | mesh | peak, MB |",
            "|---|---|---|",
            *(f"| {name} | {level} | {peak:.0f} |" for (name, level), peak in memory.items()),
            "",
            "A fresh process, libraries included; at most 400.\n",
            "## Cost against unknowns\n",
            "![Time of fill, solve and sweep against unknowns](pictures/field-cost.svg)\n",
            "Processor time of all threads, over air and on FR-4:\n",
            *cost_table(air),
            "",
            *cost_table(board),
            "",
            f"Load of the machine at the end, from other work too: {os.getloadavg()[0]:.0f}.\n",
        ]
    )
    page = f"{start}<!-- measured -->\n{measured}<!-- end -->\n{rest}"
    (TOP / "docs" / "speed.md").write_text(page, encoding="utf-8")
    print(measured)


if __name__ == "__main__":
    if sys.argv[1:2] == ["--memory"]:
        solve_for_memory(*sys.argv[2:])
    else:
        main()
