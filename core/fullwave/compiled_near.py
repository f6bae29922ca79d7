"""Compiled near terms: 1/R and R between triangles close together, as point sums miss them.

Where triangles touch or nearly so the integral over the source triangle is exact [1]_ [2]_
and the one over the test triangle is a point sum, taken with each triangle as the source in
turn and averaged. Otherwise both are point sums. The coarse 3 x 3 sum that the matrix fill
makes anyway is taken off.

What is summed of a kernel K is called its moments: K, K r, K r' and K r.r' with test point r
and source point r', both from the middle of the test triangle.

Shapes: t triangles, p pairs, q points of the outer rule.

References
----------
.. [1] D. R. Wilton, S. M. Rao, A. W. Glisson, D. H. Schaubert, O. M. Al-Bundak, C. M. Butler,
   "Potential integrals for uniform and linear source distributions on polygonal and
   polyhedral domains", IEEE Trans. Antennas Propag. 32(3), 1984, 276-281.
.. [2] R. D. Graglia, "On the numerical integration of the linear shape functions times the 3-D
   Green's function or its gradient on a plane triangle", IEEE Trans. Antennas Propag. 41(10),
   1993, 1448-1455.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numba import njit

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

_TINY = 1e-300
_NEAR = 1.8  # distance of middles, in sums of both triangles' radii, within which terms are near
_CLOSE = 0.6  # distance of marks, in longest edges, within which the source is integrated exactly
_FAST = {"contract", "nnan", "ninf", "nsz", "arcp"}  # sums keep their order


@njit(error_model="numpy", cache=True)
def line_log(low: float, high: float, r_low: float, r_high: float) -> float:
    """Integral of 1/R along a segment: log((R+ + s+) / (R- + s-)), without cancellation.

    Parameters
    ----------
    low, high : float
        Where it starts and ends, along itself, from the foot of the point, m.
    r_low, r_high : float
        Distances of its ends from the point, m.

    Returns
    -------
    float
    """
    if low + high >= 0.0:
        return float(np.log((r_high + high) / max(r_low + low, _TINY)))
    return float(np.log((r_low - low) / max(r_high - high, _TINY)))


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _lay_edges(corners: Floats, normal: Floats, out: Floats) -> None:
    """Write for each edge of a triangle (3, 7): its way, the way out across it, its length."""
    for i in range(3):
        one, two, edge = corners[i], corners[(i + 1) % 3], out[i]
        ax, ay, az = two[0] - one[0], two[1] - one[1], two[2] - one[2]
        length = np.sqrt(ax * ax + ay * ay + az * az)
        ax, ay, az = ax / length, ay / length, az / length
        edge[0], edge[1], edge[2] = ax, ay, az
        edge[3] = ay * normal[2] - az * normal[1]
        edge[4] = az * normal[0] - ax * normal[2]
        edge[5] = ax * normal[1] - ay * normal[0]
        edge[6] = length


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _add_edge(
    one: Floats,
    edge: Floats,
    radii: tuple[float, float],
    foot: Floats,
    height: float,
    out: Floats,
) -> float:
    """Add what one edge of the source triangle gives; return its part of the solid angle."""
    length, (r_low, r_high) = edge[6], radii
    mx, my, mz = edge[3], edge[4], edge[5]
    dx, dy, dz = one[0] - foot[0], one[1] - foot[1], one[2] - foot[2]
    low = edge[0] * dx + edge[1] * dy + edge[2] * dz
    high = low + length
    away = mx * dx + my * dy + mz * dz
    squared = away * away + height * height
    line_1 = line_log(low, high, r_low, r_high) if squared > 1e-24 * length * length else 0.0
    line1 = 0.5 * (high * r_high - low * r_low + squared * line_1)
    line3 = 0.25 * (high * r_high**3 - low * r_low**3 + 3.0 * squared * line1)
    out[0] += mx * line1
    out[1] += my * line1
    out[2] += mz * line1
    out[3] += away * line_1
    out[4] += mx * line3 / 3.0
    out[5] += my * line3 / 3.0
    out[6] += mz * line3 / 3.0
    out[7] += away * line1 / 3.0
    if abs(height) < 1e-12 * length:
        return 0.0
    over = squared + abs(height) * r_high
    under = squared + abs(height) * r_low
    # One arc tangent for the difference of two, which lie within a quarter turn each.
    return float(
        np.arctan2(away * (high * under - low * over), over * under + away * away * high * low)
    )


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _source_integrals(
    point: Floats, corners: Floats, normal: Floats, edges: Floats, out: Floats
) -> None:
    """Integrals over a triangle, seen from a point.

    out[0:3], out[3]: (r' - f)/R and 1/R; out[4:7], out[7]: (r' - f) R and R; out[8:11]: f,
    the foot of the point in the triangle's plane.
    """
    out[:] = 0.0
    height = 0.0
    for axis in range(3):
        height += normal[axis] * (point[axis] - corners[0, axis])
    for axis in range(3):
        out[8 + axis] = point[axis] - height * normal[axis]
    first = _distance(point, corners[0])
    second, third = _distance(point, corners[1]), _distance(point, corners[2])
    foot = out[8:11]
    angle = _add_edge(corners[0], edges[0], (first, second), foot, height, out)
    angle += _add_edge(corners[1], edges[1], (second, third), foot, height, out)
    angle += _add_edge(corners[2], edges[2], (third, first), foot, height, out)
    out[3] -= abs(height) * angle
    out[7] += height * height * out[3] / 3.0


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _distance(one: Floats, two: Floats) -> float:
    dx, dy, dz = one[0] - two[0], one[1] - two[1], one[2] - two[2]
    return float(np.sqrt(dx * dx + dy * dy + dz * dz))


@njit(error_model="numpy", cache=True)
def normal_of(corners: Floats, out: Floats) -> float:
    """Write a triangle's unit normal.

    Parameters
    ----------
    corners : (3, 3) ndarray of float
        m.
    out : (3,) ndarray of float
        Written.

    Returns
    -------
    float
        Twice the area, m².
    """
    x1, y1, z1 = (
        corners[1, 0] - corners[0, 0],
        corners[1, 1] - corners[0, 1],
        corners[1, 2] - corners[0, 2],
    )
    x2, y2, z2 = (
        corners[2, 0] - corners[0, 0],
        corners[2, 1] - corners[0, 1],
        corners[2, 2] - corners[0, 2],
    )
    out[0] = y1 * z2 - z1 * y2
    out[1] = z1 * x2 - x1 * z2
    out[2] = x1 * y2 - y1 * x2
    twice = np.sqrt(out[0] ** 2 + out[1] ** 2 + out[2] ** 2)
    for axis in range(3):
        out[axis] /= twice
    return float(twice)


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _add_exact(
    test: Floats, source: Floats, rule: Floats, weight: float, work: Floats, moments: Floats
) -> None:
    """Add mean moments of 1/R and R (2, 8): test points by rule, source exact."""
    point, seen, normal = work[0:3], work[3:14], work[14:17]
    edges = work[17:38].reshape(3, 7)
    twice = normal_of(source, normal)
    _lay_edges(source, normal, edges)
    for q in range(rule.shape[0]):
        for axis in range(3):
            point[axis] = (
                rule[q, 0] * test[0, axis] + rule[q, 1] * test[1, axis] + rule[q, 2] * test[2, axis]
            )
        _source_integrals(point, source, normal, edges, seen)
        scale = weight * rule[q, 3] * 2.0 / twice
        for term in range(2):
            total = scale * seen[4 * term + 3]
            moments[term, 0] += total
            for axis in range(3):
                arm = scale * seen[4 * term + axis] + seen[8 + axis] * total
                moments[term, 1 + axis] += point[axis] * total
                moments[term, 4 + axis] += arm
                moments[term, 7] += point[axis] * arm


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _spread(corners: Floats, rule: Floats, out: Floats) -> None:
    """Write the rule's points in a triangle, axis by axis."""
    for axis in range(3):
        a, b, c = corners[0, axis], corners[1, axis], corners[2, axis]
        for q in range(rule.shape[0]):
            out[axis, q] = rule[q, 0] * a + rule[q, 1] * b + rule[q, 2] * c


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _kernels(
    x: float, y: float, z: float, points: Floats, rule: Floats, over: Floats, far: Floats
) -> None:
    """Write 1/R and R from a place to points times their weights; nothing at R = 0."""
    px, py, pz = points[0], points[1], points[2]
    for j in range(rule.shape[0]):
        dx, dy, dz = px[j] - x, py[j] - y, pz[j] - z
        distance = np.sqrt(dx * dx + dy * dy + dz * dz)
        over[j] = 1.0 / distance if distance > 0.0 else 0.0
        far[j] = distance
    for j in range(rule.shape[0]):
        over[j] *= rule[j, 3]
        far[j] *= rule[j, 3]


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _add_point(
    place: tuple[float, float, float],
    share: float,
    points: Floats,
    kernel: Floats,
    count: int,
    moments: Floats,
) -> None:
    """Add mean moments (8) of a kernel (q) at one test point."""
    px, py, pz = points[0], points[1], points[2]
    total = u = v = w = 0.0
    for j in range(count):
        total += kernel[j]
        u += kernel[j] * px[j]
        v += kernel[j] * py[j]
        w += kernel[j] * pz[j]
    x, y, z = place
    moments[0] += share * total
    moments[1] += share * total * x
    moments[2] += share * total * y
    moments[3] += share * total * z
    moments[4] += share * u
    moments[5] += share * v
    moments[6] += share * w
    moments[7] += share * (x * u + y * v + z * w)


