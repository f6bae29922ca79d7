"""Distances worth drawing: each shows one parameter, or a length that follows from several."""

from __future__ import annotations

from typing import TYPE_CHECKING

from core.design.feed import DualEdge
from core.design.stock import DiscGround
from core.layout.model import Dimension

if TYPE_CHECKING:
    from core.design.model import Design
    from core.layout.model import Point
    from core.layout.route import Route


def layout_dimensions(design: Design, route: Route | None) -> tuple[Dimension, ...]:
    """Dimensions of a layout, right-hand frame.

    Parameters
    ----------
    design : Design
    route : Route or None
        Of a dual-edge feed.

    Returns
    -------
    tuple of Dimension
    """
    element, feed = design.element, design.feed
    half_x, half_y = element.width / 2, element.length / 2
    out = 0.12 * min(element.width, element.length)
    found = [
        Dimension(
            "element.width",
            "width",
            (-half_x, half_y),
            (half_x, half_y),
            element.width,
            out,
        ),
        Dimension(
            "element.length",
            "length",
            (-half_x, -half_y),
            (-half_x, half_y),
            element.length,
            out,
        ),
        *_ground_dimensions(design, out),
    ]
    if isinstance(feed, DualEdge) and route is not None:
        found += _dual_edge_dimensions(design, feed, route, out)
    elif not isinstance(feed, DualEdge):
        found += [
            Dimension("feed.x", "probe x", (0.0, feed.y), (feed.x, feed.y), feed.x, 0.0),
            Dimension("feed.y", "probe y", (feed.x, 0.0), (feed.x, feed.y), feed.y, 0.0),
        ]
    return tuple(found)


def _ground_dimensions(design: Design, out: float) -> list[Dimension]:
    ground = design.stock.ground
    x, y = ground.offset_x, ground.offset_y
    if isinstance(ground, DiscGround):
        radius = ground.diameter / 2
        return [
            Dimension(
                "stock.ground.diameter",
                "ground diameter",
                (x - radius, y),
                (x + radius, y),
                ground.diameter,
                radius + out,
            )
        ]
    half_x, half_y = ground.width / 2, ground.length / 2
    return [
        Dimension(
            "stock.ground.width",
            "ground width",
            (x - half_x, y + half_y),
            (x + half_x, y + half_y),
            ground.width,
            out,
        ),
        Dimension(
            "stock.ground.length",
            "ground length",
            (x - half_x, y - half_y),
            (x - half_x, y + half_y),
            ground.length,
            out,
        ),
    ]


def _dual_edge_dimensions(
    design: Design, feed: DualEdge, route: Route, out: float
) -> list[Dimension]:
    right, bottom = design.element.width / 2, -design.element.length / 2
    start, end = route.strip[0], route.strip[-1]
    half = feed.delay_width / 2
    corner: Point = (right, bottom)
    x, y = start[0] - feed.first.width / 2, end[1] + feed.second.width / 2
    first_gap, second_gap = feed.first.gap, feed.second.gap
    rows: list[tuple[str, str, Point, Point, float, float]] = [
        ("first.landing", "first landing", (start[0], bottom), corner, route.first_landing, out),
        ("second.landing", "second landing", corner, (right, end[1]), route.second_landing, out),
        ("first.gap", "first gap", (x, bottom), (x, start[1] + half), first_gap, -out / 2),
        ("second.gap", "second gap", (right, y), (end[0] - half, y), second_gap, out / 2),
        (
            "delay_width",
            "delay strip width",
            (end[0] - half, end[1]),
            (end[0] + half, end[1]),
            feed.delay_width,
            -out / 2,
        ),
        ("delay_length", "delay strip length", start, end, route.strip_length, -out),
    ]
    if len(route.lead) > 1:
        lead = feed.lead_in.length
        rows.append(("lead_in.length", "lead-in length", route.lead[0], route.lead[-1], lead, -out))
    return [Dimension(f"feed.{row[0]}", *row[1:]) for row in rows]
