"""What cannot be made, and why: each finding names the parameter that cures it."""

from __future__ import annotations

from math import hypot
from typing import TYPE_CHECKING

import shapely

from core.design.feed import DualEdge, ProbeFeed
from core.findings import Finding, Severity
from core.layout.plates import ground_reach, longest_turnover, rim_distance
from core.shapes.outline import polygon
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.design.model import Design
    from core.layout.model import FeedNetwork
    from core.layout.route import Route
    from core.shapes.outline import Region

_TOLERANCE = 1e-9  # m


def design_findings(
    design: Design, route: Route | None, network: FeedNetwork
) -> tuple[Finding, ...]:
    """Findings that follow from lengths alone.

    Parameters
    ----------
    design : Design
    route : Route or None
        Of a dual-edge feed.
    network : FeedNetwork
        Of this design.

    Returns
    -------
    tuple of Finding
    """
    found = [*_ground_findings(design), *_turnover_findings(design)]
    if isinstance(design.feed, DualEdge) and route is not None:
        found += _strip_findings(design, design.feed)
        found += _landing_findings(design, design.feed, route)
        found += _cover_findings(design, network)
        probe, field = route.probe, "stock.ground"
    else:
        found += _probe_findings(design)
        feed = design.feed
        probe, field = (feed.x, feed.y) if isinstance(feed, ProbeFeed) else (0.0, 0.0), "feed.x"
    room = rim_distance(design, probe) - design.feed.probe.clearance / 2
    if room < design.making.edge_margin - _TOLERANCE:
        found.append(
            Finding(
                "hole-on-edge",
                Severity.REFUSAL,
                "The probe's clearance hole comes to "
                f"{_mm(room)} of the ground plate's rim; {design.making.process} needs "
                f"{_mm(design.making.edge_margin)}.",
                field,
                "Make the ground plate larger, or move the probe inwards.",
                probe,
            )
        )
    return tuple(found)


def copper_findings(design: Design, route: Route, strips: dict[str, Region]) -> tuple[Finding, ...]:
    """Findings that need the drawn copper: strips that touch what they must not.

    Parameters
    ----------
    design : Design
        With a dual-edge feed.
    route : Route
    strips : dict of str to Region
        As `strip_regions` makes them.

    Returns
    -------
    tuple of Finding
    """
    shapes = {name: polygon(region) for name, region in strips.items()}
    for name, shape in shapes.items():
        if not shape.is_valid:
            return (_crossing(f"The {name} runs into itself", _cure(name), route),)
    element = shapely.box(
        -design.element.width / 2,
        -design.element.length / 2,
        design.element.width / 2,
        design.element.length / 2,
    )
    gap = design.making.narrowest_gap
    found = []
    for name in ("pad", "lead-in", "delay strip"):
        if name in shapes and shapes[name].distance(element) < gap - _TOLERANCE:
            what = f"The {name} comes to {_mm(shapes[name].distance(element))} of the element"
            if name != "delay strip":  # its gaps have findings of their own
                found.append(_crossing(f"{what}; the gap must be {_mm(gap)}", _cure(name), route))
    if "lead-in" in shapes:
        found += _lead_findings(design, route, shapes)
    return tuple(found)


def _lead_findings(
    design: Design, route: Route, shapes: dict[str, shapely.Polygon]
) -> Iterator[Finding]:
    """Lead-in that comes back to the strips beyond the tee."""
    gap, feed = design.making.narrowest_gap, design.feed
    if not isinstance(feed, DualEdge):
        return
    reach = max(feed.lead_in.width, feed.delay_width, feed.first.width, feed.second.width) + gap
    away = shapely.union_all([shapes["lead-in"], shapes["pad"]]) - shapely.Point(route.tee).buffer(
        reach
    )
    others = shapely.union_all(
        [shapes["delay strip"], shapes["first branch"], shapes["second branch"]]
    )
    if not away.is_empty and away.distance(others) < gap - _TOLERANCE:
        yield _crossing(
            f"The lead-in comes to {_mm(away.distance(others))} of another strip; "
            f"the gap must be {_mm(gap)}",
            "feed.lead_in.length",
            route,
        )


def _crossing(message: str, field: str, route: Route) -> Finding:
    return Finding(
        "copper-too-close",
        Severity.REFUSAL,
        message + ".",
        field,
        "Move it away, or make it narrower.",
        route.probe,
    )


def _cure(strip: str) -> str:
    return {"pad": "feed.probe.pad", "lead-in": "feed.lead_in.length"}.get(
        strip, "feed.delay_length"
    )


def _ground_findings(design: Design) -> Iterator[Finding]:
    reach, margin = ground_reach(design), design.making.edge_margin
    if reach < margin - _TOLERANCE:
        field = "diameter" if hasattr(design.stock.ground, "diameter") else "width"
        yield Finding(
            "ground-too-small",
            Severity.REFUSAL,
            f"The ground plate reaches {_mm(reach)} beyond the element; "
            f"{design.making.process} needs {_mm(margin)}.",
            f"stock.ground.{field}",
            "Make the ground plate larger, or the element smaller.",
        )


