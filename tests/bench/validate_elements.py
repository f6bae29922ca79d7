"""A plate and a patch over a plate against a general boundary-element library.

Run from the top of the checkout, with the extra `validation`:
python tests/bench/validate_elements.py
"""

from __future__ import annotations

import sys
from functools import partial
from math import pi
from pathlib import Path

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1])]

from bench.boundary_elements import by_library, by_us
from bench.validation import kept_rows, write_table
from open_surfaces import foot_excitation, patch_over_plate, plate, wave_excitation

DIRECTIONS = np.array(
    [
        (np.sin(t) * np.cos(p), np.sin(t) * np.sin(p), np.cos(t))
        for t in np.radians([0.0, 30.0, 60.0, 90.0, 120.0, 150.0, 180.0])
        for p in np.radians([0.0, 45.0, 90.0, 200.0])
    ]
)
PLATES = {"plate, 6 cells": 6, "plate, 8 cells": 8}
PATCHES = {"patch, 0.95": 0.95, "patch, 0.90": 0.90, "patch, 1.00": 1.00}  # size over wavelength


def compared(vertices, triangles, excitation, wavenumber: float) -> dict:
    """Largest differences, to the largest of the library's, and what the port sees."""
    given = (vertices, triangles, excitation, wavenumber, DIRECTIONS)
    ours, theirs = by_us(*given), by_library(*given)

    def off(one, other) -> float:
        return float(abs(one - other).max() / abs(other).max())

    seen = [1.0 / (excitation @ one.currents) for one in (ours, theirs)]
    return {
        "unknowns": len(excitation),
        "matrix": off(ours.matrix, theirs.matrix),
        "currents": off(ours.currents, theirs.currents),
        "field": off(ours.field, theirs.field),
        "seen": [[one.real, one.imag] for one in seen],
        "sections": [4.0 * pi * float(np.sum(abs(one.field[0]) ** 2)) for one in (ours, theirs)],
    }


def plate_case(cells: int) -> dict:
    """Plate of a wavelength, a wave from straight ahead."""
    mesh = plate(cells)
    return compared(*mesh, wave_excitation(*mesh), 2.0 * pi)


def patch_case(size: float) -> dict:
    """Patch over a plate, fed at the foot of its strip."""
    mesh = patch_over_plate()
    return compared(*mesh, foot_excitation(*mesh), 2.0 * pi * size)


def main() -> None:
    """Solve what has not been solved and write the table."""
    cases = {name: partial(plate_case, cells) for name, cells in PLATES.items()}
    cases |= {name: partial(patch_case, size) for name, size in PATCHES.items()}
    found = kept_rows(__file__, cases)
    lines = []
    for name, row in found.items():
        ours, theirs = (complex(*one) for one in row["seen"])
        fed = name in PATCHES
        lines.append(
            [
                name,
                str(row["unknowns"]),
                f"{100.0 * row['matrix']:.2f} %",
                f"{100.0 * row['currents']:.2f} %",
                f"{100.0 * row['field']:.2f} %",
                f"{ours:.2f}, {theirs:.2f} ohm"
                if fed
                else "{:.3f}, {:.3f}".format(*row["sections"]),
                f"{100.0 * abs(ours / theirs - 1.0):.2f} %" if fed else "",
            ]
        )
    head = ("case", "unknowns", "matrix", "currents", "far field")
    head += ("impedance, or section ahead in wavelengths²: ours, the library's", "impedance apart")
    write_table("elements", head, lines)


if __name__ == "__main__":
    main()
