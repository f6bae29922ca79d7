"""Union and growth of regions through shapely, with true arcs put back afterwards."""

from __future__ import annotations

from dataclasses import dataclass
from math import atan2, copysign, hypot, pi, tan
from typing import TYPE_CHECKING

import numpy as np
import shapely
from shapely.geometry.polygon import orient

from core.errors import LayoutError
from core.shapes.outline import (
    SAGITTA,
    Outline,
    Region,
    Vertex,
    arc_centre,
    facet_points,
    polygon,
)
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

_COLLINEAR = 1e-6  # rad
_FINE = SAGITTA / 50.0  # facets for the union alone: ends of arcs come out this true
_NEAR = 4.0  # times the growth: a corner that fills up lies nearer than this to an open gap
_GRID_DECIMALS = 10  # of a metre
_ON_CIRCLE = 4.0 * _FINE  # equal-area points lie within one sagitta of their circle


@dataclass(frozen=True)
class _Circle:
    x: float
    y: float
    radius: float

    def carries(self, points: NDArray[np.float64]) -> NDArray[np.bool_]:
        """Tell which points, shape (n, 2), lie on the circle, to the accuracy of the facets."""
        away = np.hypot(points[:, 0] - self.x, points[:, 1] - self.y)
        return np.asarray(np.abs(away - self.radius) < _ON_CIRCLE)


def union(regions: Sequence[Region]) -> tuple[Region, ...]:
    """Union of regions as connected regions, largest first, arcs kept.

    Parameters
    ----------
    regions : sequence of Region
        At least one.

    Returns
    -------
    tuple of Region

    Raises
    ------
    LayoutError
        If no valid area is left.
    """
    pieces = [_polygon_on_grid(region) for region in regions]
    refusal = "the pieces do not add up to a valid outline"
    if not np.all(shapely.is_valid(pieces)):  # an outline that crosses itself
        raise LayoutError(refusal)
    merged = shapely.transform(shapely.union_all(pieces), _on_grid)
    merged = shapely.remove_repeated_points(merged)
    parts = [part for part in shapely.get_parts(merged) if isinstance(part, shapely.Polygon)]
    if not parts or not merged.is_valid:
        raise LayoutError(refusal)
    circles = tuple({circle for region in regions for circle in _circles(region)})
    parts.sort(key=lambda part: -part.area)
    return tuple(_with_arcs(part, circles) for part in parts)


def _polygon_on_grid(region: Region) -> shapely.Polygon:
    """Polygon with its corners on a grid of 0.1 nm, so that those that are meant to meet do.

    A union that looks for crossings on the grid gives the same in eight times the time.
    """
    rings = [_on_grid(facet_points(ring, _FINE)) for ring in (region.exterior, *region.holes)]
    return shapely.Polygon(rings[0], rings[1:])


def _on_grid(points: NDArray[np.float64]) -> NDArray[np.float64]:
    return np.round(points, _GRID_DECIMALS)


def grown(regions: Sequence[Region], by: float) -> tuple[Region, ...]:
    """Regions grown by the same distance on every side, corners kept sharp, arcs kept.

    Parameters
    ----------
    regions : sequence of Region
        At least one.
    by : float
        m, >= 0.

    Returns
    -------
    tuple of Region
        Connected regions, largest first.

    Raises
    ------
    LayoutError
        If growth closes a gap; the message says where.
    """
    if by == 0.0:
        return tuple(regions)
    _refuse_closed_gaps(regions, by)
    copper = shapely.union_all([polygon(region, _FINE) for region in regions])
    parts = list(shapely.get_parts(copper.buffer(by, join_style="mitre")))
    circles = tuple({circle for region in regions for circle in _circles(region, by)})
    parts.sort(key=lambda part: -part.area)
    return tuple(_with_arcs(part, circles) for part in parts)


def _refuse_closed_gaps(regions: Sequence[Region], by: float) -> None:
    """Refuse growth after which some gap is far from every gap that is left.

    Sharp inner corners fill up a little too, but next to a gap that stays open.
    """
    copper = shapely.union_all([polygon(region) for region in regions])
    room = shapely.box(*copper.bounds).buffer(8.0 * by, join_style="mitre")
    gaps = room.difference(copper)
    left = gaps.buffer(-by, join_style="mitre").buffer((1.0 + _NEAR) * by)
    lost = gaps.difference(left)
    if not lost.is_empty:
        place = max(shapely.get_parts(lost), key=lambda part: part.area).representative_point()
        size, x, y = (format_quantity(v, Quantity.LENGTH) for v in (by, place.x, place.y))
        raise LayoutError(
            f"copper grown by {size} on every side closes the gap at x {x}, y {y}; "
            "accepted: less than half of the gap",
            field="making.undercut",
        )


