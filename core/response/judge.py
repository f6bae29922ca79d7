"""A response held against its brief, in sentences.

A reading that its engine cannot vouch for is judged unknown, never met; one that it only
estimates is likely at best.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np

from core.design.polarisation import Polarisation
from core.response.model import Reading, TrustLevel
from core.response.polarisation import LINEAR_FROM_DB, sense
from core.response.sphere import CONE, beam, worst_axial_ratio_db
from core.units import Quantity, format_quantity, parse_quantity

if TYPE_CHECKING:
    from core.response.bands import Band
    from core.response.model import FarSphere, Response

# Where a beam leans, seen from the front, by eighths of a turn from x.
_WAYS = (
    *("right", "up and right", "up", "up and left"),
    *("left", "down and left", "down", "down and right"),
)
_STRAIGHT = np.radians(1.0)  # tilt of a beam that is still straight ahead
_SLACK = 1e-9  # of a step, so that rounding up does not start from a rounding error

SENSE_WORDS = {
    Polarisation.RHCP: "right-hand circular",
    Polarisation.LHCP: "left-hand circular",
    Polarisation.LINEAR: "linear",
}


class State(StrEnum):
    """How a reading stands against the brief."""

    MET = "met"
    LIKELY = "likely"  # met by an estimate, or by less than its plus and minus
    MISSED = "missed"
    UNKNOWN = "unknown"
    NOTED = "noted"  # the brief asks nothing of it


@dataclass(frozen=True)
class Verdict:
    """One reading against the brief.

    Attributes
    ----------
    reading : Reading
    state : State
    sentence : str
        Whole sentences in plain words with the numbers in them.
    """

    reading: Reading
    state: State
    sentence: str


def judge(
    response: Response,
    polarisation: Polarisation,
    vswr_target: float,
    axial_ratio_target_db: float,
) -> tuple[Verdict, ...]:
    """Hold a response against the brief.

    Parameters
    ----------
    response : Response
        Its spot is the brief's frequency.
    polarisation : Polarisation
        Asked for.
    vswr_target : float
        Highest VSWR allowed, > 1.
    axial_ratio_target_db : float
        Highest axial ratio allowed, dB, > 0; not used for a linear antenna.

    Returns
    -------
    tuple of Verdict
        In the order match, polarisation, gain, efficiency, bands, resonance, pattern. The
        state is never "met" or "missed" where the engine calls the reading unknown, and never
        "met" where it calls it rough or where the response's spread reaches over the target.
    """
    verdicts = (
        _match(response, vswr_target),
        _polarisation(response, polarisation, axial_ratio_target_db),
        _gain(response, polarisation),
        _efficiency(response),
        _bands(response, polarisation, vswr_target, axial_ratio_target_db),
        _resonance(response),
        _pattern(response, polarisation),
    )
    return tuple(_as_trusted(response, verdict) for verdict in verdicts)


def _as_trusted(response: Response, verdict: Verdict) -> Verdict:
    """The verdict, called an estimate where it is rough, or why there can be none."""
    trust = response.trust[verdict.reading]
    if trust.level is TrustLevel.GOOD or (
        trust.level is TrustLevel.ROUGH and verdict.state is State.NOTED
    ):
        return verdict
    if trust.level is TrustLevel.ROUGH:
        state = State.LIKELY if verdict.state is State.MET else verdict.state
        return Verdict(verdict.reading, state, f"Estimate: {verdict.sentence}")
    name = verdict.reading.replace("_", " ").capitalize()
    remedy = f" {trust.remedy[0].upper()}{trust.remedy[1:]}." if trust.remedy else ""
    sentence = f"{name} unknown: {trust.reason}.{remedy}"
    return Verdict(verdict.reading, State.UNKNOWN, sentence)


def _match(response: Response, target: float) -> Verdict:
    vswr = float(response.spot.vswr)
    spread = None if response.spread is None else response.spread.vswr
    state, relation = _stands(vswr, target, f"{target:g}", spread)
    loss = float(response.spot.return_loss_db)
    loss_text = "no reflection" if np.isinf(loss) else f"return loss {loss:.1f} dB"
    where = format_quantity(response.frequency, Quantity.FREQUENCY)
    sentence = (
        f"VSWR {_beside(vswr, target)}{_plus_minus(spread)} at {where}, {relation} ({loss_text})."
    )
    return Verdict(Reading.MATCH, state, sentence)


def _polarisation(response: Response, polarisation: Polarisation, target: float) -> Verdict:
    if polarisation is Polarisation.LINEAR:
        return _linearity(response)
    ratio = float(response.spot.axial_ratio_db)
    found = sense(complex(response.spot.e_x), complex(response.spot.e_y), polarisation)
    asked = SENSE_WORDS[polarisation]
    if found is None:
        sentence = f"All but linear, axial ratio {_level(ratio)}; {asked} was asked for."
        return Verdict(Reading.AXIAL_RATIO, State.MISSED, sentence)
    if found is not polarisation:
        sentence = (
            f"Turns the wrong way: {SENSE_WORDS[found]}, axial ratio {_level(ratio)}; "
            f"{asked} was asked for."
        )
        return Verdict(Reading.AXIAL_RATIO, State.MISSED, sentence)
    spread = None if response.spread is None else response.spread.axial_ratio_db
    state, relation = _stands(ratio, target, f"{target:g} dB", spread)
    sentence = (
        f"{asked.capitalize()}, axial ratio {_beside(ratio, target)}{_plus_minus(spread)} dB, "
        f"{relation}."
    )
    return Verdict(Reading.AXIAL_RATIO, state, sentence)


def _linearity(response: Response) -> Verdict:
    ratio = float(response.spot.axial_ratio_db)
    met = ratio >= LINEAR_FROM_DB
    relation = "as asked" if met else f"short of the {LINEAR_FROM_DB:g} dB of a linear antenna"
    sentence = f"The field along its axis is {_level(ratio)} over the field across it, {relation}."
    return Verdict(Reading.AXIAL_RATIO, State.MET if met else State.MISSED, sentence)


def _gain(response: Response, polarisation: Polarisation) -> Verdict:
    gain = float(response.spot.gain_dbi(polarisation))
    realised = float(response.spot.realised_gain_dbi(polarisation))
    spread = None if response.spread is None else response.spread.gain_db
    sentence = (
        f"Gain {gain:.1f}{_plus_minus(spread, 1)} dBi to {SENSE_WORDS[polarisation]} waves "
        f"straight ahead, {realised:.1f} dBi with the mismatch."
    )
    return Verdict(Reading.GAIN, State.NOTED, sentence)


def _efficiency(response: Response) -> Verdict:
    percent = 100.0 * float(response.spot.efficiency)
    sentence = f"{percent:.0f} % of the power that goes in is radiated."
    return Verdict(Reading.EFFICIENCY, State.NOTED, sentence)


def _bands(response: Response, polarisation: Polarisation, vswr: float, ratio: float) -> Verdict:
    parts = [_band_text(f"VSWR up to {vswr:g}", response.vswr_band(vswr))]
    if polarisation is not Polarisation.LINEAR:
        parts.append(
            _band_text(f"axial ratio up to {ratio:g} dB", response.axial_ratio_band(ratio))
        )
    text = "; ".join(parts)
    return Verdict(Reading.BANDS, State.NOTED, f"{text}.")


def _resonance(response: Response) -> Verdict:
    spread = response.spread
    moved = spread.modes if spread is not None else (None,) * len(response.modes)
    modes = [
        f"{_frequency(mode.frequency, by)} {mode.name} (Q {mode.quality_factor:.3g})"
        for mode, by in zip(response.modes, moved, strict=True)
    ]
    sentence = f"The element resonates at {' and '.join(modes)}."
    if not modes:
        sentence = "No resonance of the element stands out near the brief's frequency."
    trust = response.trust[Reading.RESONANCE]
    # How far equations go by is worth a sentence; a solution's mesh stands beside all readings.
    if trust.level is TrustLevel.ROUGH and response.mesh is None:
        sentence += f" {trust.reason[:1].upper()}{trust.reason[1:]}."
    return Verdict(Reading.RESONANCE, State.NOTED, sentence)


def _pattern(response: Response, polarisation: Polarisation) -> Verdict:
    directivity = 10.0 * np.log10(response.directivity)
    wide = format_quantity(response.beamwidth, Quantity.ANGLE, digits=2)
    sentence = f"Directivity {directivity:.1f} dBi, half-power beam {wide} wide"
    if response.front_to_back is not None:
        sentence += f", {10.0 * np.log10(response.front_to_back):.1f} dB less behind"
    sentence += "."
    if response.sphere is not None:
        sentence += f" {_by_direction(response.sphere, polarisation)}"
    return Verdict(Reading.PATTERN, State.NOTED, sentence)


def _by_direction(sphere: FarSphere, polarisation: Polarisation) -> str:
    """Where the beam points, and how its polarisation holds away from boresight."""
    found = beam(sphere, polarisation)
    parts = ["Strongest straight ahead"]
    if found.tilt > np.pi / 2.0:
        parts = ["Strongest behind the plate"]
    elif found.tilt > _STRAIGHT:
        tilt, azimuth = (
            format_quantity(angle, Quantity.ANGLE, digits=digits)
            for angle, digits in ((found.tilt, 2), (found.azimuth, 3))
        )
        way = _WAYS[round(found.azimuth / (np.pi / 4.0)) % len(_WAYS)]
        parts = [f"Strongest {tilt} {way} of straight ahead ({azimuth} from x)"]
    if polarisation is not Polarisation.LINEAR:
        worst = worst_axial_ratio_db(sphere, polarisation)
        cone = format_quantity(CONE, Quantity.ANGLE)
        if np.isinf(worst):
            parts.append(f"of the other sense somewhere within {cone}")
        else:
            parts.append(f"axial ratio up to {_level(worst)} within {cone}")
    return f"{'; '.join(parts)}."


def _stands(value: float, target: float, asked: str, spread: float | None) -> tuple[State, str]:
    """State against a limit, and the words for it."""
    if value > target:
        return State.MISSED, f"over the {asked} asked for"
    # Not a number: one of the meshes told something else altogether.
    if spread is not None and not value + spread <= target:
        return State.LIKELY, f"within the {asked} asked for, but by less than the ±"
    return State.MET, f"within the {asked} asked for"


def _plus_minus(spread: float | None, digits: int = 2) -> str:
    """A spread as it stands behind a number with so many decimals, rounded up."""
    if spread is None or not np.isfinite(spread):
        return ""
    step = 10.0**-digits
    return f" ± {np.ceil(spread / step - _SLACK) * step:.{digits}f}"


def _frequency(value: float, spread: float | None) -> str:
    """A frequency to four digits, such as "2.447 ± 0.003 GHz"."""
    text = format_quantity(value, Quantity.FREQUENCY, digits=4)
    if spread is None:
        return text
    unit = text.rsplit(" ", 1)[1]
    scale = parse_quantity(f"1 {unit}", Quantity.FREQUENCY)
    digits = max(3 - int(np.floor(np.log10(value / scale))), 0)
    return f"{value / scale:.{digits}f}{_plus_minus(spread / scale, digits)} {unit}"


def _band_text(what: str, band: Band | None) -> str:
    if band is None:
        return f"{what}: nowhere around the brief's frequency"
    low = format_quantity(band.low, Quantity.FREQUENCY)
    high = format_quantity(band.high, Quantity.FREQUENCY)
    wider = " or more" if band.open_low or band.open_high else ""
    width = format_quantity(band.width, Quantity.FREQUENCY, digits=3)
    return f"{what}: {low} to {high} ({width}{wider})"


def _level(value: float) -> str:
    """A level for people; a linear wave has no finite axial ratio."""
    return f"{value:.1f} dB" if value < 60.0 else "over 60 dB"


def _beside(value: float, target: float) -> str:
    """A value with as many digits as it takes to see which side of the target it is on."""
    if np.isinf(value):
        return "infinite"
    texts = (f"{value:.{digits}f}" for digits in (2, 3, 4))
    return next(
        (text for text in texts if (float(text) <= target) == (value <= target)), repr(value)
    )