def _turnover_findings(design: Design) -> Iterator[Finding]:
    turnover, longest = design.making.turnover, longest_turnover(design)
    if turnover > longest:
        why = (
            "a disc has no straight rim to fold foil over"
            if longest == 0.0
            else f"{_mm(longest)} is the most that folds flat on this ground plate"
        )
        yield Finding(
            "turnover-too-wide",
            Severity.REFUSAL,
            f"Foil of {_mm(turnover)} cannot be turned over the rim: {why}.",
            "making.turnover",
            "Set it to 0, or choose a larger rectangle as ground plate.",
        )


def _strip_findings(design: Design, feed: DualEdge) -> Iterator[Finding]:
    """Strips and gaps that the process cannot cut."""
    making = design.making
    widths = [
        ("first branch", "feed.first.width", feed.first.width),
        ("second branch", "feed.second.width", feed.second.width),
        ("delay strip", "feed.delay_width", feed.delay_width),
    ]
    if feed.lead_in.length > 0:
        widths.append(("lead-in", "feed.lead_in.width", feed.lead_in.width))
    for name, field, width in widths:
        if width < making.narrowest_strip - _TOLERANCE:
            yield Finding(
                "strip-too-narrow",
                Severity.REFUSAL,
                f"The {name} is {_mm(width)} wide; {making.process} cuts nothing narrower than "
                f"{_mm(making.narrowest_strip)}.",
                field,
                "Make it wider, or choose a finer process.",
            )
    gaps = (("first", feed.first.gap), ("second", feed.second.gap))
    for name, gap in gaps:
        if gap < making.narrowest_gap - _TOLERANCE:
            yield Finding(
                "gap-too-small",
                Severity.REFUSAL,
                f"The gap at the {name} branch is {_mm(gap)}; {making.process} leaves nothing "
                f"smaller than {_mm(making.narrowest_gap)}.",
                f"feed.{name}.gap",
                "Make it wider, or choose a finer process.",
            )


def _landing_findings(design: Design, feed: DualEdge, route: Route) -> Iterator[Finding]:
    """Branches that miss their side."""
    sides = (
        ("first", feed.first, route.first_landing, design.element.width, "element.width"),
        ("second", feed.second, route.second_landing, design.element.length, "element.length"),
    )
    for name, branch, landing, side, field in sides:
        if landing + branch.width / 2 > side + _TOLERANCE:
            yield Finding(
                "side-too-short",
                Severity.REFUSAL,
                f"The {name} branch lands {_mm(landing)} from the corner on a side of "
                f"{_mm(side)}: the side is too short for its width of {_mm(branch.width)}.",
                field,
                "Make the side longer, or move the landing point towards the corner.",
            )
        if landing < branch.width / 2 - _TOLERANCE:
            yield Finding(
                "landing-off-side",
                Severity.REFUSAL,
                f"The {name} branch lands {_mm(landing)} from the corner: half its width of "
                f"{_mm(branch.width)} hangs over the corner.",
                f"feed.{name}.landing",
                "Move the landing point away from the corner.",
            )


def _cover_findings(design: Design, network: FeedNetwork) -> Iterator[Finding]:
    if not network.over_ground:
        field = "diameter" if hasattr(design.stock.ground, "diameter") else "width"
        yield Finding(
            "strip-off-ground",
            Severity.WARNING,
            "A strip does not lie over the ground plate: the equations say nothing about it, "
            "a field check is needed.",
            f"stock.ground.{field}",
            "Make the ground plate larger, or bring the strips in.",
        )


def _probe_findings(design: Design) -> Iterator[Finding]:
    feed, element = design.feed, design.element
    if not isinstance(feed, ProbeFeed):
        return
    for field, place, side in (
        ("feed.x", feed.x, element.width),
        ("feed.y", feed.y, element.length),
    ):
        room = side / 2 - abs(place) - feed.probe.pad / 2
        if room < -_TOLERANCE:
            yield Finding(
                "hole-on-edge",
                Severity.REFUSAL,
                f"The probe's pad of {_mm(feed.probe.pad)} at {_mm(place)} hangs over the "
                f"element's edge by {_mm(-room)}.",
                field,
                "Move the probe inwards, or make the pad smaller.",
                (feed.x, feed.y),
            )
    if hypot(feed.x, feed.y) < feed.probe.diameter / 2:
        yield Finding(
            "probe-at-centre",
            Severity.WARNING,
            "The probe stands at the element's centre, where neither side can be excited.",
            "feed.x",
            "Move the probe outwards.",
            (feed.x, feed.y),
        )


def _mm(value: float) -> str:
    return format_quantity(value, Quantity.LENGTH, digits=4)
