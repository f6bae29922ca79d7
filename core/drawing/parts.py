"""The parts that a builder cuts: what belongs together is one part, equal ones are counted."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import atan, atan2, copysign, cos, hypot, isclose, pi, sin
from typing import TYPE_CHECKING

from core.drawing.sheet import Box
from core.layout.build import mirrored_drawing, top_copper
from core.layout.model import Dimension, Hole, Layout, Mark, Piece, Role
from core.shapes.booleans import union
from core.shapes.outline import Outline, Region, arc_centre, polygon

if TYPE_CHECKING:
    from collections.abc import Iterable

_SAME = 1e-9  # m


@dataclass(frozen=True)
class Part:
    """One thing to cut, seen from the radiating side unless it is mirrored.

    Attributes
    ----------
    name : str
    role : Role
    regions : tuple of Region
        m.
    holes : tuple of Hole
    marks : tuple of Mark
    dimensions : tuple of Dimension
    material : str
    thickness : float
        m.
    quantity : int
    """

    name: str
    role: Role
    regions: tuple[Region, ...]
    holes: tuple[Hole, ...]
    marks: tuple[Mark, ...]
    dimensions: tuple[Dimension, ...]
    material: str
    thickness: float
    quantity: int = 1

    @property
    def box(self) -> Box:
        """Bounds of the outline, m."""
        return bounds(self.regions)

    @property
    def area(self) -> float:
        """Of one of them, without its holes, m²."""
        return float(sum(polygon(region).area for region in self.regions))


def parts(layout: Layout, mirrored: bool = False) -> tuple[Part, ...]:
    """Parts of a layout: top copper, ground plate, then spacers from the ground up.

    Parameters
    ----------
    layout : Layout
    mirrored : bool
        As seen from behind.

    Returns
    -------
    tuple of Part
        Without what is not cut, such as air.
    """
    shown = mirrored_drawing(layout) if mirrored else layout
    copper = [piece for piece in shown.pieces if piece.role is Role.TOP_COPPER]
    ground = [piece for piece in shown.pieces if piece.role is Role.GROUND_COPPER]
    spacers = [piece for piece in shown.pieces if piece.role is Role.SPACER and piece.cut]
    found = [
        _part(shown, copper, top_copper(shown), on_ground=False),
        *(_part(shown, [piece], _with_flaps(piece), on_ground=True) for piece in ground),
    ]
    for piece in spacers:
        part = _part(shown, [piece], (piece.region,), on_ground=None)
        for i, other in enumerate(found):
            if _same_but_for_names(part, other):
                name = f"{other.name}, {part.name}"
                found[i] = replace(other, name=name, quantity=other.quantity + 1)
                break
        else:
            found.append(part)
    return tuple(found)


def _with_flaps(piece: Piece) -> tuple[Region, ...]:
    """Piece as it is cut, before its flaps are turned over."""
    return union([piece.region, *piece.flaps]) if piece.flaps else (piece.region,)


def bounds(regions: Iterable[Region]) -> Box:
    """Bounds of regions.

    Parameters
    ----------
    regions : iterable of Region
        At least one.

    Returns
    -------
    Box
        m.
    """
    points = [point for region in regions for point in _outermost(region.exterior)]
    across, along = zip(*points, strict=True)
    return Box(min(across), min(along), max(across), max(along))


def disc_diameter(region: Region) -> float | None:
    """Diameter of a region that is a disc, holes or not.

    Parameters
    ----------
    region : Region

    Returns
    -------
    float or None
        m; None for any other outline.
    """
    circle = _circle(region.exterior)
    return None if circle is None else circle[2]


def is_opening(hole: Hole, regions: Iterable[Region]) -> bool:
    """Tell whether a hole already is a round opening of one of the regions.

    Parameters
    ----------
    hole : Hole
    regions : iterable of Region

    Returns
    -------
    bool
    """
    return any(_is_circle(ring, hole) for region in regions for ring in region.holes)


def _is_circle(ring: Outline, hole: Hole) -> bool:
    circle = _circle(ring)
    wanted = (hole.x, hole.y, hole.diameter)
    return circle is not None and all(
        isclose(a, b, abs_tol=_SAME) for a, b in zip(circle, wanted, strict=True)
    )


def _circle(ring: Outline) -> tuple[float, float, float] | None:
    """Centre and diameter of an outline of two half turns."""
    if [abs(vertex.bulge) for vertex in ring.vertices] != [1.0, 1.0]:
        return None
    a, b = ring.vertices
    return (a.x + b.x) / 2, (a.y + b.y) / 2, hypot(b.x - a.x, b.y - a.y)


def _outermost(ring: Outline) -> list[tuple[float, float]]:
    """Corners of an outline, and where its arcs reach farthest along x and y."""
    points = [(vertex.x, vertex.y) for vertex in ring.vertices]
    for start, end in zip(ring.vertices, (*ring.vertices[1:], ring.vertices[0]), strict=True):
        if start.bulge == 0.0:
            continue
        x, y, radius = arc_centre(start, end)
        turn = 4.0 * atan(start.bulge)
        begin = atan2(start.y - y, start.x - x)
        for quarter in range(4):
            ahead = (quarter * pi / 2 - begin) * copysign(1.0, turn) % (2 * pi)
            if ahead <= abs(turn):
                way = quarter * pi / 2
                points.append((x + radius * cos(way), y + radius * sin(way)))
    return points


def _part(
    layout: Layout, pieces: list[Piece], regions: tuple[Region, ...], on_ground: bool | None
) -> Part:
    """Part of pieces that are one; `on_ground` tells which dimensions it shows, None for none."""
    names = {piece.name for piece in pieces}
    first = pieces[0]
    return Part(
        " and ".join(piece.name for piece in pieces),
        first.role,
        regions,
        tuple(hole for hole in layout.holes if names & set(hole.through)),
        tuple(mark for mark in layout.marks if mark.piece in names),
        tuple(
            dimension
            for dimension in layout.dimensions
            if dimension.field.startswith("stock.ground") is on_ground
        ),
        first.material,
        first.thickness,
    )


def _same_but_for_names(a: Part, b: Part) -> bool:
    """Tell whether two parts can be cut from one drawing and the same stock."""

    def form(part: Part) -> tuple[object, ...]:
        marks = tuple((mark.kind, mark.points, mark.diameter) for mark in part.marks)
        return (part.role, part.regions, part.holes, marks, part.material, part.thickness)

    return form(a) == form(b)
