"""How far the instant model can be trusted on a layout, and why.

The limits are those of docs/live-errors.md: random designs, solved by the field solver.
"""

from __future__ import annotations

from math import log
from typing import TYPE_CHECKING, Final

from core.constants import SPEED_OF_LIGHT
from core.response.model import Reading, Trust, TrustLevel
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.layout.model import Layout
    from core.live.modes import ElementModes

THINNEST: Final = 0.008
"""Spacer height from which the match of a probe is told, free-space wavelengths."""

THICKEST: Final = 0.06
"""Spacer height up to which it is."""

THIN: Final = 0.03
"""Spacer height up to which resonances are good, free-space wavelengths."""

SOLVED: Final = 0.12
"""Spacer height up to which resonances were held against the field solver."""

SHORTEST_REACH: Final = 0.5
"""Ground plate beyond the element from which its pattern is that of an endless one, wavelengths."""

FARTHEST: Final = 1.3
"""Ratio of frequency and nearest resonance up to which the two modes tell anything."""

LONGEST_SIDE: Final = 0.7
"""Free-space wavelengths; beyond, the series for a mode's power does not hold."""

_ON_AXIS: Final = 0.01  # of a side: field of the other mode 30 dB down
_REMEDY: Final = "the field check will tell"
_TIED: Final = (Reading.MATCH, Reading.AXIAL_RATIO, Reading.BANDS, Reading.GAIN)


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
        The match of two branches is unknown, that of a probe on a spacer under 0.008 or over
        0.06 free-space wavelength too; so is the axial ratio where both modes are driven, and
        with either the bands. All of these and the gain are unknown where a strip is not over the
        ground plate, or where the two modes do not describe the element.
    """
    trust = {
        Reading.RESONANCE: _resonance_trust(layout),
        Reading.MATCH: _match_trust(layout),
        Reading.AXIAL_RATIO: _axial_ratio_trust(layout),
        Reading.GAIN: Trust(
            TrustLevel.ROUGH,
            "within 1 dB of the field solver on nine of ten solved designs",
            _REMEDY,
        ),
        Reading.EFFICIENCY: Trust(
            TrustLevel.ROUGH, "formulas for a thin substrate on an endless ground plane"
        ),
        Reading.PATTERN: _pattern_trust(layout),
    }
    tied = trust[Reading.MATCH], trust[Reading.AXIAL_RATIO]
    trust[Reading.BANDS] = next(
        (one for one in tied if one.level is TrustLevel.UNKNOWN), trust[Reading.MATCH]
    )
    lost = _lost_element(layout, element)
    if lost:
        unknown = Trust(TrustLevel.UNKNOWN, lost, _REMEDY)
        trust |= dict.fromkeys((*_TIED, Reading.EFFICIENCY, Reading.PATTERN), unknown)
    elif not layout.feed.over_ground:
        off = Trust(TrustLevel.UNKNOWN, "a strip is not over the ground plate", _REMEDY)
        trust |= dict.fromkeys(_TIED, off)
    return trust


def _resonance_trust(layout: Layout) -> Trust:
    height = _height(layout)
    if height <= THIN:
        return Trust(
            TrustLevel.GOOD,
            f"within 2 % of the field solver on spacers up to {THIN:g} wavelength",
        )
    if height <= SOLVED:
        return Trust(
            TrustLevel.ROUGH,
            f"within 4 % of the field solver on spacers up to {SOLVED:g} wavelength",
            _REMEDY,
        )
    reason = (
        f"the spacer is {height:.3f} wavelength thick and equations were held against the "
        f"field solver up to {SOLVED:g}"
    )
    return Trust(TrustLevel.ROUGH, reason, _REMEDY)


def _match_trust(layout: Layout) -> Trust:
    height = _height(layout)
    if _has_branches(layout):
        reason = (
            "equations leave the strips uncoupled, and with two branches the field solver's S11 "
            "typically differs by 0.4, as much as a match is worth"
        )
        return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)
    if height > THICKEST:
        reason = (
            f"the spacer is {height:.3f} wavelength thick and equations tell the match of a "
            f"probe up to {THICKEST:g}"
        )
        return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)
    if height < THINNEST:
        reason = (
            f"the spacer is {height:.4f} wavelength thick, and under {THINNEST:g} the band is "
            "narrower than equations tell the resonance"
        )
        return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)
    reason = (
        "with a probe the field solver's S11 typically differs by 0.12, nine of ten by under 0.22"
    )
    return Trust(TrustLevel.ROUGH, reason, _REMEDY)


def _axial_ratio_trust(layout: Layout) -> Trust:
    if _has_branches(layout) or not _is_on_axis(layout):
        reason = (
            "it hangs on a fraction of a per cent of the resonances, and the field solver's "
            "typically differs by 2.4 dB"
        )
        return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)
    return Trust(TrustLevel.ROUGH, "a probe on an axis of the element drives one mode", _REMEDY)


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


def _pattern_trust(layout: Layout) -> Trust:
    wavelength = SPEED_OF_LIGHT / layout.frequency
    if layout.ground_reach >= SHORTEST_REACH * wavelength:
        return Trust(TrustLevel.ROUGH, "slots over an endless ground plane, nothing behind it")
    reason = f"{_reach_text(layout.ground_reach)} and the pattern is that of an endless one"
    return Trust(TrustLevel.UNKNOWN, reason, _REMEDY)


def _has_branches(layout: Layout) -> bool:
    return len(layout.feed.arms) > 1


def _is_on_axis(layout: Layout) -> bool:
    """Tell whether a probe drives one mode alone, or all but alone."""
    landing = layout.feed.landings[0]
    apart = abs(landing.x) / layout.element_width, abs(landing.y) / layout.element_length
    return min(apart) < _ON_AXIS


def _height(layout: Layout) -> float:
    """Height of the spacer, free-space wavelengths."""
    return layout.height * layout.frequency / SPEED_OF_LIGHT


def _reach_text(reach: float) -> str:
    if reach < 0.0:
        return f"the element reaches {_mm(-reach)} beyond the ground plate"
    return f"the ground plate reaches {_mm(reach)} beyond the element"


def _ghz(frequency: float) -> str:
    return format_quantity(frequency, Quantity.FREQUENCY, digits=3)


def _mm(length: float) -> str:
    return format_quantity(length, Quantity.LENGTH, digits=3)
