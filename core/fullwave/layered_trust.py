"""What a board that ends somewhere changes of a solution that takes it as infinite."""

from __future__ import annotations

from math import log10, sqrt
from typing import TYPE_CHECKING, Final

from core.response.model import Reading, Trust, TrustLevel

if TYPE_CHECKING:
    from core.layout.model import Layout

_CLEAR: Final = 6.0
"""Board heights between element and rim from which the rim leaves a resonance alone; common
practice, no source."""
_FAINT: Final = 1.0  # dB from the rim that still count as good


def rim_doubts(guided: float, sent: float, layout: Layout) -> dict[Reading, Trust]:
    """Trust in the readings that a board's rim changes.

    Parameters
    ----------
    guided, sent : float
        Power in surface waves and power into space over power accepted.
    layout : Layout

    Returns
    -------
    dict of Reading to Trust
        Those that the rim makes rough.

    Notes
    -----
    The rim sends on the power of the surface waves. If all of it met the direct field in phase
    or against it at boresight, the field there would change by the root of their ratio: a bound
    for a rim that sends about as the element does.
    """
    swing = 20.0 * log10(1.0 + sqrt(guided / sent))
    waves = (
        f"solved on an endless board; {100.0 * guided:.0f} % of the power runs into its surface "
        "waves, and the rim of the real one sends it on"
    )
    doubts = {
        Reading.PATTERN: Trust(
            TrustLevel.ROUGH, waves + "; nothing is known behind the board or along it"
        )
    }
    if swing > _FAINT:
        boresight = Trust(TrustLevel.ROUGH, waves + f": up to {swing:.1f} dB at boresight")
        doubts |= dict.fromkeys((Reading.GAIN, Reading.AXIAL_RATIO), boresight)
    rise = 10.0 * log10(1.0 + guided / sent)
    if rise > _FAINT:
        doubts[Reading.EFFICIENCY] = Trust(TrustLevel.ROUGH, waves + f": up to {rise:.1f} dB more")
    heights = layout.ground_reach / layout.height
    if heights < _CLEAR:
        close = Trust(
            TrustLevel.ROUGH,
            f"solved on an endless board; its rim is {heights:.1f} board heights from the "
            f"element, and below {_CLEAR:.0f} it moves the resonance",
            "a measurement will tell",
        )
        doubts |= dict.fromkeys((Reading.RESONANCE, Reading.MATCH, Reading.BANDS), close)
    return doubts
