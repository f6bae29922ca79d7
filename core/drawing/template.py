"""Cutting template, 1:1: every part with its dimensions, on as few pages as will do."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

from core.drawing.cells import Cell, part_cell
from core.drawing.joints import joint_marks, map_cell
from core.drawing.notes import notes_cell, title_block
from core.drawing.paper import Paper, paper_round
from core.drawing.parts import parts
from core.drawing.plan import Block, Tile, on_one_page, plan
from core.drawing.rules import rule_across, rule_along
from core.drawing.sheet import Ink, Sheet, grouped
from core.errors import ExportError

if TYPE_CHECKING:
    from core.design.model import Design
    from core.layout.model import Layout

MOST_PAGES: Final = 200


@dataclass(frozen=True)
class _Job:
    """What every page of a template says alike."""

    design: Design
    layout: Layout
    field_check: str
    mirrored: bool

    def cells(self) -> list[Cell]:
        """Notes, then the parts."""
        return [
            notes_cell(self.design, self.layout, self.mirrored),
            *(part_cell(part, self.mirrored) for part in parts(self.layout, self.mirrored)),
        ]


def template_pages(
    design: Design,
    layout: Layout,
    paper: Paper,
    *,
    field_check: str = "",
    mirrored: bool = False,
) -> tuple[Sheet, ...]:
    """Template over pages of a paper, upright or turned, whichever takes fewer.

    A part that fits a page is never cut by a joint; one that does not is tiled with overlap.

    Parameters
    ----------
    design : Design
    layout : Layout
        Of that design.
    paper : Paper
    field_check : str
        How the field solver has checked this very layout; empty where it has not.
    mirrored : bool
        Every part as seen from behind; words stay readable.

    Returns
    -------
    tuple of Sheet
        Same size each, x and y in m from the lower left corner of the paper.

    Raises
    ------
    ExportError
        If it would take more than `MOST_PAGES` pages.
    """
    job = _Job(design, layout, field_check, mirrored)
    cells = job.cells()
    papers = (paper, paper.turned)
    for one in papers:
        blocks = plan(cells, one.window.width, one.window.length)
        if _pages(blocks) == 1:
            return _sheets(job, one, blocks)
    with_map = [cells[0], map_cell(), *cells[1:]]
    plans = [(one, plan(with_map, one.window.width, one.window.length)) for one in papers]
    chosen, blocks = min(plans, key=lambda one: (_pages(one[1]), _joints(one[1])))
    if _pages(blocks) > MOST_PAGES:
        raise ExportError(
            f"the template would take {_pages(blocks)} pages of {paper.name}; "
            f"accepted: up to {MOST_PAGES}, so take a larger paper or the one sheet of the SVG"
        )
    return _sheets(job, chosen, _with_map(blocks))


def template_sheet(
    design: Design,
    layout: Layout,
    paper: Paper,
    *,
    field_check: str = "",
    mirrored: bool = False,
) -> Sheet:
    """Template on one sheet: the paper where it fits, else a sheet as large as it needs.

    Parameters
    ----------
    design : Design
    layout : Layout
        Of that design.
    paper : Paper
    field_check : str
        How the field solver has checked this very layout; empty where it has not.
    mirrored : bool
        Every part as seen from behind; words stay readable.

    Returns
    -------
    Sheet
    """
    job = _Job(design, layout, field_check, mirrored)
    cells = job.cells()
    for one in (paper, paper.turned):
        blocks = plan(cells, one.window.width, one.window.length)
        if _pages(blocks) == 1:
            return _sheets(job, one, blocks)[0]
    block, width, length = on_one_page(cells)
    return _sheets(job, paper_round(width, length), (block,))[0]


def _pages(blocks: tuple[Block, ...]) -> int:
    return sum(len(block.tiles) for block in blocks)


def _joints(blocks: tuple[Block, ...]) -> int:
    return sum(block.joints for block in blocks)


def _with_map(blocks: tuple[Block, ...]) -> tuple[Block, ...]:
    """The same blocks with the map of all of them drawn in the room kept for it."""
    drawn = map_cell(blocks)
    return tuple(
        replace(
            block,
            placed=tuple(
                replace(placed, cell=drawn) if placed.cell.name == drawn.name else placed
                for placed in block.placed
            ),
        )
        for block in blocks
    )


def _sheets(job: _Job, paper: Paper, blocks: tuple[Block, ...]) -> tuple[Sheet, ...]:
    total, joints = _pages(blocks), 0
    sheets: list[Sheet] = []
    for block in blocks:
        inks = [
            ink.moved(placed.x, placed.y) for placed in block.placed for ink in placed.cell.inks
        ]
        for tile in block.tiles:
            place = f"Page {len(sheets) + 1} of {total}"
            if len(block.tiles) > 1:
                name = block.placed[0].cell.name
                place += f": {name}, row {tile.row} of {block.rows}, "
                place += f"column {tile.column} of {block.columns}"
            shown = [*inks, *joint_marks(block, tile, joints)]
            sheets.append(_page(job, paper, shown, tile, place, len(block.tiles) > 1))
        joints += block.joints
    return tuple(sheets)


def _page(job: _Job, paper: Paper, inks: list[Ink], tile: Tile, place: str, clipped: bool) -> Sheet:
    """One page: what the tile shows of the drawing, with rules and title block."""
    window = paper.window
    x, y = window.left - tile.box.left, window.bottom - tile.box.bottom
    shown = [ink.moved(x, y) for ink in inks]
    around = [
        *rule_across(window.left, window.bottom - 1e-3),
        *rule_along(window.left - 1e-3, window.bottom),
        *title_block(job.design, paper, place, field_check=job.field_check, mirrored=job.mirrored),
    ]
    title = f"{job.design.name}, revision {job.design.revision}"
    if clipped:
        return Sheet(title, paper.box, (*grouped(shown, window), *grouped(around)))
    return Sheet(title, paper.box, grouped([*shown, *around]))
