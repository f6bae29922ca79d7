"""How large the triangles of a sheet may be, from place to place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Sequence

    import shapely
    from numpy.typing import NDArray

    Floats = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Sizes:
    """Wanted edge length: small at some segments, growing with the distance from them.

    Attributes
    ----------
    largest : float
        Far from every segment, m.
    growth : float
        Edge length gained per distance from a segment.
    segments : (k, 4) ndarray of float
        x, y of start and end, m.
    at_segments : (k,) ndarray of float
        Edge length wanted there, m.
    """

    largest: float
    growth: float
    segments: Floats
    at_segments: Floats

    def at(self, points: Floats) -> Floats:
        """Wanted edge length (n,), m, at points (n, 2)."""
        wanted = np.full(len(points), self.largest)
        if len(self.segments):
            near = self.at_segments + self.growth * distances(points, self.segments)
            np.minimum(wanted, near.min(axis=1), out=wanted)
        return wanted

    def box(self, longest: float) -> tuple[Floats, Floats]:
        """Corners of a box outside which every wanted edge is longer than `longest`, m."""
        short = self.at_segments < longest
        if self.largest < longest or not short.any():
            return np.full(2, -np.inf if self.largest < longest else np.inf), np.full(2, np.inf)
        reach = (longest - self.at_segments[short])[:, None] / self.growth
        ends = self.segments[short].reshape(-1, 2, 2)
        return (ends.min(axis=1) - reach).min(axis=0), (ends.max(axis=1) + reach).max(axis=0)


def sizes_near(largest: float, growth: float, wishes: Sequence[tuple[Floats, float]]) -> Sizes:
    """Sizes that are small near some segments.

    Parameters
    ----------
    largest : float
        m.
    growth : float
        Edge length gained per distance.
    wishes : sequence of ((k, 4) ndarray of float, float)
        Segments and the edge length wanted at them, m.

    Returns
    -------
    Sizes
    """
    segments = np.concatenate([np.empty((0, 4)), *(segments for segments, _ in wishes)])
    lengths = np.concatenate([np.empty(0), *(np.full(len(s), size) for s, size in wishes)])
    return Sizes(largest, growth, segments, np.minimum(lengths, largest))


def ring_segments(ring: shapely.LinearRing | shapely.LineString) -> Floats:
    """Segments (k, 4) of a ring or a polyline, m."""
    points = np.asarray(ring.coords)[:, :2]
    return np.hstack([points[:-1], points[1:]])


def distances(points: Floats, segments: Floats) -> Floats:
    """Distance (n, k), m, of points (n, 2) from segments (k, 4)."""
    along_x, along_y = segments[:, 2] - segments[:, 0], segments[:, 3] - segments[:, 1]
    squared = np.maximum(along_x**2 + along_y**2, 1e-300)
    x, y = points[:, :1] - segments[:, 0], points[:, 1:] - segments[:, 1]
    where = np.clip((x * along_x + y * along_y) / squared, 0.0, 1.0)
    return np.asarray(np.hypot(x - where * along_x, y - where * along_y))


def first_hits(points: Floats, ways: Floats, segments: Floats) -> Floats:
    """Distance (n,), m, that rays from points (n, 2) go along unit ways before a segment.

    Infinite where nothing is met; a segment that a ray starts on does not count.
    """
    along = segments[:, 2:] - segments[:, :2]
    to_start = segments[:, :2] - points[:, None, :]
    turn = ways[:, None, 0] * along[:, 1] - ways[:, None, 1] * along[:, 0]
    with np.errstate(divide="ignore", invalid="ignore"):
        reach = (to_start[..., 0] * along[:, 1] - to_start[..., 1] * along[:, 0]) / turn
        place = (to_start[..., 0] * ways[:, None, 1] - to_start[..., 1] * ways[:, None, 0]) / turn
    scale = np.abs(segments).max() if segments.size else 1.0
    met = (np.abs(turn) > 0.0) & (place >= -1e-9) & (place <= 1.0 + 1e-9) & (reach > 1e-9 * scale)
    return np.asarray(np.where(met, reach, np.inf).min(axis=1, initial=np.inf))
