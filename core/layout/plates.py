"""Ground plate and spacer layers: outlines, holes and distances to the rim."""

from __future__ import annotations

from math import hypot
from typing import TYPE_CHECKING

from core.design.stock import DiscGround
from core.layout.model import Piece, Point, Role
from core.lines.stack import Layer
from core.shapes.outline import Outline, Region, circle, polyline, rectangle

if TYPE_CHECKING:
    from core.design.model import Design

GROUND = "ground plate"


def dielectric_stack(design: Design) -> tuple[Layer, ...]:
    """Dielectric layers of a design from the ground up.

    Parameters
    ----------
    design : Design

    Returns
    -------
    tuple of Layer
    """
    return tuple(
        Layer(layer.thickness, layer.eps_r, layer.loss_tangent) for layer in design.stock.spacer
    )


def ground_reach(design: Design) -> float:
    """Smallest distance from the element's edge to the ground plate's rim.

    Parameters
    ----------
    design : Design

    Returns
    -------
    float
        m; negative where the element overhangs.
    """
    ground, element = design.stock.ground, design.element
    x, y = abs(ground.offset_x) + element.width / 2, abs(ground.offset_y) + element.length / 2
    if isinstance(ground, DiscGround):
        return ground.diameter / 2 - hypot(x, y)
    return min(ground.width / 2 - x, ground.length / 2 - y)


def rim_distance(design: Design, point: Point) -> float:
    """Distance from a point to the ground plate's rim.

    Parameters
    ----------
    design : Design
    point : Point
        m, right-hand frame.

    Returns
    -------
    float
        m; negative outside.
    """
    ground = design.stock.ground
    x, y = abs(point[0] - ground.offset_x), abs(point[1] - ground.offset_y)
    if isinstance(ground, DiscGround):
        return ground.diameter / 2 - hypot(x, y)
    return min(ground.width / 2 - x, ground.length / 2 - y)


def _ground_outline(design: Design) -> Outline:
    ground = design.stock.ground
    centre = (ground.offset_x, ground.offset_y)
    if isinstance(ground, DiscGround):
        return circle(ground.diameter, centre)
    return rectangle(ground.width, ground.length, centre)


def plates(design: Design, probe: Point) -> tuple[Piece, ...]:
    """Ground plate and spacer layers, pierced for the probe where it is wholly inside.

    Parameters
    ----------
    design : Design
    probe : Point
        m, right-hand frame.

    Returns
    -------
    tuple of Piece
        From the ground up.
    """
    outline = _ground_outline(design)
    foil, pin = design.stock.foil, design.feed.probe
    pieces = [
        Piece(
            GROUND,
            Role.GROUND_COPPER,
            _pierced(design, outline, probe, pin.clearance),
            -foil.thickness,
            foil.thickness,
            foil.name,
            flaps=_flaps(design),
        )
    ]
    z = 0.0
    for number, layer in enumerate(design.stock.spacer, 1):
        pieces.append(
            Piece(
                f"spacer {number} ({layer.material})",
                Role.SPACER,
                _pierced(design, outline, probe, pin.diameter),
                z,
                layer.thickness,
                layer.material,
                cut=layer.material != "air",
            )
        )
        z += layer.thickness
    return tuple(pieces)


def fold_lines(design: Design) -> tuple[tuple[Point, Point], ...]:
    """Edges of the ground plate that its foil is turned over.

    Parameters
    ----------
    design : Design

    Returns
    -------
    tuple of (Point, Point)
        m, right-hand frame, each with the plate on its left; none where no foil is turned over.
    """
    if isinstance(design.stock.ground, DiscGround) or design.making.turnover <= 0.0:
        return ()
    corners = [(vertex.x, vertex.y) for vertex in _ground_outline(design).vertices]
    return tuple(zip(corners, [*corners[1:], corners[0]], strict=True))


def _flaps(design: Design) -> tuple[Region, ...]:
    """Foil beyond the fold lines, cut slantwise at the corners so that it lies flat when folded."""
    by = min(design.making.turnover, longest_turnover(design))
    flaps = []
    for a, b in fold_lines(design):
        span = hypot(b[0] - a[0], b[1] - a[1])
        way = ((b[0] - a[0]) / span, (b[1] - a[1]) / span)
        out = (way[1] * by, -way[0] * by)
        inset = (way[0] * by, way[1] * by)
        flaps.append(
            Region(
                polyline(
                    [
                        a,
                        (a[0] + inset[0] + out[0], a[1] + inset[1] + out[1]),
                        (b[0] - inset[0] + out[0], b[1] - inset[1] + out[1]),
                        b,
                    ]
                )
            )
        )
    return tuple(flaps)


def longest_turnover(design: Design) -> float:
    """Widest foil that can be turned over a ground plate's rim.

    Parameters
    ----------
    design : Design

    Returns
    -------
    float
        m; 0 for a disc, whose rim is nowhere straight.
    """
    ground = design.stock.ground
    if isinstance(ground, DiscGround):
        return 0.0
    return 0.45 * min(ground.width, ground.length)


def _pierced(design: Design, outline: Outline, probe: Point, diameter: float) -> Region:
    if rim_distance(design, probe) <= diameter / 2:
        return Region(outline)  # the hole would break the rim: a finding says so
    return Region(outline, (circle(diameter, probe),))
