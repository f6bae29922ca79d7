"""Closed outlines made of straight edges and true circular arcs.

An outline is a closed chain of vertices. Each vertex carries the bulge of the edge to
the next one: the tangent of a quarter of the arc's angle, positive for a
counter-clockwise arc, 0 for a straight edge. Lengths are in metres.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import acos, atan, ceil, hypot, pi, sin, sqrt, tan
from typing import TYPE_CHECKING

import numpy as np
import shapely

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

SAGITTA = 5e-6
"""Largest distance between an arc and the facets that stand for it, m."""


@dataclass(frozen=True)
class Vertex:
    """A corner of an outline, with the bulge of the edge to the next corner.

    Attributes
    ----------
    x, y : float
        m.
    bulge : float
        Tangent of a quarter of the arc's angle; 0 is a straight edge.
    """

    x: float
    y: float
    bulge: float = 0.0


@dataclass(frozen=True)
class Outline:
    """A closed chain of straight edges and arcs, counter-clockwise.

    Attributes
    ----------
    vertices : tuple of Vertex
        At least two; two with bulge 1 make a circle.
    """

    vertices: tuple[Vertex, ...]


@dataclass(frozen=True)
class Region:
    """An area: an outer outline and the holes in it.

    Attributes
    ----------
    exterior : Outline
    holes : tuple of Outline
    """

    exterior: Outline
    holes: tuple[Outline, ...] = ()


def rectangle(width: float, length: float, centre: tuple[float, float] = (0.0, 0.0)) -> Outline:
    """Rectangle, `width` along x and `length` along y, about `centre`.

    Parameters
    ----------
    width, length : float
        m, > 0.
    centre : tuple of float
        m.

    Returns
    -------
    Outline
    """
    x, y = centre
    half_x, half_y = width / 2, length / 2
    return polyline(
        [
            (x - half_x, y - half_y),
            (x + half_x, y - half_y),
            (x + half_x, y + half_y),
            (x - half_x, y + half_y),
        ]
    )


def circle(diameter: float, centre: tuple[float, float] = (0.0, 0.0)) -> Outline:
    """Full circle as two half-turn arcs.

    Parameters
    ----------
    diameter : float
        m, > 0.
    centre : tuple of float
        m.

    Returns
    -------
    Outline
    """
    x, y = centre
    return Outline((Vertex(x - diameter / 2, y, 1.0), Vertex(x + diameter / 2, y, 1.0)))


def polyline(points: Iterable[tuple[float, float]]) -> Outline:
    """Closed outline of straight edges through `points` (m), without a repeated last point.

    Parameters
    ----------
    points : iterable of (float, float)
        m.

    Returns
    -------
    Outline
    """
    return Outline(tuple(Vertex(x, y) for x, y in points))


def mirrored(region: Region) -> Region:
    """Mirror a region in the y axis (x to -x), kept counter-clockwise.

    Parameters
    ----------
    region : Region

    Returns
    -------
    Region
    """
    return Region(
        _mirrored_outline(region.exterior), tuple(_mirrored_outline(hole) for hole in region.holes)
    )


def arc_centre(start: Vertex, end: Vertex) -> tuple[float, float, float]:
    """Centre and radius of the arc from `start` to `end`.

    Parameters
    ----------
    start, end : Vertex
        `start.bulge` must not be 0.

    Returns
    -------
    x, y, radius : float
        m; the radius is positive.
    """
    chord_x, chord_y = end.x - start.x, end.y - start.y
    chord = hypot(chord_x, chord_y)
    angle = 4.0 * atan(start.bulge)
    radius = chord / (2.0 * sin(abs(angle) / 2.0))
    # Distance from the chord's middle to the centre, along the chord's left normal.
    offset = chord / (2.0 * tan(angle / 2.0)) if abs(abs(angle) - pi) > 1e-12 else 0.0
    middle_x, middle_y = (start.x + end.x) / 2.0, (start.y + end.y) / 2.0
    return middle_x - chord_y / chord * offset, middle_y + chord_x / chord * offset, radius


def facets(outline: Outline, sagitta: float = SAGITTA) -> list[tuple[float, float]]:
    """Points of a polygon that stands for the outline and has exactly its area.

    Ends of arcs stay where they are; the points between them lie a hair outside the arc,
    so that the facets enclose the area of the arc.

    Parameters
    ----------
    outline : Outline
    sagitta : float
        Largest distance between arc and facets, m, > 0.

    Returns
    -------
    list of (float, float)
        m, not closed (the first point is not repeated).
    """
    return [(x, y) for x, y in facet_points(outline, sagitta).tolist()]


def facet_points(outline: Outline, sagitta: float = SAGITTA) -> NDArray[np.float64]:
    """The points of `facets` as an array.

    Parameters
    ----------
    outline : Outline
    sagitta : float
        Largest distance between arc and facets, m, > 0.

    Returns
    -------
    (n, 2) ndarray of float
        m, not closed.
    """
    ring = outline.vertices
    corners = np.array([(corner.x, corner.y) for corner in ring])
    parts, done = [], 0
    for i, corner in enumerate(ring):
        if corner.bulge != 0.0:
            parts += [
                corners[done : i + 1],
                _arc_points(corner, ring[(i + 1) % len(ring)], sagitta),
            ]
            done = i + 1
    return np.concatenate([*parts, corners[done:]]) if parts else corners


def polygon(region: Region, sagitta: float = SAGITTA) -> shapely.Polygon:
    """Shapely polygon of a region, arcs as facets of equal area.

    Parameters
    ----------
    region : Region
    sagitta : float
        Largest distance between arc and facets, m, > 0.

    Returns
    -------
    shapely.Polygon
        Coordinates in m.
    """
    return shapely.Polygon(
        facet_points(region.exterior, sagitta),
        [facet_points(hole, sagitta) for hole in region.holes],
    )


def _arc_points(start: Vertex, end: Vertex, sagitta: float) -> NDArray[np.float64]:
    """Points between the ends of an arc, on the radius that keeps the sector's area; (n, 2)."""
    x, y, radius = arc_centre(start, end)
    angle = 4.0 * atan(start.bulge)
    step = 2.0 * acos(max(0.0, 1.0 - min(sagitta, radius) / radius))
    count = max(2, ceil(abs(angle) / step))
    between = _equal_area_radius(radius, abs(angle), count)
    first = _direction(start.x - x, start.y - y)
    turn = angle * np.arange(1, count) / count
    c, s = np.cos(turn), np.sin(turn)
    points = np.empty((count - 1, 2))
    points[:, 0] = x + between * (first[0] * c - first[1] * s)
    points[:, 1] = y + between * (first[0] * s + first[1] * c)
    return points


def _equal_area_radius(radius: float, angle: float, count: int) -> float:
    """Radius r' of the inner points: sin(d)/2 [2 r r' + (n-2) r'^2] = r^2 angle / 2."""
    target = radius**2 * angle / sin(angle / count)
    if count == 2:
        return target / (2.0 * radius)
    quadratic = count - 2
    return (-radius + sqrt(radius**2 + quadratic * target)) / quadratic


def _direction(x: float, y: float) -> tuple[float, float]:
    length = hypot(x, y)
    return x / length, y / length


def _mirrored_outline(outline: Outline) -> Outline:
    """Mirror x and reverse the order, so that the chain stays counter-clockwise."""
    ring = outline.vertices
    # Reversed, the edge leaving vertex i is the old edge arriving at it, run backwards: mirror
    # and reversal each flip the bulge's sign, so it is kept.
    return Outline(
        tuple(Vertex(-ring[i].x, ring[i].y, ring[i - 1].bulge) for i in reversed(range(len(ring))))
    )
