"""Meshes finer than the finest level, and edge rows of other widths, for checks alone."""

from contextlib import contextmanager
from unittest import mock

from core.fullwave.mesh import FINENESS, Level
from core.fullwave.mesh_sizes import Fineness

REFERENCE = Fineness(12.8, 1.0, 15.5, 0.64, 0.44, 6, 1 / 60, True)
"""About 1.8 times the triangles of the finest level."""


@contextmanager
def meshes(finest: Fineness | None = None, row: float | None = None):
    """Another meaning of the finest level, another width of the edge row (spacer heights)."""
    changed = {} if finest is None else {Level.FINE: finest}
    with mock.patch.dict(FINENESS, changed):
        if row is None:
            yield
        else:
            with mock.patch("core.fullwave.mesh.EDGE_ROW", row):
                yield
