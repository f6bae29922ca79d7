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
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from core.response.bands import Band
    from core.response.model import Response

SENSE_WORDS = {
    Polarisation.RHCP: "right-hand circular",
    Polarisation.LHCP: "left-hand circular",
    Polarisation.LINEAR: "linear",
}


class State(StrEnum):
    """How a reading stands against the brief."""

    MET = "met"
    LIKELY = "likely"  # met by an estimate that is good to a few per cent
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
        "met" where it calls it rough.
    """
    verdicts = (
        _match(response, vswr_target),
        _polarisation(response, polarisation, axial_ratio_target_db),
        _gain(response, polarisation),
        _efficiency(response),
        _bands(response, polarisation, vswr_target, axial_ratio_target_db),
        _resonance(response),
        _pattern(response),
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
    met = vswr <= target
    relation = "within" if met else "over"
    loss = float(response.spot.return_loss_db)
    loss_text = "no reflection" if np.isinf(loss) else f"return loss {loss:.1f} dB"
    where = format_quantity(response.frequency, Quantity.FREQUENCY)
    sentence = (
        f"VSWR {_beside(vswr, target)} at {where}, {relation} the {target:g} asked for "
        f"({loss_text})."
    )
    return Verdict(Reading.MATCH, _state(met), sentence)


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
    met = ratio <= target
    relation = "within" if met else "over"
    sentence = (
        f"{asked.capitalize()}, axial ratio {_beside(ratio, target)} dB, "
        f"{relation} the {target:g} dB asked for."
    )
    return Verdict(Reading.AXIAL_RATIO, _state(met), sentence)


def _linearity(response: Response) -> Verdict:
    ratio = float(response.spot.axial_ratio_db)
    met = ratio >= LINEAR_FROM_DB
    relation = "as asked" if met else f"short of the {LINEAR_FROM_DB:g} dB of a linear antenna"
    sentence = f"The field along its axis is {_level(ratio)} over the field across it, {relation}."
    return Verdict(Reading.AXIAL_RATIO, _state(met), sentence)


def _gain(response: Response, polarisation: Polarisation) -> Verdict:
    gain = float(response.spot.gain_dbi(polarisation))
    realised = float(response.spot.realised_gain_dbi(polarisation))
    sentence = (
        f"Gain {gain:.1f} dBi to {SENSE_WORDS[polarisation]} waves straight ahead, "
        f"{realised:.1f} dBi with the mismatch."
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
    modes = [
        f"{format_quantity(mode.frequency, Quantity.FREQUENCY, digits=4)} {mode.name} "
        f"(Q {mode.quality_factor:.3g})"
        for mode in response.modes
    ]
    listed = " and ".join(modes)
    sentence = f"The element resonates at {listed}."
    trust = response.trust[Reading.RESONANCE]
    if trust.level is TrustLevel.ROUGH:
        sentence += f" {trust.reason[:1].upper()}{trust.reason[1:]}."
    return Verdict(Reading.RESONANCE, State.NOTED, sentence)


def _pattern(response: Response) -> Verdict:
    directivity = 10.0 * np.log10(response.directivity)
    beam = format_quantity(response.beamwidth, Quantity.ANGLE, digits=2)
    sentence = f"Directivity {directivity:.1f} dBi, half-power beam {beam} wide"
    if response.front_to_back is not None:
        sentence += f", {10.0 * np.log10(response.front_to_back):.1f} dB less behind"
    return Verdict(Reading.PATTERN, State.NOTED, f"{sentence}.")


def _state(met: bool) -> State:
    return State.MET if met else State.MISSED


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
