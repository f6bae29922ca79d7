"""Which cell goes on which page: what fits a page stays whole, what does not is tiled.

Cells keep their order. A block is either some cells that share one page or one cell spread
over tiles that overlap.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, inf
from typing import TYPE_CHECKING, Final

from core.drawing.sheet import Box

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.drawing.cells import Cell

OVERLAP: Final = 10e-3
_GAP: Final = 7e-3  # between cells on a page
_SLIDES: Final = (0.5, 0.25, 0.75, 0.0, 1.0)  # how much of the spare room goes before the cell
_CLOSE: Final = 1e-9


@dataclass(frozen=True)
class Placed:
    """A cell and how far it is moved, m."""

    cell: Cell
    x: float
    y: float


@dataclass(frozen=True)
class Tile:
    """Part of a block that one page shows; rows are counted from the top."""

    row: int
    column: int
    box: Box


@dataclass(frozen=True)
class Block:
    """Cells that are drawn together, and the tiles that show them.

    Attributes
    ----------
    placed : tuple of Placed
    rows, columns : int
    tiles : tuple of Tile
        Row by row from the top left, m.
    """

    placed: tuple[Placed, ...]
    rows: int
    columns: int
    tiles: tuple[Tile, ...]

    @property
    def joints(self) -> int:
        """How many pairs of tiles lie side by side."""
        return self.rows * (self.columns - 1) + self.columns * (self.rows - 1)


def plan(cells: Sequence[Cell], width: float, length: float) -> tuple[Block, ...]:
    """Fewest pages for cells in their order; of equal ones those with fewest joints.

    Parameters
    ----------
    cells : sequence of Cell
        Those that are never spread must fit a page.
    width, length : float
        Of the part of a page that may be used, m.

    Returns
    -------
    tuple of Block
    """
    best: list[tuple[float, float, tuple[Block, ...]]] = [(0, 0, ())]
    for end in range(1, len(cells) + 1):
        choice: tuple[float, float, tuple[Block, ...]] = (inf, inf, ())
        for start in range(end - 1, -1, -1):
            block = _block(cells[start:end], width, length)
            if block is None:
                break
            pages, joints, before = best[start]
            pages, joints = pages + len(block.tiles), joints + block.joints
            if (pages, joints) < choice[:2]:
                choice = (pages, joints, (*before, block))
        best.append(choice)
    return best[-1][2]


def on_one_page(cells: Sequence[Cell]) -> tuple[Block, float, float]:
    """All cells on one page as large as they need.

    Parameters
    ----------
    cells : sequence of Cell

    Returns
    -------
    block : Block
    width, length : float
        Of the part of the page that it uses, m.
    """
    widest = max(cell.box.width for cell in cells)
    choices = {widest}
    for start in range(len(cells)):
        total = -_GAP
        for cell in cells[start:]:
            total += cell.box.width + _GAP
            choices.add(max(total, widest))
    shapes = []
    for width in sorted(choices):
        length = _height(_shelves(cells, width))
        shapes.append((width + length, width, length))
    _, width, length = min(shapes)
    return _one_page(_shelves(cells, width), width, length), width, length


def _block(cells: Sequence[Cell], width: float, length: float) -> Block | None:
    """Block of these cells; None where they do not fit one page together."""
    if all(cell.box.width <= width + _CLOSE for cell in cells):
        shelves = _shelves(cells, width)
        if _height(shelves) <= length + _CLOSE:
            return _one_page(shelves, width, length)
    return _tiled(cells[0], width, length) if len(cells) == 1 and not cells[0].whole else None


def _shelves(cells: Sequence[Cell], width: float) -> list[list[Cell]]:
    """Cells side by side in shelves, from the bottom up."""
    shelves: list[list[Cell]] = [[]]
    for cell in cells:
        if shelves[-1] and _breadth([*shelves[-1], cell]) > width + _CLOSE:
            shelves.append([])
        shelves[-1].append(cell)
    return shelves


def _breadth(shelf: Sequence[Cell]) -> float:
    return sum(cell.box.width for cell in shelf) + _GAP * (len(shelf) - 1)


def _height(shelves: Sequence[Sequence[Cell]]) -> float:
    tallest = [max(cell.box.length for cell in shelf) for shelf in shelves]
    return sum(tallest) + _GAP * (len(shelves) - 1)


def _one_page(shelves: list[list[Cell]], width: float, length: float) -> Block:
    """Spread shelves over a page: each centred, the room between them equal."""
    spare = (length - _height(shelves)) / len(shelves)
    placed = []
    y = 0.0 if len(shelves) > 1 else spare / 2
    for shelf in shelves:
        tallest = max(cell.box.length for cell in shelf)
        x = (width - _breadth(shelf)) / 2
        for cell in shelf:
            low = y + (tallest - cell.box.length) / 2
            placed.append(Placed(cell, x - cell.box.left, low - cell.box.bottom))
            x += cell.box.width + _GAP
        y += tallest + _GAP + spare
    return Block(tuple(placed), 1, 1, (Tile(1, 1, Box(0.0, 0.0, width, length)),))


def _tiled(cell: Cell, width: float, length: float) -> Block:
    """Spread a cell over tiles, joints clear of the places to spare where that can be."""
    columns, lefts = _cuts(cell.box.left, cell.box.right, width, [x for x, _ in cell.spared])
    rows, bottoms = _cuts(cell.box.bottom, cell.box.top, length, [y for _, y in cell.spared])
    tiles = tuple(
        Tile(
            row + 1,
            column + 1,
            Box(
                lefts[column],
                bottoms[rows - 1 - row],
                lefts[column] + width,
                bottoms[rows - 1 - row] + length,
            ),
        )
        for row in range(rows)
        for column in range(columns)
    )
    return Block((Placed(cell, 0.0, 0.0),), rows, columns, tiles)


def _cuts(low: float, high: float, window: float, spared: list[float]) -> tuple[int, list[float]]:
    """How many windows cover low to high, and where each starts."""
    count = max(1, ceil((high - low - OVERLAP) / (window - OVERLAP) - 1e-9))
    step = window - OVERLAP
    spare = count * step + OVERLAP - (high - low)
    for slide in _SLIDES:
        starts = [low - slide * spare + i * step for i in range(count)]
        if not any(start <= at <= start + OVERLAP for start in starts[1:] for at in spared):
            return count, starts
    return count, [low - spare / 2 + i * step for i in range(count)]


def joint_bands(block: Block) -> tuple[list[float], list[float]]:
    """Middles of the overlaps between columns (x) and between rows (y).

    Parameters
    ----------
    block : Block

    Returns
    -------
    across, along : list of float
        Rising, m.
    """
    lefts = sorted({tile.box.left for tile in block.tiles})
    bottoms = sorted({tile.box.bottom for tile in block.tiles})
    half = OVERLAP / 2
    return [left + half for left in lefts[1:]], [bottom + half for bottom in bottoms[1:]]