@njit(error_model="numpy", fastmath=_FAST, cache=True)
def _add_points(
    test: Floats,
    source: Floats,
    rule: Floats,
    weight: float,
    work: tuple[Floats, Floats, Floats],
    moments: Floats,
) -> None:
    """Add mean moments of 1/R and R (2, 8) by points over both triangles; nothing at R = 0."""
    here, there, kernels = work
    over, far = kernels[0], kernels[1]
    n = rule.shape[0]
    _spread(test, rule, here)
    _spread(source, rule, there)
    for i in range(n):
        place, share = (here[0, i], here[1, i], here[2, i]), weight * rule[i, 3]
        _kernels(place[0], place[1], place[2], there, rule, over, far)
        _add_point(place, share, there, over, n, moments[0])
        _add_point(place, share, there, far, n, moments[1])


@njit(error_model="numpy", cache=True)
def _pair_moments(
    test: Floats,
    source: Floats,
    rule: Floats,
    coarse: Floats,
    exact: bool,
    points: tuple[Floats, Floats, Floats],
    moments: Floats,
) -> None:
    """Mean moments of 1/R and R less their coarse sums."""
    moments[:] = 0.0
    if exact:
        work, turned = np.empty(38), np.zeros((2, 8))
        _add_exact(test, source, rule, 0.5, work, moments)
        _add_exact(source, test, rule, 0.5, work, turned)
        for term in range(2):
            moments[term, 0] += turned[term, 0]
            moments[term, 7] += turned[term, 7]
            for axis in range(3):
                moments[term, 1 + axis] += turned[term, 4 + axis]
                moments[term, 4 + axis] += turned[term, 1 + axis]
    else:
        _add_points(test, source, rule, 1.0, points, moments)
    _add_points(test, source, coarse, -1.0, points, moments)


