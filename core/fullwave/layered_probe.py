"""Vertical currents of a probe below top copper, in the moment matrix and at the port.

Shapes: t triangles, the probe's included as the last; n functions; e edges round the probe;
m vertical profiles; u table entries.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.interpolate import CubicSpline
from scipy.sparse import csr_array

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.coax_mouth import mouth_voltages
from core.fullwave.quadrature import COARSE_RULE, triangle_rule

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.fullwave.kernel_table import KernelTables
    from core.fullwave.mesh_model import CoaxRing

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_CLOSE: Final = 6.0  # pin diameters within which triangles are sampled finely
_FINE_RULE: Final = triangle_rule(4)
_ALONG: Final = 4  # points along an edge round the pin
_OUTER: Final = 16  # and for logarithms between two edges
_SPOKES: Final = 96  # distances at which the mouth's voltage is worked out


@dataclass(frozen=True, eq=False)
class ProbeMoments:
    """What a probe needs at every frequency.

    Attributes
    ----------
    profiles : int
    port : CoaxRing
    middles : (e, 2) ndarray of float
        Of the edges round the probe, m.
    lengths : (e,) ndarray of float
        Of those edges, m.
    coupling : (e t, u) sparse array of float
        From a table to its mean between an edge and a triangle.
    probe : (e e, u) sparse array of float
        From a table to its mean between two edges.
    logs : (e, e) ndarray of float
        Means of ln(distance/step).
    away : (t, 3) ndarray of float
        Distances of the triangles' points from the probe's axis, m.
    """

    profiles: int
    port: CoaxRing
    middles: Floats
    lengths: Floats
    coupling: csr_array
    probe: csr_array
    logs: Floats
    away: Floats

    @property
    def count(self) -> int:
        """Functions of the probe."""
        return self.profiles * len(self.lengths)

    @property
    def function_lengths(self) -> Floats:
        """Length of the edge of each function of the probe, m."""
        return np.tile(self.lengths, self.profiles)


def build_probe_moments(
    basis: Basis, pin: Floats, port: CoaxRing, profiles: int, grid: tuple[float, int]
) -> ProbeMoments:
    """Work out what does not change with frequency.

    Parameters
    ----------
    basis : Basis
        From `board_basis`.
    pin : (e, 2, 2) ndarray of float
        Ends of the edges round the probe, m.
    port : CoaxRing
    profiles : int
    grid : tuple of (float, int)
        Step of the tables, m, and number of their entries.

    Returns
    -------
    ProbeMoments
    """
    lengths = np.linalg.norm(pin[:, 1] - pin[:, 0], axis=1)
    x, w = np.polynomial.legendre.leggauss(_ALONG)
    on_edges = pin[:, :1] + 0.5 * (1.0 + x)[:, None] * (pin[:, 1:] - pin[:, :1])
    axis = np.array([port.x, port.y])
    corners = basis.corners[..., :2]
    points = np.einsum("ic,tcx->tix", COARSE_RULE[:, :3], corners)
    apart = np.linalg.norm(on_edges[:, None, None] - on_edges[None, :, :, None], axis=-1)
    weights = np.broadcast_to(np.multiply.outer(w, w) / 4.0, apart.shape)
    edges = len(lengths)
    number = np.broadcast_to(np.arange(edges**2).reshape(edges, edges, 1, 1), apart.shape)
    return ProbeMoments(
        profiles=profiles,
        port=port,
        middles=pin.mean(axis=1),
        lengths=lengths,
        coupling=_coupling(corners, (on_edges, w / 2.0), axis, _CLOSE * 2.0 * port.inner, grid),
        probe=_reader(number, apart, weights, edges**2, grid),
        logs=_mean_logs(pin) - np.log(grid[0]),
        away=np.linalg.norm(points - axis, axis=-1),
    )


def add_probe(
    matrix: Complexes,
    basis: Basis,
    probe: ProbeMoments,
    tables: KernelTables,
    wavenumber: float,
    pin_impedance: complex,
) -> None:
    """Add what vertical currents do to the moment matrix.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Written to, ohm m².
    basis : Basis
    probe : ProbeMoments
    tables : KernelTables
        Of one frequency.
    wavenumber : float
        Of free space, 1/m.
    pin_impedance : complex
        Of the pin's surface, from the ground plane to the copper: ohm m.
    """
    edges, first = len(probe.lengths), basis.count - probe.count
    scale = FREE_SPACE_IMPEDANCE / (1j * wavenumber)  # 1/(j omega eps0)
    to_charges = _read(probe.coupling, tables.coupling[:, 0])
    rows = np.array(
        [basis.tested(basis.lengths * one) for one in to_charges.reshape(probe.count, -1)]
    )
    rows *= scale * probe.function_lengths[:, None]
    square = _read(probe.probe, tables.probe[:, :, 0].reshape(probe.profiles**2, -1))
    square = square.reshape(probe.profiles, probe.profiles, edges, edges)
    square = square - tables.probe_log[:, :, 0, None, None] * probe.logs
    pairs = square.transpose(0, 2, 1, 3).reshape(probe.count, probe.count)
    matrix[first:] += rows
    matrix[:, first:] += rows.T
    matrix[first:, first:] += (
        scale * np.outer(probe.function_lengths, probe.function_lengths) * (0.5 * (pairs + pairs.T))
    )
    share = np.repeat(np.where(np.arange(probe.profiles) == 0, 1.0, 0.5), edges)
    own = np.arange(first, basis.count)
    matrix[own, own] += pin_impedance * share * probe.function_lengths


def port_voltages(basis: Basis, probe: ProbeMoments, tables: KernelTables) -> Complexes:
    """Reactions of the functions with the mouth of the coax at 1 V.

    Parameters
    ----------
    basis : Basis
    probe : ProbeMoments
    tables : KernelTables
        Of one frequency.

    Returns
    -------
    (n,) ndarray of complex
        V m.
    """
    port, farthest = probe.port, float(probe.away.max())
    scale = min(port.inner, port.outer - port.inner)
    spokes = scale * np.sinh(np.linspace(0.0, np.arcsinh(farthest / scale), _SPOKES))
    spokes[-1] = farthest
    divergence, _ = mouth_voltages(tables, port.inner, port.outer, spokes)
    _, vertical = mouth_voltages(tables, port.inner, port.outer, np.array([port.inner]))
    means = CubicSpline(spokes, divergence[0])(probe.away).mean(axis=1)
    voltages = basis.tested(basis.lengths * means)
    first = basis.count - probe.count
    voltages[first:] += probe.function_lengths * np.repeat(vertical[:, 0, 0], len(probe.lengths))
    return voltages


def _coupling(
    corners: Floats,
    on_edges: tuple[Floats, Floats],
    axis: Floats,
    close: float,
    grid: tuple[float, int],
) -> csr_array:
    """Reader of means between edges and triangles, finer where these are close to the probe."""
    places, along = on_edges
    edges, triangles = len(places), len(corners)
    gap = np.linalg.norm(corners - axis, axis=-1).min(axis=1)
    numbers, distances, weights = [], [], []
    for rule, chosen in ((_FINE_RULE, gap < close), (COARSE_RULE, gap >= close)):
        which = np.flatnonzero(chosen)
        points = np.einsum("ic,tcx->tix", rule[:, :3], corners[which])
        apart = np.linalg.norm(places[:, None, :, None] - points[None, :, None], axis=-1)
        number = np.arange(edges)[:, None] * triangles + which
        numbers.append(np.broadcast_to(number[..., None, None], apart.shape).ravel())
        distances.append(apart.ravel())
        weights.append(np.broadcast_to(np.multiply.outer(along, rule[:, 3]), apart.shape).ravel())
    return _reader(
        np.concatenate(numbers),
        np.concatenate(distances),
        np.concatenate(weights),
        edges * triangles,
        grid,
    )


def _reader(
    number: Ints, distance: Floats, weight: Floats, rows: int, grid: tuple[float, int]
) -> csr_array:
    """Matrix (rows, u) from a table's entries to weighted sums of cubic look-ups."""
    step, entries = grid
    at = distance.ravel() / step
    first = np.clip(at.astype(np.int64) - 1, 0, entries - 4)
    a, b, c, d = (at - first - i for i in range(4))
    shares = np.stack([b * c * d / -6.0, a * c * d / 2.0, a * b * d / -2.0, a * b * c / 6.0], 1)
    # Rows laid out here: entries that meet stay apart, which costs less than to find them.
    order = np.argsort(number, axis=None, kind="stable")
    starts = np.zeros(rows + 1, dtype=np.int64)
    np.cumsum(np.bincount(number.ravel(), minlength=rows), out=starts[1:])
    values = shares[order] * weight.ravel()[order, None]
    columns = first[order, None] + np.arange(4)
    return csr_array((values.ravel(), columns.ravel(), 4 * starts), shape=(rows, entries))


