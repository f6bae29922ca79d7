"""What helps to put tiles together: marks in the overlaps and a small map of all pages."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.drawing.cells import Cell
from core.drawing.plan import OVERLAP, Block, Tile, joint_bands
from core.drawing.sheet import Anchor, Area, Box, Circle, Ink, Line, Purpose, Text
from core.shapes.outline import Outline, Vertex, rectangle

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

MAP_BOX: Final = Box(0.0, 0.0, 80e-3, 46e-3)

_ARM: Final = 3e-3  # of a registration cross
_LETTER: Final = 3e-3
_SMALL: Final = 2.2e-3
_HOW: Final = (
    "How the pages go together",
    "Cut one sheet on the dashed line, lay it",
    "on the other: crosses over crosses, A on A.",
)
_BETWEEN: Final = 12e-3  # from block to block on the map, as on the pages


def joint_marks(block: Block, tile: Tile, first: int) -> list[Ink]:
    """Crosses, letters and trim lines in the overlaps that a tile shows, in the block's place.

    Parameters
    ----------
    block : Block
    tile : Tile
        One of its tiles.
    first : int
        Number of the block's first letter: 0 is A.

    Returns
    -------
    list of Ink
        The very same ones for each tile that shows an overlap.
    """
    across, along = joint_bands(block)
    boxes = [tile.box for tile in block.tiles]
    left, right = min(box.left for box in boxes), max(box.right for box in boxes)
    bottom, top = min(box.bottom for box in boxes), max(box.top for box in boxes)
    inks = [Ink(Purpose.TRIM, Line(((x, bottom), (x, top)))) for x in across]
    inks += [Ink(Purpose.TRIM, Line(((left, y), (right, y)))) for y in along]
    rows = [box for box in boxes if box.left == left]
    columns = [box for box in boxes if box.top == top]
    joints = [
        *(((x, box.bottom), (x, box.top)) for box in rows for x in across),
        *(((box.left, y), (box.right, y)) for y in along[::-1] for box in columns),
    ]
    for number, ((x0, y0), (x1, y1)) in enumerate(joints, first):
        for part in (0.25, 0.75):
            x, y = x0 + part * (x1 - x0), y0 + part * (y1 - y0)
            if _near(tile.box, x, y):
                inks += _cross(x, y, _name(number))
    return inks


def _near(box: Box, x: float, y: float) -> bool:
    """Whether a cross at (x, y) may reach into a box."""
    room = 3.0 * _ARM
    return box.left - room < x < box.right + room and box.bottom - room < y < box.top + room


def _cross(x: float, y: float, name: str) -> list[Ink]:
    marks = (
        Line(((x - _ARM, y), (x + _ARM, y))),
        Line(((x, y - _ARM), (x, y + _ARM))),
        Circle(x, y, _ARM),
        Text(x + 1.1e-3, y + 1.3e-3, name, _LETTER),
    )
    return [Ink(Purpose.REGISTRATION, mark) for mark in marks]


def _name(number: int) -> str:
    """A to Z, then AA, AB and on."""
    letter = chr(ord("A") + number % 26)
    return letter if number < 26 else _name(number // 26 - 1) + letter


def map_cell(blocks: Sequence[Block] = ()) -> Cell:
    """Map of all pages, drawn small.

    Parameters
    ----------
    blocks : sequence of Block
        Of all pages; without them the room for the map alone.

    Returns
    -------
    Cell
        Always of the same size.
    """
    lines = _HOW if any(block.joints for block in blocks) else _HOW[:1]
    inks = [
        Ink(Purpose.NOTES, Text(0.0, MAP_BOX.top - 2.4e-3 - 3.1e-3 * i, line, _SMALL))
        for i, line in enumerate(lines)
    ]
    room_width, room_length = MAP_BOX.width, MAP_BOX.length - 12e-3
    boxes = [_bounds(block) for block in blocks]
    total = sum(box.width for box in boxes) + _BETWEEN * max(0, len(boxes) - 1)
    tallest = max((box.length for box in boxes), default=1.0)
    scale = min(room_width / max(total, 1e-3), room_length / tallest)
    x, page = 0.0, 1
    for block, box in zip(blocks, boxes, strict=True):
        inks += _small(block, scale, x - box.left * scale, -box.bottom * scale, page)
        x += (box.width + _BETWEEN) * scale
        page += len(block.tiles)
    return Cell("map", tuple(inks), MAP_BOX, whole=True)


def _bounds(block: Block) -> Box:
    boxes = [tile.box for tile in block.tiles]
    return Box(
        min(box.left for box in boxes),
        min(box.bottom for box in boxes),
        max(box.right for box in boxes),
        max(box.top for box in boxes),
    )


def _small(block: Block, scale: float, x: float, y: float, page: int) -> Iterable[Ink]:
    """Tiles of a block with their page numbers, and the outlines on them, drawn small."""
    for placed in block.placed:
        for outline in placed.cell.outlines:
            ring = Outline(
                tuple(
                    Vertex((v.x + placed.x) * scale + x, (v.y + placed.y) * scale + y, v.bulge)
                    for v in outline.vertices
                )
            )
            yield Ink(Purpose.DIMENSION, Area((ring,)))
    for number, tile in enumerate(block.tiles, page):
        trim = OVERLAP / 2
        left = tile.box.left + (trim if tile.column > 1 else 0.0)
        right = tile.box.right - (trim if tile.column < block.columns else 0.0)
        bottom = tile.box.bottom + (trim if tile.row < block.rows else 0.0)
        top = tile.box.top - (trim if tile.row > 1 else 0.0)
        centre = ((left + right) / 2 * scale + x, (bottom + top) / 2 * scale + y)
        yield Ink(
            Purpose.FRAME,
            Area((rectangle((right - left) * scale, (top - bottom) * scale, centre),)),
        )
        text = Text(centre[0], centre[1] - 0.9e-3, str(number), 2.6e-3, Anchor.MIDDLE)
        yield Ink(Purpose.NOTES, text)