def _circles(region: Region, by: float = 0.0) -> list[_Circle]:
    """All circles that arcs of the region lie on once it has grown."""
    found = []
    for outline, outwards in ((region.exterior, 1.0), *((hole, -1.0) for hole in region.holes)):
        ring = outline.vertices
        for start, end in zip(ring, (*ring[1:], ring[0]), strict=True):
            if start.bulge != 0.0:
                x, y, radius = arc_centre(start, end)
                radius += copysign(by, start.bulge * outwards)
                if radius > 0.0:
                    found.append(_Circle(x, y, radius))
    return found


def _with_arcs(part: shapely.Polygon, circles: tuple[_Circle, ...]) -> Region:
    """Region of a faceted polygon, runs of facets on known circles turned into arcs."""
    part = orient(part)
    return Region(
        _outline_with_arcs(shapely.get_coordinates(part.exterior)[:-1], circles),
        tuple(
            _outline_with_arcs(shapely.get_coordinates(ring)[:-1][::-1], circles)
            for ring in part.interiors
        ),
    )


def _outline_with_arcs(points: NDArray[np.float64], circles: tuple[_Circle, ...]) -> Outline:
    """Outline through points, shape (n, 2), in their order."""
    owners = _owners(points, circles)
    if owners[0] >= 0 and np.all(owners == owners[0]):
        circle = circles[owners[0]]
        return Outline(
            (
                Vertex(circle.x - circle.radius, circle.y, 1.0),
                Vertex(circle.x + circle.radius, circle.y, 1.0),
            )
        )
    # A run that goes on over the seam starts before it, so that no arc is cut there.
    starts = np.flatnonzero((owners < 0) | (owners != np.roll(owners, 1)))
    seconds = points[(starts + 1) % len(points)].tolist()
    runs, corners = owners[starts].tolist(), points[starts].tolist()
    vertices = []
    for owner, here, second, end in zip(
        runs, corners, seconds, corners[1:] + corners[:1], strict=True
    ):
        bulge = 0.0 if owner < 0 else _bulge(here, second, end, circles[owner])
        vertices.append(Vertex(here[0], here[1], bulge))
    return Outline(_without_straight_corners(vertices))


def _without_straight_corners(ring: list[Vertex]) -> tuple[Vertex, ...]:
    """Drop the corners between two straight edges of one direction that a union leaves behind."""
    kept = []
    for i, here in enumerate(ring):
        before, after = ring[i - 1], ring[(i + 1) % len(ring)]
        into, out = (here.x - before.x, here.y - before.y), (after.x - here.x, after.y - here.y)
        turn = abs(into[0] * out[1] - into[1] * out[0])
        straight = turn <= _COLLINEAR * hypot(*into) * hypot(*out)
        if before.bulge != 0.0 or here.bulge != 0.0 or not straight:
            kept.append(here)
    return tuple(kept)


def _owners(points: NDArray[np.float64], circles: tuple[_Circle, ...]) -> NDArray[np.intp]:
    """Number of the circle that the facet from each point to the next stands for; -1 for none."""
    ring = np.concatenate([points, points[:1]])
    middles = (ring[:-1] + ring[1:]) / 2.0
    owners = np.full(len(points), -1)
    for number in reversed(range(len(circles))):  # so that the first of several stands
        on = circles[number].carries(ring)
        owners[on[:-1] & on[1:] & circles[number].carries(middles)] = number
    return owners


def _bulge(
    start: Sequence[float], second: Sequence[float], end: Sequence[float], on: _Circle
) -> float:
    """Bulge of the arc from start to end that sets out towards `second`."""
    begin = atan2(start[1] - on.y, start[0] - on.x)
    way = atan2(second[1] - on.y, second[0] - on.x) - begin
    whole = atan2(end[1] - on.y, end[0] - on.x) - begin
    counter_clockwise = (way + pi) % (2 * pi) - pi > 0.0
    turn = whole % (2 * pi) if counter_clockwise else -(-whole % (2 * pi))
    return tan(turn / 4.0)
