"""A response as programs read it; single values are at the brief's frequency."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from app.verbs.engine import trust_record
from core.design.polarisation import Polarisation
from core.response.change import change
from core.response.polarisation import axial_ratio_db, intended_power, sense
from core.response.sphere import beam, pattern_cut, sense_reach, worst_axial_ratio_db

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from core.design.model import Brief
    from core.layout.tail import Tail
    from core.response.bands import Band
    from core.response.model import FarSphere, MeshReport, Response, Spread

    Complexes = NDArray[np.complex128]


def response_record(response: Response, brief: Brief) -> dict[str, Any]:
    """Keys of the contract."""
    sweep, spot = response.sweep, response.spot
    found = sense(complex(spot.e_x), complex(spot.e_y), brief.polarisation)
    behind = response.front_to_back
    return {
        "engine": response.engine,
        "brief_frequency_hz": response.frequency,
        "reference_impedance_ohm": response.reference_impedance,
        "frequency_hz": sweep.frequency,
        "s11": sweep.s11,
        "z_in_ohm": sweep.z_in,
        "vswr": sweep.vswr,
        "axial_ratio_db": sweep.axial_ratio_db,
        "gain_dbi": sweep.gain_dbi(brief.polarisation),
        "realised_gain_dbi": sweep.realised_gain_dbi(brief.polarisation),
        "efficiency": sweep.efficiency,
        "sense": None if found is None else found.value,
        "modes": [
            {"name": mode.name, "frequency_hz": mode.frequency, "q": mode.quality_factor}
            for mode in response.modes
        ],
        "vswr2_band_hz": _edges(response.vswr_band()),
        "axial_ratio_3db_band_hz": _edges(response.axial_ratio_band()),
        "directivity_dbi": 10.0 * np.log10(response.directivity),
        "beamwidth_deg": np.degrees(response.beamwidth),
        "front_to_back_db": None if behind is None else 10.0 * np.log10(behind),
        **_by_direction(response.sphere, brief.polarisation),
        "plus_minus": None if response.spread is None else _plus_minus(response.spread),
        "mesh": None if response.mesh is None else _mesh(response.mesh),
        "trust": trust_record(response),
    }


def cut_records(response: Response, azimuths: Iterable[float], brief: Brief) -> list[Any] | None:
    """Cuts of the pattern at azimuths (rad); None where the engine has no sphere."""
    if response.sphere is None:
        return None
    cuts = [pattern_cut(response.sphere, azimuth) for azimuth in azimuths]
    return [
        {
            "phi_deg": np.degrees(cut.phi),
            "theta_deg": np.degrees(cut.theta),
            **_fields(cut.e_theta, cut.e_phi, brief.polarisation),
        }
        for cut in cuts
    ]


def sphere_record(response: Response, brief: Brief) -> dict[str, Any] | None:
    """Far field over the sphere: by theta, then by phi; None where the engine has none."""
    sphere = response.sphere
    if sphere is None:
        return None
    return {
        "theta_deg": np.degrees(sphere.theta),
        "phi_deg": np.degrees(sphere.phi),
        **_fields(sphere.e_theta, sphere.e_phi, brief.polarisation),
    }


def tail_record(response: Response, hung: Response, tail: Tail, brief: Brief) -> dict[str, Any]:
    """What a coax tail is, what the antenna does with it, and how much that differs."""
    moved = change(response, hung, brief.polarisation)
    return {
        "length_m": tail.length,
        "diameter_m": tail.diameter,
        "drop_m": tail.drop,
        "azimuth_deg": None if tail.drop is None else np.degrees(tail.azimuth),
        "change": {
            "s11": moved.s11,
            "vswr": moved.vswr,
            "axial_ratio_db": moved.axial_ratio_db,
            "gain_db": moved.gain_db,
            "pattern_db": moved.pattern_db,
        },
        "response": response_record(hung, brief),
    }


def _by_direction(sphere: FarSphere | None, polarisation: Polarisation) -> dict[str, Any]:
    keys = ("beam_tilt_deg", "beam_azimuth_deg", "beam_gain_dbi", "worst_axial_ratio_30deg_db")
    if sphere is None:
        return dict.fromkeys((*keys, "sense_reach_deg"))
    found = beam(sphere, polarisation)
    values = np.degrees(found.tilt), np.degrees(found.azimuth), 10.0 * np.log10(found.gain)
    worst, reach = None, None
    if polarisation is not Polarisation.LINEAR:
        worst = worst_axial_ratio_db(sphere, polarisation)
        reach = np.degrees(sense_reach(sphere, polarisation))
    return dict(zip(keys, (*values, worst), strict=True)) | {"sense_reach_deg": reach}


def _fields(e_theta: Complexes, e_phi: Complexes, polarisation: Polarisation) -> dict[str, Any]:
    with np.errstate(divide="ignore"):
        gain = 10.0 * np.log10(intended_power(e_theta, e_phi, polarisation))
        total = 10.0 * np.log10(np.abs(e_theta) ** 2 + np.abs(e_phi) ** 2)
    words = [
        sense(complex(one), complex(other), polarisation)
        for one, other in zip(e_theta.ravel(), e_phi.ravel(), strict=True)
    ]
    told = np.array([None if one is None else one.value for one in words], dtype=object)
    return {
        "e_theta": e_theta,
        "e_phi": e_phi,
        "gain_dbi": gain,
        "total_gain_dbi": total,
        "axial_ratio_db": axial_ratio_db(e_theta, e_phi),
        "sense": told.reshape(e_theta.shape),
    }


def _plus_minus(spread: Spread) -> dict[str, Any]:
    return {
        "against_mesh": spread.against,
        "modes_hz": spread.modes,
        "vswr": spread.vswr,
        "axial_ratio_db": spread.axial_ratio_db,
        "gain_db": spread.gain_db,
    }


def _mesh(report: MeshReport) -> dict[str, Any]:
    sheets = [
        {
            "name": sheet.name,
            "triangles": sheet.triangles,
            "smallest_angle_deg": np.degrees(sheet.smallest_angle),
            "longest_edge_m": sheet.longest_edge,
            "longest_edge_wavelengths": sheet.longest_in_wavelengths,
        }
        for sheet in report.sheets
    ]
    return {
        "level": report.level,
        "triangles": sum(sheet.triangles for sheet in report.sheets),
        "unknowns": report.unknowns,
        "sheets": sheets,
    }


def _edges(band: Band | None) -> tuple[float, float] | None:
    return None if band is None else (band.low, band.high)
