"""What of a field solution the Mat shows: its scale, and where its ticks stand.

Shapes: n ticks, m places, t triangles.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from functools import lru_cache
from math import ceil, floor, log10
from typing import TYPE_CHECKING

import numpy as np

from core.response.currents import at_instant, greatest

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.polarisation import Polarisation
    from core.response.currents import Currents, SheetCurrent

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

DECADES = 2  # of current that the colours tell apart
_OVER = 7.0  # times what half of the copper stays under: what the scale reaches at least
_HALF = 3.0  # of a decade, as people round its half
_FREE = 1.3  # distances of ticks that are free round one in a strip
_LEAST, _MOST = 0.25, 0.47  # half a tick where current is least and most, in their distance


class Shows(StrEnum):
    """What is drawn of the copper."""

    COPPER = "copper"
    MESH = "mesh"
    CURRENT = "current"
    GROUND = "ground"


@dataclass(frozen=True, eq=False)
class CurrentState:
    """What the plan view shows of a solution.

    Attributes
    ----------
    shows : Shows
        What was asked for.
    currents : Currents or None
        What was solved for the very design on the bench; None draws the plain copper.
    words : str
        Of the legend, or why there is nothing to draw.
    details : str
        What else is to be known.
    sense : Polarisation or None
        Of the solved wave ahead; None where it has none.
    moves : bool
        Whether the current is to be seen moving.
    """

    shows: Shows = Shows.COPPER
    currents: Currents | None = None
    words: str = ""
    details: str = ""
    sense: Polarisation | None = None
    moves: bool = False

    @property
    def sheet(self) -> SheetCurrent | None:
        """Sheet whose current is in question."""
        if self.currents is None or self.shows not in (Shows.CURRENT, Shows.GROUND):
            return None
        return self.currents.ground if self.shows is Shows.GROUND else self.currents.top

    @property
    def scale(self) -> Scale | None:
        """Scale of that sheet: the copper's for both, so that their colours can be compared."""
        if self.currents is None or self.sheet is None:
            return None
        return scale_of(self.currents.top)


@dataclass(frozen=True)
class Scale:
    """Logarithmic scale of current density up to `top`, A/m."""

    top: float

    def shares(self, sizes: Floats) -> Floats:
        """Place of current densities (A/m) on the scale: 0 at its low end, 1 at its top."""
        small = self.top * 1e-9
        return np.asarray(1.0 + np.log10(np.maximum(sizes, small) / self.top) / DECADES)

    @property
    def marks(self) -> tuple[tuple[float, str], ...]:
        """Places on the scale and what is written there, A/m."""
        count = 2 * DECADES
        values = [_stepped(round(2 * log10(self.top)) - back) for back in range(count, -1, -1)]
        words = [f"{value:.9g}" for value in values]
        words[0], words[-1] = f"≤ {words[0]}", f"≥ {words[-1]}"
        places = self.shares(np.array(values))
        return tuple(zip((float(place) for place in places), words, strict=True))


@dataclass(frozen=True, eq=False)
class Ticks:
    """Places at which the current's direction is drawn.

    Attributes
    ----------
    places : (n, 2) ndarray of float
        m.
    currents : (n, 2) ndarray of complex
        So scaled that the greatest of a period is half the length of the tick, in distances
        between ticks.
    """

    places: Floats
    currents: Complexes

    def with_more(self, other: Ticks) -> Ticks:
        """These and others."""
        return Ticks(
            np.concatenate([self.places, other.places]),
            np.concatenate([self.currents, other.currents]),
        )


@lru_cache(4)
def scale_of(sheet: SheetCurrent) -> Scale:
    """Scale about what flows in the middle of a sheet; its top is 1 or 3 times a power of ten.

    Strips and edges may pass it: they would push all else to the low end.
    """
    sizes = greatest(sheet.at_vertices)[sheet.triangles].mean(axis=1)
    order = np.argsort(sizes)
    half = np.searchsorted(np.cumsum(sheet.areas[order]), sheet.areas.sum() / 2.0)
    top = max(_OVER * float(sizes[order[half]]), 1e-6)
    step = ceil(2 * log10(top) - 1e-9)
    # A half decade is rounded down to 3: what lies between is the next one's.
    return Scale(next(_stepped(i) for i in (step, step + 1) if _stepped(i) >= top))


def ticks_on(
    sheet: SheetCurrent,
    scale: Scale,
    step: float,
    view: tuple[float, float, float, float],
    above: SheetCurrent | None = None,
) -> Ticks:
    """Ticks on a sheet, `step` metres apart, in a part of the Mat (x and y from, to).

    On a grid about the Mat's origin; narrow strips, which it misses, take theirs from the
    middles of their triangles. Nothing is drawn of what lies under another sheet.
    """
    places = _grid(sheet, step, view)
    which, density = sheet.at(places)
    places = places[which]
    if above is None:
        more = _between(sheet, places, step, view)
        places = np.concatenate([places, more])
        density = np.concatenate([density, sheet.at(more)[1]])
    else:
        hidden, _ = above.at(places)
        places, density = np.delete(places, hidden, 0), np.delete(density, hidden, 0)
    sizes = greatest(density)
    shares = np.clip(scale.shares(sizes), 0.0, 1.0)
    seen = shares > 0.0
    reach = (_LEAST + (_MOST - _LEAST) * shares[seen]) / sizes[seen]
    return Ticks(places[seen], density[seen] * reach[:, None])


def flows(ticks: Ticks, phase: float) -> Floats:
    """Where the ticks point at one instant and half their lengths, (n, 2).

    In distances between ticks, y up; phase in rad.
    """
    return at_instant(ticks.currents, phase)


def _stepped(half_decades: int) -> float:
    """1 or 3 times a power of ten."""
    decade, odd = divmod(half_decades, 2)
    return 10.0**decade * (_HALF if odd else 1.0)


def _grid(sheet: SheetCurrent, step: float, view: tuple[float, float, float, float]) -> Floats:
    low = np.maximum(sheet.vertices.min(axis=0), view[:2])
    high = np.minimum(sheet.vertices.max(axis=0), view[2:])
    x, y = (
        (np.arange(floor(a / step), ceil(b / step)) + 0.5) * step
        for a, b in zip(low, high, strict=True)
    )
    return np.stack(np.meshgrid(x, y, indexing="ij"), axis=-1).reshape(-1, 2)


def _between(
    sheet: SheetCurrent, taken: Floats, step: float, view: tuple[float, float, float, float]
) -> Floats:
    """Middles of triangles, large ones first, that lie well away from all that is taken."""
    free = _FREE * step
    middles = sheet.vertices[sheet.triangles].mean(axis=1)
    inside = np.all((middles >= view[:2]) & (middles <= view[2:]), axis=1)
    order = [i for i in np.argsort(-sheet.areas) if inside[i]]
    cells: dict[tuple[int, int], list[tuple[float, float]]] = {}
    for x, y in taken.tolist():
        cells.setdefault((floor(x / free), floor(y / free)), []).append((x, y))
    found = []
    for x, y in middles[order].tolist():
        column, row = floor(x / free), floor(y / free)
        near = (
            one
            for i in (column - 1, column, column + 1)
            for j in (row - 1, row, row + 1)
            for one in cells.get((i, j), ())
        )
        if all((x - a) ** 2 + (y - b) ** 2 >= free**2 for a, b in near):
            cells.setdefault((column, row), []).append((x, y))
            found.append((x, y))
    return np.array(found).reshape(-1, 2)
