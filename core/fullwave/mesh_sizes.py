"""How fine the cells of an antenna's sheets are, from place to place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import shapely

from core.fullwave.sizes import Sizes, first_hits, ring_segments, sizes_near

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.layout.model import Layout

    Floats = NDArray[np.float64]

_TRACED = 0.4  # of the longest cell: under it the cells below copper edges become narrow ones
_TRACE_CELL = 4.0  # longest of these, in their width
_SHORTEST = 0.04  # of the longest cell on the top copper: no cell is asked to be shorter


@dataclass(frozen=True)
class Fineness:
    """What a level means.

    Attributes
    ----------
    across : float
        Cells across the element's shorter side, edge rows aside.
    strip_aspect : float
        Longest cell on a strip, in strip widths.
    per_wavelength : float
        Fewest cells per free-space wavelength on the ground plate, far from the copper.
    ground_detail : float
        Edge length on the ground plate right under copper edges, in spacer heights.
    growth : float
        Edge length gained per distance from a detail.
    probe_sides : int
        Of the prism that stands for the probe.
    probe_cell : float
        Longest cell along the probe, in free-space wavelengths.
    ground_row : bool
        Whether the rim of the ground plate has a row of edge cells.
    edge_row : float
        Width of the row of edge cells, in spacer heights; 0 for none.
    """

    across: float
    strip_aspect: float
    per_wavelength: float
    ground_detail: float
    growth: float
    probe_sides: int
    probe_cell: float
    ground_row: bool
    edge_row: float


def _pin_wish(pin: Floats) -> tuple[Floats, float]:
    side = float(np.linalg.norm(pin[1] - pin[0]))
    return np.hstack([pin, np.roll(pin, -1, axis=0)]), side


def pin_holes(piece: shapely.Polygon, pin: Floats) -> tuple[int, ...]:
    """Number of the hole that is the probe's outline, if this sheet has it.

    Parameters
    ----------
    piece : shapely.Polygon
        m.
    pin : (n, 2) ndarray of float
        Corners of the probe's prism, m.

    Returns
    -------
    tuple of int
        One number or none.
    """
    middle = shapely.Point(*pin.mean(axis=0))
    return tuple(
        i for i, ring in enumerate(piece.interiors) if shapely.Polygon(ring).contains(middle)
    )


def top_sizes(layout: Layout, piece: shapely.Polygon, pin: Floats, fine: Fineness) -> Sizes:
    """Sizes on the top copper: coarse over the element, finer on strips by their width.

    Parameters
    ----------
    layout : Layout
    piece : shapely.Polygon
        Counter-clockwise, holes clockwise, m.
    pin : (n, 2) ndarray of float
        Corners of the probe's prism, m.
    fine : Fineness

    Returns
    -------
    Sizes
    """
    largest = min(layout.element_width, layout.element_length) / fine.across
    pin_hole = pin_holes(piece, pin)
    free = [ring for i, ring in enumerate(piece.interiors) if i not in pin_hole]
    segments = np.concatenate([ring_segments(ring) for ring in (piece.exterior, *free)])
    widths = _copper_widths(segments)
    along = np.maximum(fine.strip_aspect * widths, _SHORTEST * largest)
    wishes = [(segments[i : i + 1], along[i]) for i in np.flatnonzero(along < largest)]
    return sizes_near(largest, fine.growth, [*wishes, _pin_wish(pin)])


def _copper_widths(segments: Floats) -> Floats:
    """Width of the copper behind each side, m: the least met along it."""
    along = segments[:, 2:] - segments[:, :2]
    lengths = np.linalg.norm(along, axis=1)
    inward = np.column_stack([-along[:, 1], along[:, 0]]) / lengths[:, None]
    widths = np.full(len(segments), np.inf)
    for place in (0.1, 0.5, 0.9):
        start = segments[:, :2] + place * along
        widths = np.minimum(widths, first_hits(start, inward, segments))
    return widths


def ground_plan(
    layout: Layout,
    top: tuple[shapely.Polygon, ...],
    pin: Floats,
    fine: Fineness,
    largest: float,
) -> tuple[Sizes, tuple[shapely.LinearRing, ...]]:
    """Sizes of the ground plate's cells, and lines for them to follow.

    Its charge mirrors that of the copper above, blurred by the spacer's height: cells under
    copper edges are as fine as that height. Where it is small they are so across the edge
    only: narrow cells between two lines beside it.

    Parameters
    ----------
    layout : Layout
    top : tuple of shapely.Polygon
        Sheets of the top copper, m.
    pin : (n, 2) ndarray of float
        Corners of the probe's prism, m.
    fine : Fineness
    largest : float
        Longest cell, m.

    Returns
    -------
    sizes : Sizes
    traces : tuple of shapely.LinearRing
        As `core.fullwave.triangulate.triangulate` takes them.
    """
    detail = fine.ground_detail * layout.height
    if detail > _TRACED * largest:
        edges = np.concatenate([ring_segments(piece.exterior) for piece in top])
        return sizes_near(largest, fine.growth, [(edges, detail), _pin_wish(pin)]), ()
    copper = shapely.union_all(top)
    rings: list[shapely.LinearRing] = []
    for step in (-detail / 2.0, detail / 2.0):
        for part in shapely.get_parts(shapely.buffer(copper, step, join_style="mitre")):
            rings += [ring for ring in (part.exterior, *part.interiors) if not ring.is_empty]
    along = np.concatenate([ring_segments(ring) for ring in rings])
    wishes = [(along, _TRACE_CELL * detail), _pin_wish(pin)]
    return sizes_near(largest, fine.growth, wishes), tuple(rings)
