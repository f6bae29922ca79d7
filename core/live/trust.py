"""How far the instant model can be trusted on a layout, and why.

The limits come from solved examples: beyond them match and axial ratio of the equations have
nothing to do with those of the antenna.
"""

from __future__ import annotations

from math import log
from typing import TYPE_CHECKING, Final

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.lines.discontinuities import open_end_extension_kirschning
from core.live.element import edge_resistance, resonant_frequency
from core.response.model import Reading, Trust, TrustLevel
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.layout.model import Layout
    from core.live.modes import ElementModes

THICKEST: Final = 0.06
"""Spacer height up to which match and axial ratio are told, free-space wavelengths."""

SHORTEST_REACH: Final = 0.5
"""Ground plate beyond the element from which it is as good as infinite, wavelengths."""

FARTHEST: Final = 1.3
"""Ratio of frequency and nearest resonance up to which the two modes tell anything."""

LONGEST_SIDE: Final = 0.7
"""Free-space wavelengths; beyond, the series for a mode's power does not hold."""

_CLOSE_SPREAD: Final = 0.01  # of two closed forms for the resonance that agree
_REMEDY: Final = "a field check or a measurement will tell"


def judge_trust(layout: Layout, element: ElementModes) -> Mapping[Reading, Trust]:
    """Say how far each reading of the instant model can be trusted.

    Parameters
    ----------
    layout : Layout
    element : ElementModes
        Of the same layout.

    Returns
    -------
    mapping of Reading to Trust
        Match, axial ratio, bands and gain are unknown where the spacer is over 0.06
        free-space wavelength thick, the ground plate reaches less than half a wavelength
        beyond the element, a strip runs nearer to the element than the spacer is thick, or a
        strip is not over the ground plate.
    """
    shift = _resonance_spread(element)
    closeness = TrustLevel.GOOD if shift <= _CLOSE_SPREAD else TrustLevel.ROUGH
    trust = {
        Reading.RESONANCE: Trust(closeness, _resonance_reason(layout, shift)),
        Reading.EFFICIENCY: Trust(
            TrustLevel.ROUGH, "formulas for a thin substrate on an endless ground plane"
        ),
        Reading.PATTERN: _pattern_trust(layout),
    }
    lost = _lost_element(layout, element)
    if lost:
        for reading in (Reading.EFFICIENCY, Reading.PATTERN):
            trust[reading] = Trust(TrustLevel.UNKNOWN, lost, _REMEDY)
    broken = [*_broken_limits(layout), *([lost] if lost else [])]
    if broken:
        tied = Trust(TrustLevel.UNKNOWN, "; ".join(broken), _REMEDY)
    else:
        reason = (
            f"resonances may be off by {_percent(shift)} and resistances by "
            f"{_percent(_resistance_spread(element))}: as far as published formulas differ"
        )
        tied = Trust(TrustLevel.ROUGH, reason, _REMEDY)
    for reading in (Reading.MATCH, Reading.AXIAL_RATIO, Reading.BANDS, Reading.GAIN):
        trust[reading] = tied
    return trust


def _lost_element(layout: Layout, element: ElementModes) -> str:
    """What keeps the two modes from telling anything, in words; empty where nothing does."""
    ratios = [layout.frequency / mode.frequency for mode in (element.x, element.y)]
    if all(abs(log(ratio)) > log(FARTHEST) for ratio in ratios):
        nearest = min(
            (element.x, element.y), key=lambda mode: abs(mode.frequency - layout.frequency)
        )
        resonance, asked = _ghz(nearest.frequency), _ghz(layout.frequency)
        return f"the element resonates at {resonance}, too far from {asked} for equations to follow"
    longest = max(layout.element_width, layout.element_length)
    wavelength = SPEED_OF_LIGHT / layout.frequency
    if longest > LONGEST_SIDE * wavelength:
        return (
            f"a side is {longest / wavelength:.2f} wavelength long and equations hold "
            f"up to {LONGEST_SIDE:g}"
        )
    return ""


def _broken_limits(layout: Layout) -> list[str]:
    """What makes the equations void, in words with numbers."""
    wavelength = SPEED_OF_LIGHT / layout.frequency
    height, reach, clearance = layout.height, layout.ground_reach, layout.feed.clearance
    broken = []
    if height > THICKEST * wavelength:
        broken.append(
            f"the spacer is {height / wavelength:.3f} wavelength thick and equations hold "
            f"up to {THICKEST:g}"
        )
    if reach < SHORTEST_REACH * wavelength:
        needed = _mm(SHORTEST_REACH * wavelength)
        broken.append(f"{_reach_text(reach)} and equations need half a wavelength, {needed}")
    if clearance < height:
        broken.append(
            f"a strip runs {_mm(clearance)} from the element, nearer than the spacer is "
            f"thick, {_mm(height)}"
        )
    if not layout.feed.over_ground:
        broken.append("a strip is not over the ground plate")
    return broken


def _resonance_reason(layout: Layout, shift: float) -> str:
    wavelength = SPEED_OF_LIGHT / layout.frequency
    reason = f"two published end extensions put the resonance {_percent(shift)} apart"
    if layout.height > THICKEST * wavelength:
        reason += ", and measured elements on thick spacers lie up to 17 % below"
    return reason


def _pattern_trust(layout: Layout) -> Trust:
    wavelength = SPEED_OF_LIGHT / layout.frequency
    if layout.ground_reach >= SHORTEST_REACH * wavelength:
        return Trust(TrustLevel.ROUGH, "slots over an endless ground plane, nothing behind it")
    reason = f"{_reach_text(layout.ground_reach)} and the pattern is that of an endless one"
    return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)


def _resonance_spread(element: ElementModes) -> float:
    """Largest relative difference of two closed forms for the resonance of a side."""
    height, eps_r = element.substrate.thickness, element.substrate.eps_r
    spread = 0.0
    for mode in (element.x, element.y):
        extension = open_end_extension_kirschning(mode.width, height, eps_r, mode.eps_eff)
        other = resonant_frequency(mode.length, mode.eps_eff, extension)
        spread = max(spread, abs(other / mode.frequency - 1.0))
    return spread


def _resistance_spread(element: ElementModes) -> float:
    """Largest relative difference of two closed forms for the resistance at an edge."""
    spread = 0.0
    for mode in (element.x, element.y):
        reactance = 1.0 / (TWO_PI * mode.frequency * element.capacitance)
        slots = edge_resistance(mode.width, mode.length, mode.frequency)
        spread = max(spread, abs(slots / (2.0 * mode.losses.space * reactance) - 1.0))
    return spread


def _reach_text(reach: float) -> str:
    if reach < 0.0:
        return f"the element reaches {_mm(-reach)} beyond the ground plate"
    return f"the ground plate reaches {_mm(reach)} beyond the element"


def _percent(part: float) -> str:
    return f"{100.0 * part:.1f} %"


def _ghz(frequency: float) -> str:
    return format_quantity(frequency, Quantity.FREQUENCY, digits=3)


def _mm(length: float) -> str:
    return format_quantity(length, Quantity.LENGTH, digits=3)
