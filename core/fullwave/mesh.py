"""From a Layout to one connected triangle mesh of its copper: top, ground plate and probe."""

from __future__ import annotations

from enum import Enum
from math import ceil, cos, gamma, hypot, pi, sin
from typing import TYPE_CHECKING, Final

import numpy as np
import shapely
from shapely.geometry.polygon import orient

from core.constants import SPEED_OF_LIGHT
from core.errors import ModelError
from core.fullwave.mesh_model import CoaxRing, Mesh, Sheet
from core.fullwave.mesh_sizes import Fineness, ground_plan, pin_holes, top_sizes
from core.fullwave.tail_mesh import tail_mouth, tail_tube, washer
from core.fullwave.triangulate import triangulate
from core.layout.model import Role
from core.shapes.outline import polygon

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.sizes import Sizes
    from core.layout.model import Layout, Port
    from core.layout.tail import Tail
    from core.shapes.outline import Region

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


class Level(Enum):
    """How fine a mesh is; quick serves a hand that moves."""

    QUICK = "quick"
    COARSE = "coarse"
    NORMAL = "normal"
    FINE = "fine"


FINENESS: Final = {
    Level.QUICK: Fineness(4.0, 4.0, 4.7, 2.0, 1.2, 4, 1 / 10, False, 0.1),
    Level.COARSE: Fineness(4.0, 3.0, 5.5, 2.0, 1.0, 4, 1 / 10, False, 0.1),
    Level.NORMAL: Fineness(5.5, 2.0, 7.5, 1.3, 0.8, 6, 1 / 20, True, 0.07),
    Level.FINE: Fineness(8.5, 1.5, 11.0, 0.9, 0.6, 6, 1 / 40, True, 0.05),
}
_ROUND = 0.5
"""Longest facet of the top copper's arcs, in cells of the element.

A disc of eight facets on permittivity 4.55 resonates 2.3 % low, on 10.2 6 %."""
_TOP_FREQUENCY = 1.1  # the band solved for reaches this far above the brief's frequency
_SIMPLER = 0.01  # outline points closer to a straight line than this, in spacer heights, are left
_GRID = 1e-9  # m
_SIMPLEST = 0.1  # and than this, in radii of the probe
_COLLAR = 1.3  # least copper round the probe, in radii of its prism


def build_mesh(layout: Layout, level: Level, tail: Tail | None = None) -> Mesh:
    """Mesh of a layout's copper over its finite ground plate.

    Parameters
    ----------
    layout : Layout
    level : Level
    tail : Tail, optional
        A cable behind the plate.

    Returns
    -------
    Mesh

    Raises
    ------
    ModelError
        If the probe does not stand between copper and ground plate, or an outline
        cannot be meshed.
    """
    fine, height = FINENESS[level], layout.height
    wavelength = SPEED_OF_LIGHT / (layout.frequency * _TOP_FREQUENCY)
    cell = wavelength / fine.per_wavelength
    pin, top, parts = top_plates(layout, level)
    ground = _sheets(layout, Role.GROUND_COPPER, pin, cell)
    foot = pin if tail is None else _prism(layout.ports[0], fine.probe_sides, tail.diameter)
    if tail is not None:
        ground = tuple(
            tail_mouth(piece, pin, foot) if pin_holes(piece, pin) else piece for piece in ground
        )
    sizes, traces = ground_plan(layout, top, foot, fine, cell)
    rim = fine.edge_row * max(height, cell / 2.0) if fine.ground_row else 0.0
    parts += [_plate(piece, sizes, rim, foot, 0.0, traces) for piece in ground]
    parts.append(_tube(pin, height, max(1, ceil(height / (fine.probe_cell * wavelength)))))
    sheets = [Sheet.TOP] * len(top) + [Sheet.GROUND] * len(ground) + [Sheet.PROBE]
    if tail is not None:
        parts += [washer(pin, foot), tail_tube(tail, foot, fine.probe_cell * wavelength)]
        sheets += [Sheet.GROUND, Sheet.TAIL]
    return joined(parts, sheets, mouth(layout))


def top_plates(
    layout: Layout, level: Level
) -> tuple[Floats, tuple[shapely.Polygon, ...], list[tuple[Floats, Ints]]]:
    """Triangles over a layout's top copper, the probe's outline cut out.

    Parameters
    ----------
    layout : Layout
    level : Level

    Returns
    -------
    pin : (e, 2) ndarray of float
        Corners of the probe's prism, m.
    pieces : tuple of shapely.Polygon
        Connected sheets, m.
    parts : list of ((v, 3) ndarray of float, (t, 3) ndarray of int)
        Vertices, m, and triangles of each.

    Raises
    ------
    ModelError
        If the probe does not meet the copper, or an outline cannot be meshed.
    """
    fine, port = FINENESS[level], layout.ports[0]
    chord = min(
        SPEED_OF_LIGHT / (layout.frequency * _TOP_FREQUENCY * fine.per_wavelength),
        _ROUND * min(layout.element_width, layout.element_length) / fine.across,
    )
    pin = _prism(port, fine.probe_sides, port.diameter)
    pieces = _sheets(layout, Role.TOP_COPPER, pin, chord)
    row = fine.edge_row * layout.height
    parts = [
        _plate(piece, top_sizes(layout, piece, pin, fine), row, pin, layout.height)
        for piece in pieces
    ]
    return pin, pieces, parts


def mouth(layout: Layout) -> CoaxRing:
    """Mouth of the coax under a layout's probe.

    Parameters
    ----------
    layout : Layout

    Returns
    -------
    CoaxRing
    """
    port = layout.ports[0]
    clearance = max(
        hole.diameter for hole in layout.holes if hypot(hole.x - port.x, hole.y - port.y) < 1e-9
    )
    return CoaxRing(port.x, port.y, port.diameter / 2.0, clearance / 2.0)


