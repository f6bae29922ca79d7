"""Compiled near terms of charges alone: means of 1/R over two triangles, one at its image.

As `core.fullwave.compiled_near` does it, for the images that a spacer makes of charges.

Shapes: p pairs.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

from core.fullwave.compiled_near import line_log, normal_of

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order


@njit(inline="always", error_model="numpy", fastmath=_FAST)
def _point(rule: Floats, i: int, corners: Floats) -> tuple[float, float, float]:
    """Point of a rule in a triangle."""
    a, b, c = rule[i, 0], rule[i, 1], rule[i, 2]
    return (
        a * corners[0, 0] + b * corners[1, 0] + c * corners[2, 0],
        a * corners[0, 1] + b * corners[1, 1] + c * corners[2, 1],
        a * corners[0, 2] + b * corners[1, 2] + c * corners[2, 2],
    )


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _mean_inverse(test: Floats, source: Floats, rule: Floats) -> float:
    """Mean of 1/R over two triangles by points."""
    total = 0.0
    for i in range(rule.shape[0]):
        x, y, z = _point(rule, i, test)
        for j in range(rule.shape[0]):
            u, v, w = _point(rule, j, source)
            squared = (x - u) ** 2 + (y - v) ** 2 + (z - w) ** 2
            total += rule[i, 3] * rule[j, 3] / np.sqrt(squared)
    return float(total)


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _edge_potential(one: Floats, two: Floats, normal: Floats, foot: Floats, height: float) -> float:
    """What one edge of the source triangle gives of the integral of 1/R."""
    ax, ay, az = two[0] - one[0], two[1] - one[1], two[2] - one[2]
    length = np.sqrt(ax * ax + ay * ay + az * az)
    ax, ay, az = ax / length, ay / length, az / length
    dx, dy, dz = one[0] - foot[0], one[1] - foot[1], one[2] - foot[2]
    low = ax * dx + ay * dy + az * dz
    high = low + length
    away = (ay * normal[2] - az * normal[1]) * dx
    away += (az * normal[0] - ax * normal[2]) * dy
    away += (ax * normal[1] - ay * normal[0]) * dz
    squared = away * away + height * height
    if squared <= 1e-24 * length * length:
        return 0.0
    r_low, r_high = np.sqrt(squared + low * low), np.sqrt(squared + high * high)
    total = away * line_log(low, high, r_low, r_high)
    if height < 1e-12 * length:
        return float(total)
    over, under = squared + height * r_high, squared + height * r_low
    turned = np.arctan2(away * (high * under - low * over), over * under + away * away * high * low)
    return float(total - height * turned)


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _mean_potential(
    test: Floats, source: Floats, rule: Floats, normal: Floats, point: Floats
) -> float:
    """Mean of 1/R over two triangles: test points by rule, source exact."""
    twice = normal_of(source, normal)
    total = 0.0
    for q in range(rule.shape[0]):
        point[0], point[1], point[2] = _point(rule, q, test)
        height = 0.0
        for axis in range(3):
            height += normal[axis] * (point[axis] - source[0, axis])
        for axis in range(3):
            point[axis] -= height * normal[axis]
        seen = 0.0
        for i in range(3):
            seen += _edge_potential(source[i], source[(i + 1) % 3], normal, point, abs(height))
        total += rule[q, 3] * seen
    return total * 2.0 / twice


@njit(nogil=True, error_model="numpy", cache=True)
def near_charges(
    corners: Floats,
    pairs: Ints,
    kinds: Ints,
    image: tuple[float, float],
    rules: tuple[Floats, Ints],
    charges: Floats,
) -> None:
    """Near terms of the charges of pairs of triangles, the second at its image.

    Parameters
    ----------
    corners, pairs, kinds, rules
        As `near_terms` takes them.
    image : tuple of (float, float)
        Turn and shift: heights of an image are turn z + shift, m.
    charges : (p,) ndarray of float
        Written: means of 1/R, less their coarse sums, 1/m.
    """
    points, starts = rules
    coarse = points[: starts[1]]
    source, normal, point = np.empty((3, 3)), np.empty(3), np.empty(3)
    for p in range(pairs.shape[0]):
        test = corners[pairs[p, 0]]
        for i in range(3):
            source[i, 0] = corners[pairs[p, 1], i, 0]
            source[i, 1] = corners[pairs[p, 1], i, 1]
            source[i, 2] = image[0] * corners[pairs[p, 1], i, 2] + image[1]
        rule = points[starts[kinds[p]] : starts[kinds[p] + 1]]
        if kinds[p] >= 2:
            mean = 0.5 * _mean_potential(test, source, rule, normal, point)
            mean += 0.5 * _mean_potential(source, test, rule, normal, point)
        else:
            mean = _mean_inverse(test, source, rule)
        charges[p] = mean - _mean_inverse(test, source, coarse)
