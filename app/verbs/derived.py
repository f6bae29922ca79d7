"""What follows from a design by closed forms: for ``kerfwave show``."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

from app.verbs.output import table
from core.constants import SPEED_OF_LIGHT
from core.design.feed import DualEdge
from core.errors import LayoutError, OutOfRangeError
from core.layout.build import top_copper
from core.layout.model import Role
from core.lines.microstrip import line_properties
from core.live.element import edge_resistance, seed_length, seed_width
from core.live.modes import element_modes
from core.shapes.outline import polygon
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from core.design.model import Design
    from core.layout.model import Layout
    from core.live.modes import SideMode
    from core.shapes.outline import Region

_ROUTED: Final = (
    ("feed.first.landing", "first_landing_m", "first landing as routed"),
    ("feed.second.landing", "second_landing_m", "second landing as routed"),
    ("feed.delay_length", "delay_length_m", "delay strip as routed"),
)


@dataclass(frozen=True)
class Fact:
    """One derived value, SI, under a key with its unit, and as people read it."""

    key: str
    label: str
    value: float
    text: str


@dataclass(frozen=True)
class Group:
    """Facts of one of several alike, such as a strip."""

    kind: str
    name: str
    facts: tuple[Fact, ...]


@dataclass(frozen=True)
class Derived:
    """Everything derived from a design."""

    facts: tuple[Fact, ...]
    groups: tuple[Group, ...]

    def record(self) -> dict[str, Any]:
        """For programs: facts by key, and one list for each kind of group."""
        found: dict[str, Any] = _by_key(self.facts)
        for group in self.groups:
            found.setdefault(group.kind, []).append({"name": group.name, **_by_key(group.facts)})
        return found

    def text(self, indent: str) -> str:
        """For people: a line for each fact, and a table for each kind of group."""
        rows = [(fact.label, fact.text) for fact in self.facts if fact.text]
        parts = [table(rows, indent)]
        for kind in dict.fromkeys(group.kind for group in self.groups):
            alike = [group for group in self.groups if group.kind == kind]
            lines = [("", *(group.name for group in alike))]
            for facts in zip(*(group.facts for group in alike), strict=True):
                lines.append((facts[0].label, *(fact.text for fact in facts)))
            parts.append(table(lines, indent))
        return "\n".join(parts)


def derive(design: Design, layout: Layout) -> Derived:
    """Derived dimensions and closed forms of a design and its layout."""
    modes = element_modes(layout.element_width, layout.element_length, layout.stack, layout.foil)
    mean = (modes.x.frequency + modes.y.frequency) / 2
    facts = (
        *_distances(layout),
        *_routed(layout),
        _ratio("series_eps_r", "permittivity across", modes.substrate.eps_r),
        _ratio("series_loss_tangent", "loss tangent across", modes.substrate.loss_tangent),
        _fact("mean_resonance_hz", "mean of the resonances", mean, Quantity.FREQUENCY),
        *_seeds(layout, modes.substrate.eps_r),
        *_areas(layout),
    )
    sides = (_side("along x", modes.x), _side("along y", modes.y))
    return Derived(facts, (*sides, *_strips(design, layout)))


def _by_key(facts: Iterable[Fact]) -> dict[str, float]:
    return {fact.key: fact.value for fact in facts}


def _fact(key: str, label: str, value: float, kind: Quantity) -> Fact:
    return Fact(key, label, value, format_quantity(value, kind))


def _length(key: str, label: str, value: float) -> Fact:
    return _fact(key, label, value, Quantity.LENGTH)


def _ratio(key: str, label: str, value: float) -> Fact:
    return _fact(key, label, value, Quantity.RATIO)


def _quality(key: str, label: str, value: float) -> Fact:
    lossless = math.isinf(value)
    return Fact(key, label, value, "no loss" if lossless else f"{value:.4g}")


def _distances(layout: Layout) -> Iterator[Fact]:
    wavelength = SPEED_OF_LIGHT / layout.frequency
    for key, label, value in (
        ("height", "foil above ground", layout.height),
        ("ground_reach", "ground beyond element", layout.ground_reach),
        ("strip_clearance", "strips from element", layout.feed.clearance),
    ):
        if math.isfinite(value):
            waves = value / wavelength
            text = f"{format_quantity(value, Quantity.LENGTH)}, {waves:.3g} wavelength"
            yield Fact(f"{key}_m", label, value, text)
            yield Fact(f"{key}_wavelengths", "", waves, "")
    yield _length("wavelength_m", "wavelength in air", wavelength)


def _routed(layout: Layout) -> Iterator[Fact]:
    """Lengths that the route may have changed: what the strips really are."""
    drawn = {one.field: one.value for one in layout.dimensions}
    for field, key, label in _ROUTED:
        if field in drawn:
            yield _length(key, label, drawn[field])


def _seeds(layout: Layout, eps_r: float) -> Iterator[Fact]:
    """Sides of a linear element that the closed forms would begin with."""
    width = seed_width(layout.frequency, eps_r)
    length = seed_length(layout.frequency, width, layout.height, eps_r)
    yield _length("seed_width_m", "closed-form width", width)
    yield _length("seed_length_m", "closed-form length", length if length > 0.0 else math.nan)


def _areas(layout: Layout) -> Iterator[Fact]:
    try:
        top = _area(top_copper(layout))
    except LayoutError:
        top = math.nan  # copper that runs into itself has none, as a finding says
    ground = [one.region for one in layout.pieces if one.role is Role.GROUND_COPPER]
    for key, label, area in (
        ("top_copper_area_m2", "copper in front", top),
        ("ground_copper_area_m2", "copper of the ground", _area(ground)),
    ):
        yield Fact(key, label, area, f"{area * 1e4:.5g} cm²" if math.isfinite(area) else "unknown")


def _area(regions: Iterable[Region]) -> float:
    return sum(polygon(region).area for region in regions)


def _side(name: str, mode: SideMode) -> Group:
    """The resonance whose current flows along one side."""
    losses = mode.losses
    trapped = 1.0 / losses.surface_efficiency - 1.0
    resistance = edge_resistance(mode.width, mode.length, mode.frequency)
    facts = (
        _fact("frequency_hz", "resonance", mode.frequency, Quantity.FREQUENCY),
        _ratio("eps_eff", "effective permittivity", mode.eps_eff),
        _length("end_extension_m", "end extension", mode.extension),
        _quality("q", "Q", losses.total),
        _quality("q_space", "Q of the space wave", losses.space),
        _quality(
            "q_surface", "Q of surface waves", losses.space / trapped if trapped else math.inf
        ),
        _quality("q_conductor", "Q of the foil", losses.conductor),
        _quality("q_dielectric", "Q of the spacer", losses.dielectric),
        _fact("edge_resistance_ohm", "edge resistance", resistance, Quantity.RESISTANCE),
    )
    return Group("resonances", name, facts)


def _strips(design: Design, layout: Layout) -> Iterator[Group]:
    feed = design.feed
    if not isinstance(feed, DualEdge):
        return
    drawn = {one.field: one.value for one in layout.dimensions}
    strips = [
        ("first branch", feed.first.width, feed.first.gap),
        ("second branch", feed.second.width, feed.second.gap),
        ("delay strip", feed.delay_width, drawn["feed.delay_length"]),
        ("lead-in", feed.lead_in.width, feed.lead_in.length),
    ]
    for name, width, length in strips:
        if length > 0.0:
            yield Group("strips", name, _line(width, length, layout))


def _line(width: float, length: float, layout: Layout) -> tuple[Fact, ...]:
    impedance = eps_eff = wavelength = math.nan
    try:
        line = line_properties(
            width,
            layout.stack,
            layout.frequency,
            conductor_thickness=layout.foil.thickness,
            conductivity=layout.foil.conductivity,
        )
    except OutOfRangeError:
        pass  # the formulas do not reach such a strip: its values stay unknown
    else:
        impedance, eps_eff = float(line.characteristic_impedance), float(line.eps_eff)
        wavelength = float(line.guided_wavelength)
    return (
        _length("width_m", "width", width),
        _length("length_m", "length", length),
        _ratio("length_guided_wavelengths", "in guided wavelengths", length / wavelength),
        _fact("z0_ohm", "impedance", impedance, Quantity.RESISTANCE),
        _ratio("eps_eff", "effective permittivity", eps_eff),
        _length("guided_wavelength_m", "guided wavelength", wavelength),
    )
