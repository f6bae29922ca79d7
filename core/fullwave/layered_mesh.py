"""From a Layout on a board to the mesh of its top copper and the edges that the probe feeds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.fullwave.mesh import joined, mouth, top_plates
from core.fullwave.mesh_model import CoaxRing, Sheet

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.mesh import Level
    from core.layout.model import Layout

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class BoardMesh:
    """Triangles of the top copper and where a probe meets them.

    Attributes
    ----------
    vertices : (v, 3) ndarray of float
        m; z = 0 is the ground plane.
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
    pin, _, parts = top_plates(layout, level)
    mesh = joined(parts, [Sheet.TOP] * len(parts), mouth(layout))
    return BoardMesh(mesh.vertices, mesh.triangles, _pin_edges(mesh.vertices, pin), mouth(layout))


def _pin_edges(vertices: Floats, pin: Floats) -> Ints:
    """Edges (e, 2) of a mesh along the outline of a probe, whose corners are vertices."""
    gaps = np.linalg.norm(vertices[None, :, :2] - pin[:, None], axis=2)
    corners = gaps.argmin(axis=1)
    return np.column_stack([corners, np.roll(corners, -1)])
