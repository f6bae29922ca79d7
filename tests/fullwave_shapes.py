"""Meshes and layouts that several tests of the field solver share."""

from dataclasses import replace

import numpy as np
from scipy.spatial import ConvexHull

from core.design import spelled
from core.design.defaults import default_design
from core.design.feed import Branch, DualEdge, LeadIn, ProbeFeed, ProbePin
from core.design.model import Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, Stock
from core.fullwave.basis import build_basis
from core.fullwave.far_field import far_field, sphere_power
from core.fullwave.moments import build_moments
from core.layout.build import build_layout


def grid(xs, ys, z=0.0):
    """Vertices and triangles of a flat grid."""
    x, y = np.meshgrid(xs, ys, indexing="ij")
    vertices = np.column_stack([x.ravel(), y.ravel(), np.full(x.size, z)])
    triangles = []
    rows = len(ys)
    for i in range(len(xs) - 1):
        for j in range(rows - 1):
            a = i * rows + j
            b, c, d = a + rows, a + rows + 1, a + 1
            turned = (i + j) % 2
            triangles += [(a, b, d), (b, c, d)] if turned else [(a, b, c), (a, c, d)]
    return vertices, np.array(triangles)


def sphere(subdivisions):
    """Vertices and triangles of an icosahedron blown up to a ball of the unit ball's volume."""
    one, golden = 1.0, (1.0 + 5.0**0.5) / 2.0
    corners = [(0.0, one * i, golden * j) for i in (1, -1) for j in (1, -1)]
    vertices = np.array([np.roll(corner, turn) for corner in corners for turn in range(3)])
    for _ in range(subdivisions):
        faces = ConvexHull(vertices).simplices
        ends = np.unique(np.sort(faces[:, [[0, 1], [1, 2], [2, 0]]].reshape(-1, 2)), axis=0)
        vertices = np.vstack([vertices, vertices[ends].sum(axis=1)])
        vertices /= np.linalg.norm(vertices, axis=1)[:, None]
    hull = ConvexHull(vertices)
    return vertices * (4.0 * np.pi / 3.0 / hull.volume) ** (1 / 3), hull.simplices.astype(int)


def moments_of(vertices, triangles):
    """Basis and moments of a mesh, all triangles of one rank."""
    sheets = np.zeros(len(triangles), dtype=int)
    basis = build_basis(vertices, triangles, sheets)
    return basis, build_moments(basis, triangles, sheets)


def current_power(basis, solved, frequency):
    """Power that currents alone send out, W."""
    reach = np.ptp(basis.corners.reshape(-1, 3), axis=0).max()
    return sphere_power(
        lambda towards: far_field(basis, solved, frequency, towards), frequency, reach
    )


def gap_excitation(basis, vertices, x):
    """1 V along x across a line of constant x."""
    excitation = np.zeros(basis.count, dtype=complex)
    middles = basis.corners.mean(axis=1)
    for m in np.flatnonzero((np.abs(vertices[basis.ends][..., 0] - x) < 1e-9).all(axis=1)):
        here, there = basis.plus[m] % basis.triangles, basis.minus[m] % basis.triangles
        width = np.linalg.norm(np.diff(vertices[basis.ends[m]], axis=0))
        excitation[m] = np.sign(middles[there, 0] - middles[here, 0]) * width
    return excitation


def stripline_design(spacer, disc, element, first, second, delay, tee, lead=0.0):
    """Dual-edge design at 2.45 GHz; lengths in mm."""
    design = default_design()
    branches = (Branch(*(1e-3 * v for v in one)) for one in (first, second))
    feed = DualEdge(
        *branches,
        delay_width=1e-3 * delay[0],
        delay_length=1e-3 * delay[1],
        tee=1e-3 * tee,
        lead_in=LeadIn(1e-3 * lead, 3e-3),
        probe=ProbePin(),
    )
    return replace(
        design,
        brief=replace(design.brief, frequency=2.45e9),
        stock=Stock(spelled.spacer(spacer), design.stock.foil, DiscGround(1e-3 * disc)),
        element=Element(1e-3 * element[0], 1e-3 * element[1]),
        feed=feed,
    )


def thin_air():
    """Dual-edge build on 6 mm of air."""
    return stripline_design("air:6mm", 105, (52, 49), (24, 4, 2), (23, 4, 4), (2, 62), 28)


def thick_air():
    """Dual-edge build on 15 mm of air, with a lead-in and a detour."""
    return stripline_design(
        "air:15mm", 125, (44, 43), (12, 3, 2), (12, 3, 3), (2.5, 40), 14, lead=12
    )


def small_ground():
    """Dual-edge build on 10 mm of air over a plate little larger than the element."""
    return stripline_design("air:10mm", 85, (47, 46), (8, 2, 2), (8, 2, 2), (2, 28), 10)


def probe_patch(spacer, side, y, disc):
    """Layout of a square patch over a disc, fed by a probe on the y axis; lengths in m."""
    design = default_design()
    return build_layout(
        replace(
            design,
            brief=replace(design.brief, frequency=2.45e9, polarisation=Polarisation.LINEAR),
            stock=Stock(spelled.spacer(spacer), design.stock.foil, DiscGround(disc)),
            element=Element(side, side),
            feed=ProbeFeed(0.0, y, ProbePin(1.27e-3, 2e-3, 4.1e-3)),
        )
    )