def _prism(port: Port, sides: int, diameter: float) -> Floats:
    """Corners (sides, 2) of a prism that carries a current like a round pin's.

    Its cross-section has the logarithmic capacity of the circle: side times
    Γ(1/n) / (2^(1+2/n) √π Γ(1/2+1/n)) is the radius [Pólya and Szegő, Isoperimetric
    Inequalities in Mathematical Physics, 1951, table p. 252; from memory].
    """
    n = sides
    share = gamma(1 / n) / (2.0 ** (1 + 2 / n) * pi**0.5 * gamma(0.5 + 1 / n))
    radius = diameter / 2.0 / share / (2.0 * sin(pi / n))
    turns = [2.0 * pi * (i + 0.5) / n for i in range(n)]
    return np.array([(port.x + radius * cos(a), port.y + radius * sin(a)) for a in turns])


def _sheets(layout: Layout, role: Role, pin: Floats, chord: float) -> tuple[shapely.Polygon, ...]:
    """Connected sheets of one role, the pin's outline cut out of the one that it meets."""
    regions = [piece.region for piece in layout.pieces if piece.role is role]
    if role is Role.GROUND_COPPER:  # the coax's mouth is closed and fed by a ring source
        pieces = [shapely.Polygon(_faceted(region, chord).exterior) for region in regions]
    else:
        pieces = [_faceted(region, chord) for region in regions]
    if not all(piece.is_valid for piece in pieces):
        raise ModelError(
            f"mesh: an outline of the {role.value} crosses itself; accepted: it may not"
        )
    hole = shapely.Polygon(pin)
    # On a grid, so that pieces that meet along a line do not leave a crack of rounding errors.
    joined = shapely.union_all(pieces, grid_size=_GRID)
    if not joined.contains(hole.centroid):
        raise ModelError(f"mesh: the probe does not meet the {role.value}; accepted: on the copper")
    if role is Role.TOP_COPPER:
        joined = shapely.union(joined, shapely.Polygon(_grown(pin, _COLLAR)))
    elif not joined.contains(hole):
        raise ModelError("mesh: the probe breaks the rim of the ground plate; accepted: inside it")
    radius = layout.ports[0].diameter / 2.0
    simple = shapely.simplify(joined, min(_SIMPLER * layout.height, _SIMPLEST * radius))
    parts = [orient(p) for p in shapely.get_parts(simple) if isinstance(p, shapely.Polygon)]
    return tuple(_pierced(part, hole) if part.contains(hole) else part for part in parts)


def _pierced(part: shapely.Polygon, hole: shapely.Polygon) -> shapely.Polygon:
    rings = [np.asarray(ring.coords) for ring in (*part.interiors, hole.exterior)]
    return orient(shapely.Polygon(np.asarray(part.exterior.coords), rings))


def _faceted(region: Region, chord: float) -> shapely.Polygon:
    """Polygon of a region, its arcs in facets not much longer than a chord, of equal area."""
    corners = [(vertex.x, vertex.y) for vertex in region.exterior.vertices]
    radius = max(np.ptp(corners, axis=0)) / 2.0
    return polygon(region, min(chord**2 / (8.0 * radius), 0.15 * radius))


def _grown(ring: Floats, factor: float) -> Floats:
    middle = ring.mean(axis=0)
    return np.asarray(middle + factor * (ring - middle))


def _plate(
    piece: shapely.Polygon,
    sizes: Sizes,
    row: float,
    pin: Floats,
    z: float,
    traces: tuple[shapely.LinearRing, ...] = (),
) -> tuple[Floats, Ints]:
    points, triangles = triangulate(piece, sizes, row, pin_holes(piece, pin), traces)
    return np.column_stack([points, np.full(len(points), z)]), triangles


def _tube(pin: Floats, height: float, rows: int) -> tuple[Floats, Ints]:
    """Side faces of the prism from the ground plate to the top copper."""
    n = len(pin)
    levels = np.linspace(0.0, height, rows + 1)
    vertices = np.vstack([np.column_stack([pin, np.full(n, z)]) for z in levels])
    low = (np.arange(rows)[:, None] * n + np.arange(n)).ravel()
    right = (np.arange(rows)[:, None] * n + (np.arange(n) + 1) % n).ravel()
    first = np.column_stack([low, right, right + n])
    second = np.column_stack([low, right + n, low + n])
    return vertices, np.concatenate([first, second]).astype(np.int64)


def joined(parts: list[tuple[Floats, Ints]], sheets: list[Sheet], port: CoaxRing) -> Mesh:
    """One mesh of several, vertices in the same place made one.

    Parameters
    ----------
    parts : list of ((v, 3) ndarray of float, (t, 3) ndarray of int)
        Vertices, m, and triangles of each.
    sheets : list of Sheet
        Of each part.
    port : CoaxRing

    Returns
    -------
    Mesh
    """
    vertices = np.concatenate([points for points, _ in parts])
    starts = np.cumsum([0, *(len(points) for points, _ in parts)])
    triangles = np.concatenate([t + s for (_, t), s in zip(parts, starts, strict=False)])
    sheet = np.repeat([int(s) for s in sheets], [len(t) for _, t in parts])
    scale = np.abs(vertices).max()
    keys = np.round(vertices / (1e-7 * scale)).astype(np.int64)
    _, first, number = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    return Mesh(vertices[first], np.asarray(number.reshape(-1)[triangles]), sheet, port)
