"""A coax that opens into the ground plane under a layered stack, as a source.

The mouth carries the field of the coax's own wave, V/(r ln(outer/inner)): a ring of magnetic
current on the closed ground plane [1]_. Its field under and at the top copper is worked out
with the stack's own kernels, so that the currents feel the field of a real mouth.

Shapes: f frequencies, m vertical profiles, d distances.

References
----------
.. [1] L. L. Tsai, "A numerical solution for the near and far fields of an annular ring of
   magnetic current", IEEE Trans. Antennas Propag., vol. 20, no. 5, pp. 569-576, 1972.
"""

from __future__ import annotations

from math import log
from typing import TYPE_CHECKING, Final

import numpy as np
from numpy.polynomial import legendre
from scipy.special import j0

from core.constants import TWO_PI, VACUUM_PERMITTIVITY
from core.fullwave.table_grid import looked_up

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.kernel_table import KernelTables
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_TURNS: Final = 24  # points on half a ring


def mouth_voltages(
    tables: KernelTables, inner: float, outer: float, distance: Floats
) -> tuple[Complexes, Complexes]:
    """What a mouth at 1 V does to currents at a distance from its axis.

    Parameters
    ----------
    tables : KernelTables
        That reach `outer` beyond the largest distance.
    inner, outer : float
        Radii of the mouth, m, inner < outer.
    distance : (d,) ndarray of float
        From the axis, m.

    Returns
    -------
    on_divergence : (f, d) ndarray of complex
        Reaction with a divergence at the top, V.
    on_vertical : (m, f, d) ndarray of complex
        Reaction with the vertical currents cos(i pi z/h) that feed the top, V; about 1 at the
        inner conductor.
    """
    spread = log(outer / inner)
    divergence = _ring_mean(tables.foot_scalar, tables.step, inner, distance)
    divergence -= _ring_mean(tables.foot_scalar, tables.step, outer, distance)
    vertical = _ring_mean(tables.foot, tables.step, inner, distance)
    vertical -= _ring_mean(tables.foot, tables.step, outer, distance)
    # The mean of ln|distance| over a ring is that of its centre or its rim, whichever is more.
    drop = np.log(np.maximum(distance, outer) / np.maximum(distance, inner)) / spread
    return TWO_PI / spread * divergence, TWO_PI / spread * vertical + drop


def mouth_capacitance(layers: tuple[Layer, ...], inner: float, outer: float) -> float:
    """Capacitance of the mouth itself, between its conductors through the stack.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    inner, outer : float
        Radii, m, inner < outer.

    Returns
    -------
    float
        F, parallel to the port.

    Notes
    -----
    The reaction of the ring of magnetic current with its own field at zero frequency. What
    fields in the mouth differ from the coax's own wave is left out.
    """
    fastest = 400.0 / inner
    edges = np.concatenate([[0.0], 1e-3 / outer * 2.0 ** np.arange(40)])
    edges = np.concatenate(
        [edges[edges < 2.0 / outer], np.arange(2.0 / outer, fastest, 2.0 / outer)]
    )
    x, weight = legendre.leggauss(8)
    k = (0.5 * (edges[:-1] + edges[1:])[:, None] + 0.5 * np.diff(edges)[:, None] * x).ravel()
    step = (0.5 * np.diff(edges)[:, None] * weight).ravel()
    ring = (j0(k * inner) - j0(k * outer)) / log(outer / inner)
    total = float(step @ (ring**2 / k**2 * _seen_from_ground(layers, k)))
    return VACUUM_PERMITTIVITY * TWO_PI * total


def mouth_field(inner: float, outer: float, k_rho: Floats) -> Complexes:
    """Transform of a mouth's own field at 1 V along the direction looked at.

    Parameters
    ----------
    inner, outer : float
        Radii, m, inner < outer.
    k_rho : (n,) ndarray of float
        Horizontal wavenumber, 1/m, >= 0.

    Returns
    -------
    (n,) ndarray of complex
        Integral of the field times exp(j k . r), r from the mouth's axis, V m.
    """
    k = np.maximum(k_rho, 1e-6 / outer)
    return np.asarray(1j * TWO_PI / log(outer / inner) * (j0(k * inner) - j0(k * outer)) / k)


def _seen_from_ground(layers: tuple[Layer, ...], k_rho: Floats) -> Floats:
    """Ratio of displacement to field in the ground plane at zero frequency, times k_rho."""
    seen = np.ones_like(k_rho)
    for layer in reversed(layers):
        turn = np.tanh(k_rho * layer.thickness)
        seen = layer.eps_r * (seen + layer.eps_r * turn) / (layer.eps_r + seen * turn)
    return seen


def _ring_mean(table: Complexes, step: float, radius: float, distance: Floats) -> Complexes:
    """Mean of a table over a ring, seen from a point at a distance from its axis."""
    turn = np.pi * (np.arange(_TURNS) + 0.5) / _TURNS
    away = np.sqrt(
        np.maximum(
            distance[:, None] ** 2 + radius**2 - 2.0 * radius * distance[:, None] * np.cos(turn),
            0.0,
        )
    )
    values = looked_up(table, step, away.ravel())
    return np.asarray(values.reshape(*table.shape[:-1], *away.shape).mean(axis=-1))