@njit(error_model="numpy", cache=True)
def _kind(t: int, s: int, triangles: Ints, marks: Floats, longest: float) -> int:
    """How close two triangles are: 1 apart, 2 touching or nearly, 3 sharing an edge, 4 the same."""
    shared = 0
    for a in range(3):
        for b in range(3):
            if triangles[t, a] == triangles[s, b]:
                shared += 1
    if shared > 0:
        return 1 + shared
    reach = (_CLOSE * longest) ** 2
    for a in range(6):
        for b in range(6):
            squared = 0.0
            for axis in range(3):
                squared += (marks[t, a, axis] - marks[s, b, axis]) ** 2
            if squared < reach:
                return 2
    return 1


@njit(error_model="numpy", cache=True)
def find_near(corners: Floats, triangles: Ints) -> tuple[Ints, Ints, Ints]:
    """Pairs of triangles that the coarse sum over points is not enough for.

    Parameters
    ----------
    corners : (t, 3, 3) ndarray of float
        m.
    triangles : (t, 3) ndarray of int
        Vertices of each.

    Returns
    -------
    starts : (t + 1,) ndarray of int
        Where the partners of each triangle start.
    partners : (p,) ndarray of int
        The triangle itself and later ones near it.
    kinds : (p,) ndarray of int
        How close, as `near_terms` takes it.
    """
    count = corners.shape[0]
    middles, marks = np.zeros((count, 3)), np.empty((count, 6, 3))
    radii, longest = np.zeros(count), np.zeros(count)
    for t in range(count):
        for axis in range(3):
            middles[t, axis] = corners[t, :, axis].mean()
        for i in range(3):
            j = (i + 1) % 3
            marks[t, i] = corners[t, i]
            marks[t, 3 + i] = (corners[t, i] + corners[t, j]) / 2.0
            radii[t] = max(radii[t], np.sqrt(np.sum((corners[t, i] - middles[t]) ** 2)))
            longest[t] = max(longest[t], np.sqrt(np.sum((corners[t, i] - corners[t, j]) ** 2)))
    starts = np.zeros(count + 1, dtype=np.int64)
    partners, kinds = [0][:0], [0][:0]
    for t in range(count):
        for s in range(t, count):
            reach = _NEAR * (radii[t] + radii[s])
            dx, dy = middles[t, 0] - middles[s, 0], middles[t, 1] - middles[s, 1]
            dz = middles[t, 2] - middles[s, 2]
            if dx * dx + dy * dy + dz * dz < reach * reach:
                partners.append(s)
                kinds.append(_kind(t, s, triangles, marks, max(longest[t], longest[s])))
        starts[t + 1] = len(partners)
    return starts, np.array(partners), np.array(kinds)


