"""What an antenna does over frequency, whichever engine worked it out.

Shapes: n frequencies of a sweep, m angles of a cut; () is a single value.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np

from core.response.bands import Band, band_under
from core.response.polarisation import axial_ratio_db, intended_power

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

    from core.design.polarisation import Polarisation
    from core.response.currents import Currents


class Reading(StrEnum):
    """What can be read off a response, and trusted more or less."""

    RESONANCE = "resonance"
    MATCH = "match"
    AXIAL_RATIO = "axial_ratio"
    GAIN = "gain"
    EFFICIENCY = "efficiency"
    BANDS = "bands"
    PATTERN = "pattern"


class TrustLevel(StrEnum):
    """How far a reading can be trusted."""

    GOOD = "good"
    ROUGH = "rough"
    UNKNOWN = "unknown"


@dataclass(frozen=True)
class Trust:
    """How far one reading can be trusted, and why.

    Attributes
    ----------
    level : TrustLevel
    reason : str
        One sentence part in plain words, with numbers; no full stop.
    remedy : str
        What would tell, such as "a measurement will tell"; empty where nothing is needed.
    """

    level: TrustLevel
    reason: str
    remedy: str = ""


@dataclass(frozen=True)
class Mode:
    """A natural resonance of the element.

    Attributes
    ----------
    name : str
        "along x" or "along y", the way its current flows.
    frequency : float
        Hz.
    quality_factor : float
    """

    name: str
    frequency: float
    quality_factor: float


@dataclass(frozen=True, eq=False)
class Samples:
    """What the antenna does at n frequencies, or at one: shape (n,) or ().

    Attributes
    ----------
    frequency : ndarray of float
        Hz, rising.
    s11 : ndarray of complex
        Reflection coefficient at the connector, against the reference impedance.
    z_in : ndarray of complex
        Input impedance, ohm.
    e_x, e_y : ndarray of complex
        Far field at boresight along x and y, so scaled that |e_x|² + |e_y|² is the total
        gain: per watt accepted, mismatch not counted. A common phase means nothing.
    efficiency : ndarray of float
        Power sent into the space above the antenna over power accepted, 0 to 1.
    """

    frequency: Floats
    s11: Complexes
    z_in: Complexes
    e_x: Complexes
    e_y: Complexes
    efficiency: Floats

    def __post_init__(self) -> None:
        for field in fields(self):
            values = np.array(getattr(self, field.name))
            values.flags.writeable = False
            object.__setattr__(self, field.name, values)

    @property
    def vswr(self) -> Floats:
        """Voltage standing wave ratio, >= 1; infinite for a full reflection."""
        size = np.minimum(np.abs(self.s11), 1.0)
        with np.errstate(divide="ignore"):
            return np.asarray((1.0 + size) / (1.0 - size))

    @property
    def return_loss_db(self) -> Floats:
        """Return loss, dB, >= 0; infinite for a perfect match."""
        with np.errstate(divide="ignore"):
            return np.asarray(np.maximum(-20.0 * np.log10(np.abs(self.s11)), 0.0))

    @property
    def axial_ratio_db(self) -> Floats:
        """Axial ratio at boresight, dB; infinite for a linear wave."""
        return axial_ratio_db(self.e_x, self.e_y)

    def gain_dbi(self, polarisation: Polarisation) -> Floats:
        """Gain at boresight to the intended polarisation, mismatch not counted, dBi."""
        return _decibels(intended_power(self.e_x, self.e_y, polarisation))

    def realised_gain_dbi(self, polarisation: Polarisation) -> Floats:
        """Gain at boresight to the intended polarisation, mismatch counted, dBi."""
        accepted = 1.0 - np.abs(self.s11) ** 2
        return _decibels(intended_power(self.e_x, self.e_y, polarisation) * accepted)

    def at(self, index: int | slice) -> Samples:
        """Pick one frequency (shape ()) or a stretch of them."""
        return Samples(*(getattr(self, field.name)[index] for field in fields(self)))


@dataclass(frozen=True, eq=False)
class PatternCut:
    """The far field in one plane through boresight, at the brief's frequency.

    Attributes
    ----------
    phi : float
        Azimuth of the plane from x towards y, rad.
    theta : (m,) ndarray of float
        Angle from boresight, rad, rising through 0; negative on the far side of boresight.
    e_theta, e_phi : (m,) ndarray of complex
        Components along theta and phi, which run on smoothly through boresight, in the scale
        of `Samples.e_x`.
    """

    phi: float
    theta: Floats
    e_theta: Complexes
    e_phi: Complexes

    def __post_init__(self) -> None:
        for name in ("theta", "e_theta", "e_phi"):
            values = np.array(getattr(self, name))
            values.flags.writeable = False
            object.__setattr__(self, name, values)

    @property
    def gain_dbi(self) -> Floats:
        """Total gain, dBi."""
        return _decibels(np.abs(self.e_theta) ** 2 + np.abs(self.e_phi) ** 2)

    @property
    def beamwidth(self) -> float:
        """Angle around boresight within 3 dB of it, rad; the whole cut where it never falls."""
        power = np.abs(self.e_theta) ** 2 + np.abs(self.e_phi) ** 2
        half = float(np.interp(0.0, self.theta, power)) / 2.0
        beam = band_under(self.theta, -power, 0.0, -half)
        return 0.0 if beam is None else beam.width


@dataclass(frozen=True, eq=False)
class FarSphere:
    """The far field on a grid of directions, dense enough to tell it in between.

    Attributes
    ----------
    theta : (a,) ndarray of float
        Even steps from boresight (0) to straight behind (pi), or as far as there is a field, rad.
    phi : (b,) ndarray of float
        Even steps from 0 all the way round, from x towards y, rad; b even.
    e_theta, e_phi : (a, b) ndarray of complex
        Components along theta and phi, in the scale of `Samples.e_x`.
    """

    theta: Floats
    phi: Floats
    e_theta: Complexes
    e_phi: Complexes

    def __post_init__(self) -> None:
        for name in ("theta", "phi", "e_theta", "e_phi"):
            values = np.array(getattr(self, name))
            values.flags.writeable = False
            object.__setattr__(self, name, values)


@dataclass(frozen=True)
class SheetMesh:
    """Mesh of one conductor.

    Attributes
    ----------
    name : str
        Such as "top copper".
    triangles : int
    smallest_angle : float
        rad; the rows of cells along copper edges are narrow on purpose.
    longest_edge : float
        m.
    longest_in_wavelengths : float
        The same in wavelengths at the top of the band, in what the field runs through.
    """

    name: str
    triangles: int
    smallest_angle: float
    longest_edge: float
    longest_in_wavelengths: float


@dataclass(frozen=True)
class MeshReport:
    """What a solution stands on.

    Attributes
    ----------
    level : str
        Fineness: coarse, normal or fine.
    unknowns : int
    sheets : tuple of SheetMesh
    """

    level: str
    unknowns: int
    sheets: tuple[SheetMesh, ...]


@dataclass(frozen=True)
class Spread:
    """How far readings at the brief's frequency may be off: their plus and minus.

    How far they move from a coarser mesh to this one and with a little shift in frequency, as
    `core.response.spread.with_spread` adds them up.

    Attributes
    ----------
    against : str
        Level of the coarser mesh.
    modes : tuple of (float or None)
        Hz, one for each of the response's modes; None where the coarser mesh has no such mode.
    vswr, axial_ratio_db, gain_db : float
        Not a number where a reading is infinite on one of the meshes.
    """

    against: str
    modes: tuple[float | None, ...]
    vswr: float
    axial_ratio_db: float
    gain_db: float


@dataclass(frozen=True, eq=False)
class Response:
    """Everything that the readings and the curves show.

    Attributes
    ----------
    engine : str
        Its name in `core.engines`.
    reference_impedance : float
        Of the connector, ohm.
    sweep : Samples
        Shape (n,).
    spot : Samples
        The same at the brief's frequency exactly, shape ().
    modes : tuple of Mode
        Natural resonances of the element, without its feed.
    directivity : float
        At boresight, total over both components, at the brief's frequency, as a ratio.
    cuts : tuple of PatternCut
        In the planes of x (phi = 0) and y (phi = 90 degrees).
    front_to_back : float or None
        Total gain at boresight over that straight behind, as a ratio; None where the ground
        is taken as infinite.
    trust : mapping of Reading to Trust
        For every reading.
    sphere : FarSphere or None
        Far field in all directions at the brief's frequency; None where the engine can't tell.
    mesh : MeshReport or None
        None for an engine without a mesh.
    spread : Spread or None
        None where nothing was solved on a coarser mesh.
    currents : Currents or None
        On the conductors at the brief's frequency; None where the engine solves for none.
    """

    engine: str
    reference_impedance: float
    sweep: Samples
    spot: Samples
    modes: tuple[Mode, ...]
    directivity: float
    cuts: tuple[PatternCut, ...]
    front_to_back: float | None
    trust: Mapping[Reading, Trust]
    sphere: FarSphere | None = None
    mesh: MeshReport | None = None
    spread: Spread | None = None
    currents: Currents | None = None

    @property
    def frequency(self) -> float:
        """The brief's frequency, Hz."""
        return float(self.spot.frequency)

    @property
    def beamwidth(self) -> float:
        """Mean of the half-power beamwidths of the cuts, rad."""
        return float(np.mean([cut.beamwidth for cut in self.cuts]))

    def vswr_band(self, limit: float = 2.0) -> Band | None:
        """Band around the brief's frequency with a VSWR up to the limit; None without one."""
        return self._band(self.sweep.vswr, self.spot.vswr, limit)

    def axial_ratio_band(self, limit_db: float = 3.0) -> Band | None:
        """Band around the brief's frequency with an axial ratio up to the limit (dB)."""
        return self._band(self.sweep.axial_ratio_db, self.spot.axial_ratio_db, limit_db)

    def _band(self, values: Floats, here: Floats, limit: float) -> Band | None:
        """Band in the sweep, with the value at the brief's frequency put in its place."""
        frequencies = self.sweep.frequency
        if not frequencies[0] <= self.frequency <= frequencies[-1]:
            return None
        place = int(np.searchsorted(frequencies, self.frequency))
        if frequencies[place] != self.frequency:
            frequencies = np.insert(frequencies, place, self.frequency)
            values = np.insert(values, place, here)
        return band_under(frequencies, values, self.frequency, limit)


def _decibels(power: Floats) -> Floats:
    with np.errstate(divide="ignore"):
        return np.asarray(10.0 * np.log10(power))
