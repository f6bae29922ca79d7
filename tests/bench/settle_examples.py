"""Settles the examples that come with the program, on the finest mesh, and writes them.

Run with the project's Python: python tests/bench/settle_examples.py. It takes about a minute and
prints what each reaches. Nothing is written for an example that misses its goals. The default
design is solved too: it stands in `core/design/defaults.py`.
"""

import sys
import time
from importlib.resources import files
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from core.design.defaults import default_design
from core.fullwave.mesh import Level
from core.layout.build import build_layout
from core.sizing.settle import settle, settling_goal
from core.sizing.solved import FieldSpot
from core.storage.project import read_project, write_project


def main():
    for path in sorted(Path(str(files("assets").joinpath("examples"))).glob("*.kerf")):
        begin = time.perf_counter()
        settling = settle(read_project(path))
        seconds = time.perf_counter() - begin
        print(
            f"{path.stem:<11} {settling.reason} {settling.solves} solves, "
            f"{settling.fine_solves} of them fine, {seconds:.0f} s"
        )
        if settling.met:
            write_project(path, settling.design, replace=True)
    design = default_design()
    goal = settling_goal(design.brief)
    solved = FieldSpot()(build_layout(design), design.brief.frequency, Level.FINE)
    vswr, axial_ratio = goal.reached(goal.missing(*solved))
    print(f"default     VSWR {vswr:.2f}, axial ratio {axial_ratio:.2f} dB on the fine mesh")


if __name__ == "__main__":
    main()