def _read(reader: csr_array, tables: Complexes) -> Complexes:
    """Apply a reader to tables (m, u): (m, rows)."""
    parts = reader @ np.concatenate([tables.real, tables.imag]).T
    real, imaginary = np.split(parts.T, 2)
    return np.asarray(real + 1j * imaginary)


def _mean_logs(pin: Floats) -> Floats:
    """Means (e, e) of ln(distance) between edges: one integral exact, the other by points."""
    x, w = np.polynomial.legendre.leggauss(_OUTER)
    start, along = pin[:, 0], pin[:, 1] - pin[:, 0]
    lengths = np.linalg.norm(along, axis=1)
    along = along / lengths[:, None]
    points = start[:, None] + (0.5 * (1.0 + x) * lengths[:, None])[..., None] * along[:, None]
    arms = points[:, None] - start[None, :, None]  # test edge, source edge, point
    here = np.einsum("abqx,bx->abq", arms, along)
    off = np.abs(arms[..., 0] * along[:, None, 1] - arms[..., 1] * along[:, None, 0])
    whole = lengths[None, :, None]
    integral = _log_integral(here, off) + _log_integral(whole - here, off)
    means = (integral / whole) @ (w / 2.0)
    # On the edge itself the points miss the logarithms at both ends.
    np.fill_diagonal(means, np.log(lengths) - 1.5)
    return np.asarray(0.5 * (means + means.T))


def _log_integral(end: Floats, off: Floats) -> Floats:
    """Integral of ln(hypot(s, off)) for s from 0 to `end`."""
    reach = np.maximum(np.hypot(end, off), 1e-300)
    return end * (np.log(reach) - 1.0) + off * np.arctan2(end, np.maximum(off, 1e-300))
