"""Modes of discs on boards against finite elements; writes docs/validation.md.

Run from the top of the checkout, with the extra `validation`:
python tests/bench/validate_disc_modes.py
"""

from __future__ import annotations

import sys
from dataclasses import replace
from functools import partial
from math import ceil, pi
from pathlib import Path

import numpy as np
import shapely

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1])]

from bench.disc_modes import disc_mode
from bench.validate_measured import published_rows
from bench.validation import kept_rows, percent, write_table
from board_shapes import IDEAL, board_disc

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.fullwave.kernel_table import plan_tables
from core.fullwave.layered_mesh import BoardMesh
from core.fullwave.layered_moments import board_basis, build_layered_moments, layered_matrix
from core.fullwave.mesh import FINENESS, Level
from core.fullwave.mesh_model import CoaxRing
from core.fullwave.moments import currents
from core.fullwave.rational import Rational, fit_rational
from core.fullwave.respond import respond
from core.fullwave.sizes import sizes_near
from core.fullwave.triangulate import triangulate
from core.lines.stack import Layer
from core.progress import SILENT

BARE = {"normal": (5.5, 0.1), "fine": (8.5, 0.1), "finer": (12.0, 0.05), "finest": (18.0, 0.05)}
"""Cells across the disc and width of the edge row in heights, without any probe."""
PLACES = (0.04, 0.2)  # of a probe, in diameters from the middle


def bare_mode(row: dict, across: float, edge: float) -> tuple[float, float]:
    """Frequency (Hz) and Q of a disc without a probe, from what a uniform field drives on it."""
    radius, height = row["radius"], row["height"]
    sides = 2 * ceil(pi * across / 2.0)
    turn = TWO_PI / sides
    rim = radius * np.sqrt(turn / np.sin(turn))  # the circle's area
    corners = [(rim * np.cos(turn * i), rim * np.sin(turn * i)) for i in range(sides)]
    sizes = sizes_near(2.0 * radius / across, 1.0, [])
    points, triangles = triangulate(shapely.Polygon(corners), sizes, edge * height)
    vertices = np.column_stack([points, np.zeros(len(points))])
    mesh = BoardMesh(vertices, triangles, np.array([[0, 1]]), CoaxRing(0.0, 0.0, 1e-4, 2e-4))
    corners_of = vertices[triangles]
    longest = np.linalg.norm(np.roll(corners_of, 1, axis=1) - corners_of, axis=2).max()
    highest = TWO_PI * 1.15 * row["frequency"] / SPEED_OF_LIGHT
    plan = plan_tables((Layer(height, row["eps_r"]),), highest, 3.0 * radius, 1.5 * longest)
    basis = board_basis(mesh, 0)
    moments = build_layered_moments(basis, triangles, plan)
    arms = (basis.corners.mean(axis=1)[:, None] - basis.corners)[..., 0].T
    excitation = basis.tested((arms * basis.lengths / 2.0).astype(complex))
    frequencies = np.sort(row["frequency"] * (1.0 + 0.12 * np.cos(pi * (np.arange(9) + 0.5) / 9.0)))
    driven = []
    for frequency in frequencies:
        k = TWO_PI * frequency / SPEED_OF_LIGHT
        matrix = layered_matrix(moments, plan.tables(np.array([k])), k, 0.0)
        driven.append([excitation @ currents(matrix, excitation)])
    pole = _strongest(fit_rational(frequencies, np.array(driven), 5))
    return float(abs(pole)), float(abs(pole) / (2.0 * pole.imag))


def _strongest(fit: Rational) -> complex:
    """The pole with the highest peak at real frequencies; a fit also has some of no weight."""
    poles = [pole for pole in fit.poles() if pole.imag > 0.0]
    steps = [1e-7 * abs(pole) for pole in poles]
    peaks = [
        abs(fit.at(np.array([pole + step]))[0, 0]) * step / pole.imag
        for pole, step in zip(poles, steps, strict=True)
    ]
    return complex(poles[int(np.argmax(peaks))])


def probed_mode(row: dict, place: float) -> tuple[float, float]:
    """The same of the disc with an open probe, as a response tells it on the fine mesh."""
    height, eps_r, frequency = row["height"], row["eps_r"], row["frequency"]
    layout = board_disc(row["radius"], height, eps_r, frequency, place)
    layout = replace(layout, stack=(Layer(height, eps_r),), foil=IDEAL)
    response = respond(layout, frequency * np.linspace(0.9, 1.1, 11), SILENT, Level.FINE)
    modes = [mode for mode in response.modes if mode.name == "along y"]
    mode = min(modes, key=lambda one: abs(one.frequency / frequency - 1.0))
    return mode.frequency, mode.quality_factor


def compared(row: dict) -> dict:
    """Finite elements on two meshes, moments on four, and with a probe."""
    bare = {name: bare_mode(row, *fineness) for name, fineness in BARE.items()}
    size = (row["radius"], row["height"], row["eps_r"])
    return {
        "bare": bare,
        "probed": [probed_mode(row, place) for place in PLACES],
        "elements": [disc_mode(*size, bare["fine"][0], fineness) for fineness in (0.5, 1.0)],
    }


def line(name: str, row: dict, found: dict) -> list[str]:
    """One row of the table."""
    coarse, true = found["elements"]
    return [
        name,
        f"{1e3 * row['radius']:g}, {1e3 * row['height']:g} mm, {row['eps_r']:g}",
        f"{1e-6 * true[0]:.1f} MHz, {true[1]:.1f}",
        percent(true[0] / coarse[0], 2),
        *(percent(found["bare"][level][0] / true[0], 2) for level in BARE),
        percent(found["bare"]["finest"][1] / true[1], 1),
        *(percent(mode / true[0], 2) for mode, _ in found["probed"]),
        percent(true[0] / row["frequency"]),
    ]


def main() -> None:
    """Solve what has not been solved and write the table."""
    assert [BARE[level.value][0] for level in (Level.NORMAL, Level.FINE)] == [
        FINENESS[level].across for level in (Level.NORMAL, Level.FINE)
    ]
    rows = {name: row for name, row in published_rows().items() if "radius" in row}
    found = kept_rows(__file__, {name: partial(compared, row) for name, row in rows.items()})
    head = ("row", "radius, height, permittivity", "elements: mode, Q", "their last refinement")
    head += (*BARE, "Q, finest", *(f"probe at {place:g}" for place in PLACES))
    head += ("elements over published",)
    write_table("discs", head, (line(name, rows[name], found[name]) for name in rows))


if __name__ == "__main__":
    main()