@njit(nogil=True, error_model="numpy", cache=True)
def near_terms(
    corners: Floats,
    pairs: Ints,
    kinds: Ints,
    lift: float,
    rules: tuple[Floats, Ints],
    currents: Floats,
    charges: Floats,
    turn: float = 1.0,
) -> None:
    """Near terms of pairs of triangles.

    Parameters
    ----------
    corners : (t, 3, 3) ndarray of float
        m.
    pairs : (p, 2) ndarray of int
    kinds : (p,) ndarray of int
        Which rule to take; those from 2 up integrate the source exactly.
    lift : float
        What the second triangle of each pair is raised by, m: for an image of it.
    rules : tuple
        Shares of the corners and weight of each point (q, 4), rule after rule, and where
        each starts (r + 1,); rule 0 is that of the matrix fill.
    currents : (p, 2, 3, 3) ndarray of float
        Written: means of (r - p_a).(r' - p_b) K for K = 1/R and R, less their coarse sums,
        m and m³.
    charges : (p, 2) ndarray of float
        Written: means of K, less their coarse sums, 1/m and m.
    turn : float
        What the heights of the second triangle are multiplied by before it is raised.
    """
    points, starts = rules
    test, source, middle = np.empty((3, 3)), np.empty((3, 3)), np.empty(3)
    moments, most = np.empty((2, 8)), points.shape[0]
    work = np.empty((3, most)), np.empty((3, most)), np.empty((2, most))
    for p in range(pairs.shape[0]):
        own = corners[pairs[p, 0]]
        for axis in range(3):
            middle[axis] = (own[0, axis] + own[1, axis] + own[2, axis]) / 3.0
            for i in range(3):
                test[i, axis] = own[i, axis] - middle[axis]
                source[i, axis] = corners[pairs[p, 1], i, axis] - middle[axis]
        for i in range(3):
            source[i, 2] = turn * corners[pairs[p, 1], i, 2] + lift - middle[2]
        rule = points[starts[kinds[p]] : starts[kinds[p] + 1]]
        coarse = points[: starts[1]]
        _pair_moments(test, source, rule, coarse, kinds[p] >= 2, work, moments)
        for term in range(2):
            m = moments[term]
            charges[p, term] = m[0]
            for a in range(3):
                for b in range(3):
                    value = m[7]
                    for axis in range(3):
                        value -= test[a, axis] * m[4 + axis] + source[b, axis] * m[1 + axis]
                        value += test[a, axis] * source[b, axis] * m[0]
                    currents[p, term, a, b] = value
