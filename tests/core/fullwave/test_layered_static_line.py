"""A strip of no thickness on a stack at low frequency, against exact quasi-static rows."""

import tomllib
from pathlib import Path

import numpy as np
import pytest
from numpy.polynomial import legendre
from numpy.testing import assert_allclose
from scipy.special import jv

from core.constants import SPEED_OF_LIGHT, VACUUM_PERMITTIVITY
from core.fullwave.kernel_spectra import kernel_spectra
from core.lines.stack import Layer

PUBLISHED = Path(__file__).parents[2] / "published" / "microstrip_quasi_static.toml"
TABLE = tomllib.loads(PUBLISHED.read_text(encoding="utf-8"))
ROWS = [row for row in TABLE["rows"] if "eps_eff" in row]
BASIS = 2 * np.arange(8)
FASTEST = 600.0  # argument of the Bessel functions up to which they are summed


def capacitance(width, layers):
    """Per length, by Galerkin's method with Chebyshev polynomials over the edge singularity."""
    x, w = legendre.leggauss(8)
    edges = np.concatenate([np.geomspace(1e-6, 1.0, 30), np.arange(1.5, FASTEST, 0.5)])
    edges = np.concatenate([[0.0], edges])
    half = 0.5 * np.diff(edges)[:, None]
    turns = (0.5 * (edges[1:] + edges[:-1])[:, None] + half * x).ravel()
    k = 2.0 * turns / width
    scalar = kernel_spectra(layers, np.array([1e-7 / width]), k.astype(complex)).scalar[0].real
    waves = jv(BASIS[:, None], turns)
    integrals = (waves * scalar * (half * w).ravel()) @ waves.T * 2.0 / width
    sign = (-1.0) ** (BASIS // 2)
    signs = np.multiply.outer(sign, sign)
    # The slab has long since become a half space; the rest of J² averages to 1/(pi turns).
    integrals += signs * scalar[-1] * k[-1] / (np.pi * turns[-1])
    potentials = signs * integrals / (np.pi * VACUUM_PERMITTIVITY)
    return np.linalg.inv(potentials)[0, 0]


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["id"])
def test_exact_rows(row):
    width = row["width_over_height"]
    filled = capacitance(width, (Layer(1.0, row["eps_r"]),))
    empty = capacitance(width, (Layer(1.0, 1.0),))
    # 2e-4: rows are exact to 1e-4, the integrals here to about as much
    assert_allclose(filled / empty, row["eps_eff"], rtol=2e-4)
    impedance = 1.0 / (SPEED_OF_LIGHT * np.sqrt(filled * empty))
    assert_allclose(impedance, row["impedance_ohm"], rtol=2e-4)
