"""From a Layout on a board to the mesh of its top copper and the edges that the probe feeds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.constants import SPEED_OF_LIGHT
from core.fullwave.mesh import (
    EDGE_ROW,
    FINENESS,
    Level,
    _joined,
    _mouth,
    _plate,
    _prism,
    _sheets,
)
from core.fullwave.mesh_model import CoaxRing, Sheet
from core.fullwave.mesh_sizes import top_sizes
from core.layout.model import Role

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.layout.model import Layout

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class BoardMesh:
    """Triangles of the top copper and where a probe meets them.

    Attributes
    ----------
    vertices : (v, 3) ndarray of float
        m; z = 0 is the plane of the copper.
    triangles : (t, 3) ndarray of int
        Counter-clockwise seen from above.
    pin : (e, 2) ndarray of int
        Vertices of the edges round the probe, through which its current enters.
    port : CoaxRing
        Under the probe.
    """

    vertices: Floats
    triangles: Ints
    pin: Ints
    port: CoaxRing


def build_board_mesh(layout: Layout, level: Level) -> BoardMesh:
    """Mesh of a layout's top copper over an infinite ground plane.

    Parameters
    ----------
    layout : Layout
    level : Level

    Returns
    -------
    BoardMesh

    Raises
    ------
    ModelError
        If the probe does not meet the copper, or an outline cannot be meshed.
    """
    fine, port = FINENESS[level], layout.ports[0]
    chord = SPEED_OF_LIGHT / (layout.frequency * fine.per_wavelength)
    pin = _prism(port, fine.probe_sides)
    pieces = _sheets(layout, Role.TOP_COPPER, pin, chord)
    row = EDGE_ROW * layout.height
    parts = [_plate(piece, top_sizes(layout, piece, pin, fine), row, pin, 0.0) for piece in pieces]
    mesh = _joined(parts, [Sheet.TOP] * len(parts), _mouth(layout))
    return BoardMesh(mesh.vertices, mesh.triangles, _pin_edges(mesh.vertices, pin), _mouth(layout))


def _pin_edges(vertices: Floats, pin: Floats) -> Ints:
    """Edges (e, 2) of a mesh along the outline of a probe, whose corners are vertices."""
    gaps = np.linalg.norm(vertices[None, :, :2] - pin[:, None], axis=2)
    corners = gaps.argmin(axis=1)
    return np.column_stack([corners, np.roll(corners, -1)])
