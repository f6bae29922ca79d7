"""The quick level of the field solver, for a hand that moves: what it costs and how far it is off.

Run from the top of the checkout: python tests/bench/quick_level.py [NAME ...]. For the default
design, the shipped examples and four more builds it prints unknowns, processor time of one whole
response, and the largest differences from the fine level over a fifth of the brief's frequency:
of S11, of S11 after the one shift of frequency that suits best, of the unwanted over the wanted
field at boresight. Then what the projection alone does: three solved frequencies against each
solved.
"""

from __future__ import annotations

import os
import sys
import time
from importlib.resources import files
from pathlib import Path

import numpy as np

ROOT = Path(__file__).parents[2]
sys.path[:0] = [str(ROOT), str(ROOT / "tests")]

from board_shapes import board_dual_edge
from fullwave_shapes import small_ground, thick_air, thin_air

from core.design.defaults import default_design
from core.fullwave.equations import project
from core.fullwave.mesh import Level
from core.fullwave.moments import currents
from core.fullwave.respond import respond
from core.fullwave.solvers import build_solver, kernels_of
from core.fullwave.sweep import first_points
from core.layout.build import build_layout
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.response.polarisation import circular_components
from core.storage.project import read_project

BEST_OF = 5
SHIFTS = np.linspace(-0.02, 0.02, 161)


def layouts():
    """Name, layout, and whether it is meant to be circular."""
    designs = {"default": default_design()}
    for path in sorted(Path(str(files("assets").joinpath("examples"))).glob("*.kerf")):
        designs[path.stem] = read_project(path)
    designs |= {"thin air": thin_air(), "thick air": thick_air(), "small ground": small_ground()}
    found = {name: build_layout(design) for name, design in designs.items()}
    return found | {"dual-edge board": board_dual_edge()}


def ratio(samples):
    """Weaker over stronger of the components, circular or linear, as the band's middle has it."""
    pairs = (circular_components(samples.e_x, samples.e_y), (samples.e_x, samples.e_y))
    middle = len(samples.frequency) // 2
    sorted_pairs = [sorted(pair, key=lambda one: abs(one[middle])) for pair in pairs]
    return [weak / strong for weak, strong in sorted_pairs]


def shifted(one, other):
    """Least largest difference of S11 after one common shift, and the shift."""
    f, low, high = one.frequency, one.frequency[0], one.frequency[-1]
    errors = []
    for shift in SHIFTS:
        at = f * (1.0 + shift)
        inside = (at >= low) & (at <= high)
        moved = np.interp(at, f, one.s11.real) + 1j * np.interp(at, f, one.s11.imag)
        errors.append(np.abs(moved - other.s11)[inside].max())
    best = int(np.argmin(errors))
    return errors[best], SHIFTS[best]


def reflection(admittance, impedance):
    """Reflection coefficient of an admittance."""
    return (1.0 - admittance * impedance) / (1.0 + admittance * impedance)


def projected(layout):
    """Largest errors of the projection alone: of S11 and of the field."""
    f0, impedance = layout.frequency, layout.ports[0].impedance
    solver = build_solver(layout, Level.QUICK, kernels_of(layout, 1.1 * f0))
    projection, _ = project(solver.posed, first_points((0.9 * f0, 1.1 * f0), f0, 3), SILENT)
    told, true = [], []
    for frequency in np.linspace(0.9, 1.1, 11) * f0:
        posed = solver.posed(float(frequency))
        found = currents(posed.matrix, posed.excitation)
        true.append([posed.admittance(found), *(posed.boresight @ found)])
        told.append(projection.quantities(float(frequency)))
    one, other = np.array(told), np.array(true)
    match = reflection(one[:, 0], impedance) - reflection(other[:, 0], impedance)
    missed = np.linalg.norm(one[:, 1:] - other[:, 1:], axis=1)
    return np.abs(match).max(), (missed / np.linalg.norm(other[:, 1:], axis=1)).max()


def main():
    print("| build | unknowns | ms | S11 | S11, shifted | field ratio | projection: S11, field |")
    print("| --- | --- | --- | --- | --- | --- | --- |")
    for name, layout in layouts().items():
        if sys.argv[1:] and name not in sys.argv[1:]:
            continue
        frequencies, spent = frequency_grid(layout.frequency), []
        for _ in range(BEST_OF):
            begin = time.process_time()
            quick = respond(layout, frequencies, SILENT, Level.QUICK)
            spent.append(time.process_time() - begin)
        fine = respond(layout, frequencies, SILENT, Level.FINE)
        solver = build_solver(layout, Level.QUICK, kernels_of(layout, 1.1 * layout.frequency))
        count = solver.system.moments.basis.count
        apart = np.abs(quick.sweep.s11 - fine.sweep.s11).max()
        least, shift = shifted(quick.sweep, fine.sweep)
        circular, linear = (
            np.where(np.abs(b) < 1.0, np.abs(a - b), 0.0).max()
            for a, b in zip(ratio(quick.sweep), ratio(fine.sweep), strict=True)
        )
        crossed = linear if name == "probe-fed" else circular  # the one that is linear
        match, missed = projected(layout)
        print(
            f"| {name} | {count} | {1e3 * min(spent):.0f} | {apart:.3f} | {least:.3f} at "
            f"{100 * shift:+.2f} % | {crossed:.3f} | {match:.0e}, {missed:.0e} |",
            flush=True,
        )
    load = os.getloadavg()[0] if hasattr(os, "getloadavg") else float("nan")
    print(f"best of {BEST_OF}, milliseconds of one processor; load average {load:.1f}")


if __name__ == "__main__":
    main()
