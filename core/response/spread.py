"""How far readings move from a coarser mesh to a finer one: their plus and minus."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.response.change import change
from core.response.model import Spread

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Complexes = NDArray[np.complex128]

    from core.design.polarisation import Polarisation
    from core.response.model import Mode, Response

LEAST_SHIFT: Final = 1.5e-3
"""Shift of all frequencies that no mesh of a few hundred triangles rules out, as a share; from
solved examples (docs/models/response.md)."""

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
    The plain difference of the two, and what a shift of 0.15 % in frequency would change. No
    order of convergence is taken off the difference: from one level to the next the cells
    along edges, strips and plate shrink by different factors, and two meshes may agree by
    chance. The shift stands for what they share.
    """
    moved = change(replace(coarser, sphere=None), response, polarisation)
    shifts = [
        change(response, _shifted(response, 1.0 + side * LEAST_SHIFT), polarisation)
        for side in (-1.0, 1.0)
    ]

    def total(name: str) -> float:
        own = abs(float(getattr(moved, name)))
        return own + max(abs(float(getattr(one, name))) for one in shifts)

    spread = Spread(
        against=level,
        modes=tuple(_moved(mode, coarser.modes) for mode in response.modes),
        vswr=total("vswr"),
        axial_ratio_db=total("axial_ratio_db"),
        gain_db=total("gain_db"),
    )
    return replace(response, spread=spread)


def _shifted(response: Response, ratio: float) -> Response:
    """The same, its spot at another frequency near its own, as far as the sweep goes."""
    sweep, spot = response.sweep, response.spot
    place = int(np.searchsorted(sweep.frequency, response.frequency))
    frequencies = np.insert(sweep.frequency, place, response.frequency)

    def at(values: Complexes, here: Complexes) -> Complexes:
        known = np.insert(values, place, here)
        return np.asarray(np.interp(response.frequency * ratio, frequencies, known))

    moved = replace(
        spot,
        s11=at(sweep.s11, spot.s11),
        e_x=at(sweep.e_x, spot.e_x),
        e_y=at(sweep.e_y, spot.e_y),
    )
    return replace(response, spot=moved, sphere=None)


def _moved(mode: Mode, others: tuple[Mode, ...]) -> float | None:
    """Distance to the nearest mode of the same name, where one is near enough to be the same."""
    apart = [abs(mode.frequency - other.frequency) for other in others if other.name == mode.name]
    nearest = min(apart, default=mode.frequency)
    if nearest > _SAME_MODE * mode.frequency:
        return None
    return nearest + LEAST_SHIFT * mode.frequency
