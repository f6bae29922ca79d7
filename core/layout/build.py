"""From a Design to its Layout."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.design.feed import DualEdge
from core.errors import LayoutError
from core.layout.buildable import copper_findings, design_findings
from core.layout.dimensions import layout_dimensions
from core.layout.model import (
    Foil,
    Hole,
    Layout,
    Mark,
    MarkKind,
    Piece,
    Point,
    Port,
    Role,
)
from core.layout.network import feed_network, handedness
from core.layout.plates import GROUND, dielectric_stack, fold_lines, ground_reach, plates
from core.layout.route import Route, find_route
from core.layout.strips import strip_regions
from core.shapes.booleans import union
from core.shapes.outline import Region, mirrored, rectangle

if TYPE_CHECKING:
    from core.design.model import Design
    from core.findings import Finding

ELEMENT = "element"
BRANCHES = "branches"


def build_layout(design: Design) -> Layout:
    """Build the whole shape of a design.

    The right-hand antenna is drawn as stored; the left-hand one is its mirror image in x:
    copper, ground offset and holes.

    Parameters
    ----------
    design : Design

    Returns
    -------
    Layout
        What cannot be made is in its findings; nothing is clipped.
    """
    feed = design.feed
    route = find_route(design.element, feed, design.making) if isinstance(feed, DualEdge) else None
    layout, sign = _electrical(design, route), handedness(design)
    probe = (layout.feed.probe.x * sign, layout.feed.probe.y)
    copper, copper_problems = _top_copper(design, route)
    pieces = (*plates(design, probe), *copper)
    layout = replace(
        layout,
        pieces=pieces,
        holes=_holes(design, probe, pieces),
        marks=_marks(design, probe, pieces),
        dimensions=layout_dimensions(design, route),
        findings=(
            *(route.findings if route else ()),
            *design_findings(design, route, layout.feed),
            *copper_problems,
        ),
    )
    return layout if sign > 0 else mirrored_drawing(layout)


def electrical_layout(design: Design) -> Layout:
    """Layout with all that the live model reads and nothing drawn: no pieces, no findings.

    Takes a tenth of the time of `build_layout`, for sizing.

    Parameters
    ----------
    design : Design

    Returns
    -------
    Layout
    """
    feed = design.feed
    route = find_route(design.element, feed, design.making) if isinstance(feed, DualEdge) else None
    return _electrical(design, route)


def _electrical(design: Design, route: Route | None) -> Layout:
    network = feed_network(design, route)
    probe = network.probe
    return Layout(
        pieces=(),
        holes=(),
        marks=(),
        dimensions=(),
        ports=(Port("coax", probe.x, probe.y, probe.diameter, design.brief.impedance),),
        element_width=design.element.width,
        element_length=design.element.length,
        ground_reach=ground_reach(design),
        stack=dielectric_stack(design),
        foil=Foil(design.stock.foil.thickness, design.stock.foil.conductivity),
        feed=network,
        frequency=design.brief.frequency,
        findings=(),
    )


def top_copper(layout: Layout) -> tuple[Region, ...]:
    """Copper on the radiating side as it is cut: the pieces on it joined.

    Parameters
    ----------
    layout : Layout

    Returns
    -------
    tuple of Region
        Connected regions, largest first, arcs kept.
    """
    return union([piece.region for piece in layout.pieces if piece.role is Role.TOP_COPPER])


def _top_copper(
    design: Design, route: Route | None
) -> tuple[tuple[Piece, ...], tuple[Finding, ...]]:
    """Element and branches as pieces, with what is wrong with them; right-hand frame."""
    foil, z = design.stock.foil, design.stock.height
    element = Region(rectangle(design.element.width, design.element.length))
    pieces = [Piece(ELEMENT, Role.TOP_COPPER, element, z, foil.thickness, foil.name)]
    findings: tuple[Finding, ...] = ()
    if route is not None and isinstance(design.feed, DualEdge):
        strips = strip_regions(design.element, design.feed, route)
        findings = copper_findings(design, route, strips)
        for name, region in _joined_strips(strips).items():
            pieces.append(Piece(name, Role.TOP_COPPER, region, z, foil.thickness, foil.name))
    return tuple(pieces), findings


def _joined_strips(strips: dict[str, Region]) -> dict[str, Region]:
    """Strips as one piece; apart, where one runs into itself, which is refused elsewhere."""
    try:
        joined = union(list(strips.values()))
    except LayoutError:
        return strips
    return {
        BRANCHES if i == 0 else f"{BRANCHES} {i + 1}": region for i, region in enumerate(joined)
    }


def _holes(design: Design, probe: Point, pieces: tuple[Piece, ...]) -> tuple[Hole, ...]:
    pin = design.feed.probe
    spacers = tuple(piece.name for piece in pieces if piece.role is Role.SPACER and piece.cut)
    copper = ELEMENT if not isinstance(design.feed, DualEdge) else BRANCHES
    return (
        Hole("probe", *probe, pin.diameter, (*spacers, copper)),
        Hole("probe clearance", *probe, pin.clearance, (GROUND,)),
    )


def _marks(design: Design, probe: Point, pieces: tuple[Piece, ...]) -> tuple[Mark, ...]:
    """Scores that line the pieces up, and where to solder."""
    half_x, half_y = design.element.width / 2, design.element.length / 2
    on = [pieces[0], *(piece for piece in pieces if piece.role is Role.SPACER and piece.cut)]
    copper = ELEMENT if not isinstance(design.feed, DualEdge) else BRANCHES
    marks = [Mark("solder", MarkKind.PAD, (probe,), copper, design.feed.probe.pad)]
    for piece in on:
        marks.append(
            Mark("centre line x", MarkKind.SCORE, ((-half_x, 0.0), (half_x, 0.0)), piece.name)
        )
        marks.append(
            Mark("centre line y", MarkKind.SCORE, ((0.0, -half_y), (0.0, half_y)), piece.name)
        )
    marks += [Mark("turn over", MarkKind.FOLD, line, GROUND) for line in fold_lines(design)]
    tick = min(half_x, half_y) / 4
    for x in (-half_x, half_x):
        for y in (-half_y, half_y):
            inner_x, inner_y = (
                x - tick * (x > 0) + tick * (x < 0),
                y - tick * (y > 0) + tick * (y < 0),
            )
            marks.append(
                Mark(
                    "element corner",
                    MarkKind.SCORE,
                    ((inner_x, y), (x, y), (x, inner_y)),
                    on[-1].name,
                )
            )
    return tuple(marks)


def mirrored_drawing(layout: Layout) -> Layout:
    """Mirror everything drawn in x (x to -x).

    Parameters
    ----------
    layout : Layout

    Returns
    -------
    Layout
        Its feed network stays as it was: it is mirrored where it is made.
    """

    def flip(point: Point) -> Point:
        return (-point[0], point[1])

    return replace(
        layout,
        pieces=tuple(
            replace(
                piece,
                region=mirrored(piece.region),
                flaps=tuple(mirrored(flap) for flap in piece.flaps),
            )
            for piece in layout.pieces
        ),
        holes=tuple(replace(hole, x=-hole.x) for hole in layout.holes),
        marks=tuple(
            replace(mark, points=tuple(flip(point) for point in mark.points))
            for mark in layout.marks
        ),
        dimensions=tuple(
            replace(one, start=flip(one.end), end=flip(one.start)) for one in layout.dimensions
        ),
        findings=tuple(
            replace(one, location=flip(one.location)) if one.location else one
            for one in layout.findings
        ),
    )
