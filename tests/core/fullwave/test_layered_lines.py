"""Strips on a board, solved as they lie: capacitance per length and wavelength along them."""

import tomllib
from math import sqrt
from pathlib import Path

import numpy as np
import pytest
from board_shapes import IDEAL, strip

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.fullwave.board_kernels import BoardKernels
from core.fullwave.layered_system import build_layered_system, solve_layered
from core.lines.dispersion import dispersed_permittivity
from core.lines.quasi_static import static_line
from core.lines.stack import Layer

PUBLISHED = Path(__file__).parents[2] / "published" / "microstrip_quasi_static.toml"
TABLE = tomllib.loads(PUBLISHED.read_text(encoding="utf-8"))
ROWS = [row for row in TABLE["rows"] if row["id"] in ("X05", "X11", "X23", "X35", "X37", "X49")]
HEIGHT, SLOW = 1e-3, 20e6


def capacitance(width, length, eps_r):
    """Of an open strip, F, by its input admittance where it is 1/800 wavelength long."""
    mesh = strip(width, length, 8, round(1.5 * length / HEIGHT))
    system = build_layered_system(mesh, BoardKernels((Layer(HEIGHT, eps_r),), IDEAL, SLOW))
    return solve_layered(system, SLOW).admittance.imag / (TWO_PI * SLOW)


def per_length(width, eps_r):
    """Ends and feed fall out of the difference of two lengths."""
    longer, shorter = 18.0 * HEIGHT, 12.0 * HEIGHT
    difference = capacitance(width, longer, eps_r) - capacitance(width, shorter, eps_r)
    return difference / (longer - shorter)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["id"])
def test_exact_quasi_static_rows(row):
    width = row["width_over_height"] * HEIGHT
    filled, empty = per_length(width, row["eps_r"]), per_length(width, 1.0)
    assert filled / empty == pytest.approx(row["eps_eff"], rel=0.01)
    impedance = 1.0 / (SPEED_OF_LIGHT * sqrt(filled * empty))
    assert impedance == pytest.approx(row["impedance_ohm"], rel=0.01)


def along(system, mesh, solution, step):
    """Current through every line across a strip, A."""
    basis = system.moments.basis
    places = mesh.vertices[basis.ends][..., 1]
    crossing = np.flatnonzero(np.ptp(places, axis=1) == 0.0)
    crossing = crossing[crossing < basis.count - system.probe.count]
    start, end = (
        basis.corners.mean(axis=1)[half % basis.triangles]
        for half in (basis.plus[crossing], basis.minus[crossing])
    )
    widths = np.ptp(mesh.vertices[basis.ends[crossing]][..., 0], axis=1)
    total = np.zeros(round(places.max() / step) + 1, dtype=complex)
    passing = solution.currents[crossing] * widths * np.sign(end[:, 1] - start[:, 1])
    np.add.at(total, np.round(places[crossing, 0] / step).astype(int), passing)
    return total


@pytest.mark.parametrize(
    "width, height, eps_r, frequency",
    [(3.1e-3, 1.6e-3, 4.3, 2.45e9), (3.1e-3, 1.6e-3, 4.3, 10e9), (0.6e-3, 0.635e-3, 10.2, 10e9)],
)
def test_wavelength_follows_the_dispersion_model(width, height, eps_r, frequency):
    line = static_line(width / height, eps_r, 0.0)
    step = SPEED_OF_LIGHT / frequency / line.eps_eff**0.5 / 24
    mesh = strip(width, 60 * step, 10, 60)
    system = build_layered_system(mesh, BoardKernels((Layer(height, eps_r),), IDEAL, frequency))
    flowing = along(system, mesh, solve_layered(system, frequency), step)[8:-8]
    # A standing wave: the sum of both neighbours is 2 cos(beta step) times what is between.
    sums, middle = flowing[2:] + flowing[:-2], flowing[1:-1]
    cosine = 0.5 * np.real(np.vdot(middle, sums) / np.vdot(middle, middle))
    slowed = (np.arccos(cosine) / step / (TWO_PI * frequency / SPEED_OF_LIGHT)) ** 2
    # M. Kirschning, R. H. Jansen 1982, stated error 0.6 %.
    assert slowed == pytest.approx(
        dispersed_permittivity(line, np.array([frequency * height]))[0], rel=0.01
    )
