"""Boards that several tests of the layered field solver share."""

from dataclasses import replace

import numpy as np
from fullwave_shapes import grid, stripline_design

from core.design import spelled
from core.design.defaults import default_design
from core.design.feed import ProbeFeed, ProbePin
from core.design.model import Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, Stock
from core.fullwave.layered_mesh import BoardMesh
from core.fullwave.mesh_model import CoaxRing
from core.layout.build import build_layout
from core.layout.model import Foil, Role
from core.shapes.outline import Region, circle

IDEAL = Foil(50e-6, 1e18)


def board_patch(width, length, height, eps_r, frequency, feed=0.15, tan=0.001):
    """Layout of a probe-fed patch on one layer; the probe `feed` lengths from its middle."""
    design = default_design()
    pin = min(1.27e-3, length / 12.0)
    stock = Stock(
        spelled.spacer(f"er={eps_r},tan={tan}:{1e3 * height}mm"),
        design.stock.foil,
        DiscGround(3.0 * max(width, length) + 20.0 * height),
    )
    brief = replace(design.brief, frequency=frequency, polarisation=Polarisation.LINEAR)
    probe = ProbeFeed(0.0, feed * length, ProbePin(pin, 1.6 * pin, 3.2 * pin))
    return build_layout(
        replace(design, brief=brief, stock=stock, element=Element(width, length), feed=probe)
    )


def board_disc(radius, height, eps_r, frequency, feed=0.12, tan=0.001):
    """Layout of a probe-fed disc on one layer; the probe `feed` diameters from its middle."""
    layout = board_patch(2.0 * radius, 2.0 * radius, height, eps_r, frequency, feed, tan)
    disc = Region(circle(2.0 * radius))
    pieces = tuple(
        replace(one, region=disc) if one.role is Role.TOP_COPPER else one for one in layout.pieces
    )
    return replace(layout, pieces=pieces)


def board_dual_edge():
    """Layout of a dual-edge design on 1.6 mm of FR-4 for 2.45 GHz."""
    return build_layout(
        stripline_design("FR-4:1.6mm", 90, (28.6, 28.2), (10, 3, 0.5), (10, 3, 0.7), (0.5, 30), 14)
    )


def strip(width, length, across, along):
    """Mesh of a straight strip along y, finer at its edges, fed across the whole end at y = 0."""
    xs = 0.5 * width * np.sin(np.linspace(-np.pi / 2, np.pi / 2, across + 1))
    vertices, triangles = grid(xs, np.linspace(0.0, length, along + 1))
    end = np.flatnonzero(vertices[:, 1] == 0.0)
    end = end[np.argsort(vertices[end, 0])]
    pin = np.column_stack([end[:-1], end[1:]])
    return BoardMesh(vertices, triangles, pin, CoaxRing(0.0, 0.0, 0.2 * width, 0.5 * width))
