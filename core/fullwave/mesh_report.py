"""What a mesh is made of, sheet by sheet, and how far it can be too coarse for a band."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT
from core.fullwave.mesh_model import Sheet
from core.lines.stack import series_permittivity
from core.response.model import MeshReport, Reading, SheetMesh, Trust, TrustLevel

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.mesh import Level
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]

ROUGH_FROM: Final = 0.25
"""Longest triangle edge up to which a solution is trusted, wavelengths."""

UNKNOWN_FROM: Final = 0.5
"""Longest edge from which a mesh cannot follow the currents at all, wavelengths."""

_NAMES: Final = {
    Sheet.TOP: "top copper",
    Sheet.PROBE: "probe",
    Sheet.GROUND: "ground plate",
    Sheet.TAIL: "coax tail",
}


def mesh_report(
    corners: Floats,
    sheets: Ints,
    unknowns: int,
    level: Level,
    band_top: tuple[float, tuple[Layer, ...]],
) -> MeshReport:
    """Count and measure the triangles of a mesh.

    Parameters
    ----------
    corners : (t, 3, 3) ndarray of float
        Of each triangle, m.
    sheets : (t,) ndarray of int
        `Sheet` of each.
    unknowns : int
    level : Level
    band_top : tuple of (float, tuple of Layer)
        Highest frequency solved for, Hz, and the spacer whose layers in series shorten the
        wavelength there.

    Returns
    -------
    MeshReport
    """
    sides = np.roll(corners, -1, axis=1) - corners
    lengths = np.sort(np.linalg.norm(sides, axis=2), axis=1)
    areas = np.linalg.norm(np.cross(sides[:, 0], sides[:, 1]), axis=1) / 2.0
    # The smallest angle lies between the two longer sides.
    sines = 2.0 * areas / (lengths[:, 1] * lengths[:, 2])
    angles = np.arcsin(np.clip(sines, 0.0, 1.0))
    frequency, layers = band_top
    wavelength = SPEED_OF_LIGHT / frequency / series_permittivity(layers) ** 0.5
    told = []
    for sheet, name in _NAMES.items():
        own = sheets == sheet
        if own.any():
            longest = float(lengths[own].max())
            told.append(
                SheetMesh(
                    name,
                    int(own.sum()),
                    float(angles[own].min()),
                    longest,
                    longest / wavelength,
                )
            )
    return MeshReport(level.value, unknowns, tuple(told))


def coarse_doubts(report: MeshReport, band_top: float, frequency: float) -> dict[Reading, Trust]:
    """Trust in what a mesh too coarse for its band spoils.

    Parameters
    ----------
    report : MeshReport
        Of the band's top.
    band_top, frequency : float
        Highest frequency solved for and the brief's, Hz.

    Returns
    -------
    dict of Reading to Trust
        All readings where the mesh is too coarse at the brief's frequency; the bands where it
        is so at the top of the band alone.

    Notes
    -----
    Limits from solved examples (docs/models/response.md): up to a quarter of a wavelength the
    gain stays within 0.3 dB of that on a fine mesh made for the frequency, beyond half a
    wavelength it is up to 1.2 dB off, and resonances of a board are lost before that.
    """
    worst = max(report.sheets, key=lambda sheet: sheet.longest_in_wavelengths)
    doubts: dict[Reading, Trust] = {}
    for where, frequency_there, readings in (
        ("at the top of the band", band_top, (Reading.BANDS,)),
        ("at the brief's frequency", frequency, tuple(Reading)),
    ):
        length = worst.longest_in_wavelengths * frequency_there / band_top
        if length > ROUGH_FROM:
            level = TrustLevel.UNKNOWN if length > UNKNOWN_FROM else TrustLevel.ROUGH
            reason = (
                f"the {report.level} mesh has edges of {length:.2f} wavelength on the "
                f"{worst.name} {where}, and {ROUGH_FROM:g} is the most that can be trusted"
            )
            remedy = "a finer mesh or a lower band will tell"
            doubts |= dict.fromkeys(readings, Trust(level, reason, remedy))
    return doubts
