"""Meshes finer than the finest level, and edge rows of other widths, for checks alone."""

from contextlib import contextmanager
from dataclasses import replace
from unittest import mock

from core.fullwave.mesh import FINENESS, Level
from core.fullwave.mesh_sizes import Fineness

REFERENCE = Fineness(12.8, 1.0, 15.5, 0.64, 0.44, 6, 1 / 60, True, 0.05)
"""About 1.8 times the triangles of the finest level."""


@contextmanager
def meshes(finest: Fineness | None = None, row: float | None = None):
    """Another meaning of the finest level, another width of all edge rows (spacer heights)."""
    changed = dict(FINENESS) if finest is None else {**FINENESS, Level.FINE: finest}
    if row is not None:
        changed = {level: replace(one, edge_row=row) for level, one in changed.items()}
    with mock.patch.dict(FINENESS, changed):
        yield
