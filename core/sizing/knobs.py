"""What sizing may turn, and how far: unit boxes that stand for designs.

Each knob runs from 0 to 1 between its limits, evenly in its logarithm where it is a width.
The limits come from the process, the element and the ground plate, so that every corner of
the box is a design that can be cut.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from math import exp, log
from typing import TYPE_CHECKING

import numpy as np

from core.design.feed import Branch, DualEdge, LeadIn, ProbeFeed
from core.design.model import Element

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.model import Design

    Floats = NDArray[np.float64]

Rounding = Callable[[float], float]

GRID = 1e-5  # m; sized lengths are whole hundredths of a millimetre
_SIDE_RANGE = 1.3
_NARROWEST_RATIO = 0.012  # width over spacer height; the line formulas begin at 0.01
_LEAST_TEE = 1e-5  # of the strip's half: a length of 0 or one that has a meaning
_MOST_APART = 0.4  # of the sides of a nearly square element
_EDGE = 0.02  # of a side, kept free at the corner and short of the middle


@dataclass(frozen=True)
class Knob:
    """One thing to turn.

    Attributes
    ----------
    label : str
        For the reason that is given when it stops at a limit.
    low, high : float
        m, or a fraction.
    start : float
    even_in_log : bool
    low_reason, high_reason : str
        What the limit is, in words.
    """

    label: str
    low: float
    high: float
    start: float
    even_in_log: bool = False
    low_reason: str = ""
    high_reason: str = ""

    def value(self, turn: float) -> float:
        """Value at a turn from 0 to 1."""
        if self.even_in_log:
            return exp(log(self.low) + turn * (log(self.high) - log(self.low)))
        return self.low + turn * (self.high - self.low)

    def turn(self, value: float) -> float:
        """Turn at a value, beyond 0 or 1 where that is beyond the limits."""
        if self.even_in_log:
            return (log(value) - log(self.low)) / (log(self.high) - log(self.low))
        return (value - self.low) / (self.high - self.low)

    @property
    def start_turn(self) -> float:
        """Turn of the start, kept off the limits so that it can move both ways."""
        return min(max(self.turn(self.start), 0.02), 0.98)


@dataclass(frozen=True)
class Box:
    """A family of designs: its knobs, and the way from their values to a design.

    Attributes
    ----------
    knobs : tuple of Knob
    place : callable
        From the knobs' values, in order, and a way to round lengths, to a Design.
    """

    knobs: tuple[Knob, ...]
    place: Callable[[list[float], Rounding], Design]

    @property
    def start(self) -> Floats:
        """Point of the unit box to search from."""
        return np.array([knob.start_turn for knob in self.knobs])

    def design(self, turns: Floats, rounding: Rounding) -> Design:
        """Design at a point of the unit box, its lengths rounded."""
        pairs = zip(self.knobs, turns, strict=True)
        return self.place([knob.value(float(turn)) for knob, turn in pairs], rounding)

    def limits_reached(self, turns: Floats) -> str:
        """Say which knobs stand at a limit, joined by "and"; nothing where none does."""
        stops = []
        for knob, turn in zip(self.knobs, turns, strict=True):
            if turn < 0.01 and knob.low_reason:
                stops.append(f"the {knob.label} is at {knob.low_reason}")
            if turn > 0.99 and knob.high_reason:
                stops.append(f"the {knob.label} is at {knob.high_reason}")
        return " and ".join(stops)


def probe_boxes(design: Design, side: float, quality: float) -> tuple[Box, ...]:
    """Families of probe-fed designs for circular polarisation.

    Parameters
    ----------
    design : Design
        With a probe feed.
    side : float
        Resonant side of a square element at the brief's frequency, m.
    quality : float
        Q of its mode.

    Returns
    -------
    tuple of Box
        The probe near the diagonal of a nearly square element; the shorter side along x,
        which makes the right-hand sense.
    """
    # Balanis' rule for the two sides, first order in 1/Q; not for a spacer that leaves no Q.
    apart = min(1.0 / quality, _MOST_APART)
    width, length = side * (1 - apart / 2), side * (1 + apart / 2)
    place_x = Knob("probe x", 0.02, 1.0, 0.35, high_reason="the element's edge")
    place_y = Knob("probe y", 0.02, 1.0, 0.35, high_reason="the element's edge")

    def place(values: list[float], rounding: Rounding) -> Design:
        element = Element(rounding(values[0]), rounding(values[1]))
        return _probe_design(design, element, values[2], values[3], rounding)

    return (Box((_side("width", width), _side("length", length), place_x, place_y), place),)


def linear_boxes(design: Design, width: float, length: float) -> tuple[Box, ...]:
    """Families of probe-fed designs for linear polarisation along y.

    Parameters
    ----------
    design : Design
        With a probe feed.
    width, length : float
        Sides from closed forms; the length resonates, m.

    Returns
    -------
    tuple of Box
        First the probe alone moves, then the length too.
    """
    place_y = Knob("probe y", 0.02, 1.0, 0.35, high_reason="the element's edge")

    def move(values: list[float], rounding: Rounding) -> Design:
        element = Element(rounding(width), rounding(length))
        return _probe_design(design, element, 0.0, values[0], rounding)

    def both(values: list[float], rounding: Rounding) -> Design:
        element = Element(rounding(width), rounding(values[0]))
        return _probe_design(design, element, 0.0, values[1], rounding)

    return Box((place_y,), move), Box((_side("length", length), place_y), both)


def fixed_element_boxes(boxes: tuple[Box, ...], element: Element) -> tuple[Box, ...]:
    """The same families with the element held as given.

    Parameters
    ----------
    boxes : tuple of Box
    element : Element

    Returns
    -------
    tuple of Box
    """
    held = {"width": element.width, "length": element.length}
    return tuple(_held(box, held) for box in boxes)


def dual_edge_boxes(
    design: Design, side: float, wavelength: float, lead_room: float
) -> tuple[Box, ...]:
    """Families of dual-edge designs: branches near the corner, at mid-side, with a lead-in.

    Parameters
    ----------
    design : Design
        With a dual-edge feed; its gaps are kept.
    side : float
        Resonant side of a square element at the brief's frequency, m.
    wavelength : float
        Guided, on a strip of middling width, m.
    lead_room : float
        Longest lead-in that the ground plate has room for, m.

    Returns
    -------
    tuple of Box
    """
    corner = _DualEdge(design, side, wavelength, lead_room, landing=0.25, tee=0.0)
    middle = _DualEdge(design, side, wavelength, lead_room, landing=0.9, tee=0.5)
    boxes = [corner.box(lead=False), middle.box(lead=False)]
    if lead_room > design.making.narrowest_strip:
        boxes += [corner.box(lead=True), middle.box(lead=True)]
    return tuple(boxes)


@dataclass(frozen=True)
class _DualEdge:
    """What the families of dual-edge designs share, and where they start."""

    design: Design
    side: float
    wavelength: float
    lead_room: float
    landing: float  # start, as a fraction of the way from corner to middle
    tee: float  # start, as a fraction of the way to the strip's middle

    def box(self, lead: bool) -> Box:
        """Family with or without a lead-in."""
        knobs = [
            _side("width", self.side),
            _side("length", self.side),
            Knob("first landing", 0.0, 1.0, self.landing),
            Knob("second landing", 0.0, 1.0, self.landing),
            self._width("first branch"),
            self._width("second branch"),
            self._width("delay strip"),
            Knob("tee", _LEAST_TEE, 0.98, self.tee),
        ]
        if lead:
            low = min(self.design.making.narrowest_strip, 0.5 * self.lead_room)
            high = min(self.lead_room, 0.35 * self.wavelength)
            knobs += [
                Knob(
                    "lead-in length",
                    low,
                    high,
                    0.7 * high,
                    high_reason="the room on the ground plate",
                ),
                self._width("lead-in"),
            ]
        return Box(tuple(knobs), self._place)

    def _width(self, label: str) -> Knob:
        making = self.design.making
        height = self.design.stock.height
        narrowest = max(making.narrowest_strip, 2 * GRID, _NARROWEST_RATIO * height)
        widest = max(0.2 * self.side, 2.0 * narrowest)
        return Knob(
            label,
            narrowest,
            widest,
            (narrowest * widest) ** 0.5,
            even_in_log=True,
            low_reason=f"the narrowest strip that {making.process} cuts",
            high_reason="a fifth of the element's side",
        )

    def _place(self, values: list[float], rounding: Rounding) -> Design:
        feed = self.design.feed
        assert isinstance(feed, DualEdge)
        width, length = rounding(values[0]), rounding(values[1])
        first_width, second_width, delay_width = (rounding(value) for value in values[4:7])
        first = rounding(_landing(values[2], width, first_width))
        second = rounding(_landing(values[3], length, second_width))
        gaps = feed.first.gap + feed.second.gap
        # Exactly the way round the corner.
        delay_length = rounding(first + second + gaps + delay_width)
        lead = LeadIn(0.0, delay_width)
        if len(values) > 8:
            lead = LeadIn(rounding(values[8]), rounding(values[9]), feed.lead_in.bends)
        return replace(
            self.design,
            element=Element(width, length),
            feed=replace(
                feed,
                first=Branch(first, feed.first.gap, first_width),
                second=Branch(second, feed.second.gap, second_width),
                delay_width=delay_width,
                delay_length=delay_length,
                tee=rounding(values[7] * delay_length / 2),
                lead_in=lead,
            ),
        )


def on_grid(value: float) -> float:
    """Length rounded to what a drawing shows, m.

    Parameters
    ----------
    value : float
        m.

    Returns
    -------
    float
    """
    return round(value / GRID) / round(1 / GRID)


def _landing(fraction: float, side: float, width: float) -> float:
    """Landing point between the corner and the middle of a side."""
    nearest, farthest = width / 2 + _EDGE * side, side / 2
    return nearest + fraction * (farthest - nearest)


def _side(label: str, start: float) -> Knob:
    return Knob(
        label, start / _SIDE_RANGE, start * _SIDE_RANGE, start, True, "its range", "its range"
    )


def _probe_design(
    design: Design, element: Element, x: float, y: float, rounding: Rounding
) -> Design:
    """Probe at fractions of the way from the centre to where its pad meets the edge."""
    feed = design.feed
    assert isinstance(feed, ProbeFeed)
    room = feed.probe.pad / 2 + design.making.narrowest_gap
    reach_x, reach_y = element.width / 2 - room, element.length / 2 - room
    return replace(
        design,
        element=element,
        feed=replace(feed, x=rounding(x * max(reach_x, 0.0)), y=rounding(y * max(reach_y, 0.0))),
    )


def _held(box: Box, held: dict[str, float]) -> Box:
    """Family with the knobs of the sides taken out and set."""
    free = tuple(knob for knob in box.knobs if knob.label not in held)

    def place(values: list[float], rounding: Rounding) -> Design:
        rest = iter(values)
        full = [held[knob.label] if knob.label in held else next(rest) for knob in box.knobs]
        return replace(box.place(full, rounding), element=Element(**held))

    return Box(free, place)
