"""Where kernels are worked out and tabulated, and how to read a table.

Shapes: d distances, u table entries.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.sparse import csr_array

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_SHORTEST, _LONGEST = 1500, 8000  # tables, in entries
_PER_SPAN, _AT_LEAST = 16, 24  # distances
_WINDOW: Final = 12  # of them, to interpolate between


def table_grid(
    reach: float, finest: float, height: float, densest: float
) -> tuple[Floats, csr_array, float]:
    """Distances to integrate for, and how to get from there to a table of even steps.

    Parameters
    ----------
    reach : float
        Largest distance, m.
    finest : float
        Scale over which kernels may change near the source, m.
    height : float
        Of the stack, m.
    densest : float
        Largest wavenumber in the stack, 1/m.

    Returns
    -------
    distances : (d,) ndarray of float
        From 0 to `reach`, m.
    spread : (u, d) sparse array of float
        From values at the distances to entries.
    step : float
        Between entries, m.

    Notes
    -----
    Chebyshev points of asinh(distance/finest): even in distance near the source, even in its
    logarithm farther out.
    """
    span = np.arcsinh(reach / finest)
    count = _AT_LEAST + int(_PER_SPAN * span + densest * reach)
    angle = np.pi * np.arange(count) / (count - 1)
    nodes = 0.5 - 0.5 * np.cos(angle)
    step = max(min(reach / _SHORTEST, height / 6.0, finest / 3.0), reach / _LONGEST)
    entries = int(np.ceil(reach / step)) + 2
    even = np.arcsinh(np.minimum(step * np.arange(entries), reach) / finest) / span
    return finest * np.sinh(span * nodes), _interpolation(nodes, even), step


def _interpolation(nodes: Floats, wanted: Floats) -> csr_array:
    """Matrix from values at rising nodes to values between them: polynomials through some."""
    first = np.searchsorted(nodes, wanted) - _WINDOW // 2
    columns = np.clip(first, 0, len(nodes) - _WINDOW)[:, None] + np.arange(_WINDOW)
    near = nodes[columns]
    apart = near[:, :, None] - near[:, None, :]
    apart[:, np.arange(_WINDOW), np.arange(_WINDOW)] = 1.0
    gap = wanted[:, None] - near
    gap[gap == 0.0] = 1e-30  # at a node its own value outweighs the others
    weights = 1.0 / (apart.prod(axis=2) * gap)
    weights /= weights.sum(axis=1, keepdims=True)
    starts = np.arange(len(wanted) + 1) * _WINDOW
    return csr_array((weights.ravel(), columns.ravel(), starts), shape=(len(wanted), len(nodes)))


def looked_up(table: Complexes, step: float, distance: Floats) -> Complexes:
    """Cubic through the four nearest entries of a table.

    Parameters
    ----------
    table : (..., u) ndarray of complex
        At distances 0, step, ...
    step : float
        m.
    distance : (d,) ndarray of float
        m, within the table.

    Returns
    -------
    (..., d) ndarray of complex
    """
    at = distance / step
    first = np.clip(at.astype(int) - 1, 0, table.shape[-1] - 4)
    a, b, c, d = (at - first - i for i in range(4))
    return np.asarray(
        table[..., first] * (b * c * d / -6.0)
        + table[..., first + 1] * (a * c * d / 2.0)
        + table[..., first + 2] * (a * b * d / -2.0)
        + table[..., first + 3] * (a * b * c / 6.0)
    )
