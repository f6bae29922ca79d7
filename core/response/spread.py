"""How far readings move from a coarser mesh to a finer one: their plus and minus."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

from core.response.change import change
from core.response.model import Spread

if TYPE_CHECKING:
    from core.design.polarisation import Polarisation
    from core.response.model import Mode, Response

_SAME_MODE: Final = 0.05  # of its frequency, by which a mode may move from mesh to mesh


def with_spread(
    response: Response, coarser: Response, level: str, polarisation: Polarisation
) -> Response:
    """Response with how far it is from that of the same antenna on a coarser mesh.

    Parameters
    ----------
    response, coarser : Response
    level : str
        Of the coarser mesh.
    polarisation : Polarisation
        Whose gain is compared.

    Returns
    -------
    Response

    Notes
    -----
    The plain difference of the two. No order of convergence is taken off it: from one level to
    the next the cells along edges, strips and plate shrink by different factors.
    """
    moved = change(coarser, response, polarisation)
    spread = Spread(
        against=level,
        modes=tuple(_moved(mode, coarser.modes) for mode in response.modes),
        vswr=abs(moved.vswr),
        axial_ratio_db=abs(moved.axial_ratio_db),
        gain_db=abs(moved.gain_db),
    )
    return replace(response, spread=spread)


def _moved(mode: Mode, others: tuple[Mode, ...]) -> float | None:
    """Distance to the nearest mode of the same name, where one is near enough to be the same."""
    apart = [abs(mode.frequency - other.frequency) for other in others if other.name == mode.name]
    nearest = min(apart, default=mode.frequency)
    return nearest if nearest < _SAME_MODE * mode.frequency else None
