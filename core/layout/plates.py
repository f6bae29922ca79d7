"""Ground plate and spacer layers: outlines, holes and distances to the rim."""

from __future__ import annotations

from math import hypot
from typing import TYPE_CHECKING

from core.design.stock import DiscGround
from core.layout.model import Piece, Point, Role
from core.lines.stack import Layer
from core.shapes.outline import Outline, Region, circle, rectangle

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


def _pierced(design: Design, outline: Outline, probe: Point, diameter: float) -> Region:
    if rim_distance(design, probe) <= diameter / 2:
        return Region(outline)  # the hole would break the rim: a finding says so
    return Region(outline, (circle(diameter, probe),))
