"""Points and weights for integrals over a triangle and over the sphere."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]

COARSE_RULE: Final = np.array(
    [
        [2 / 3, 1 / 6, 1 / 6, 1 / 3],
        [1 / 6, 2 / 3, 1 / 6, 1 / 3],
        [1 / 6, 1 / 6, 2 / 3, 1 / 3],
    ]
)
"""Three points inside a triangle, as in `triangle_rule`; exact to degree 2."""


def triangle_rule(order: int) -> Floats:
    """Points over a triangle by the product of two Gauss rules, one side drawn to a corner.

    Parameters
    ----------
    order : int
        Points each way; exact for polynomials up to degree 2 order - 2.

    Returns
    -------
    (order², 4) ndarray of float
        Shares of the three corners and weight; weights sum to 1.
    """
    places, weights = np.polynomial.legendre.leggauss(order)
    u, w = (places + 1.0) / 2.0, weights / 2.0
    along, across = np.meshgrid(u, u, indexing="ij")
    weight = 2.0 * np.outer(w * u, w)
    first, second = 1.0 - along, along * (1.0 - across)
    return np.column_stack(
        [first.ravel(), second.ravel(), (along * across).ravel(), weight.ravel()]
    )
