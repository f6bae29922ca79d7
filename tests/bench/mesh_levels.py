"""What readings change from mesh to mesh, and what a coax tail changes: the tables in the docs.

Run: python tests/bench/mesh_levels.py [meshes] [tails]
"""

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

import numpy as np
from board_shapes import board_dual_edge, board_patch
from fullwave_shapes import probe_patch, small_ground, thick_air, thin_air

from core.design.polarisation import Polarisation
from core.engines import LEVELS, respond_on_mesh
from core.layout.build import build_layout
from core.layout.tail import coax_tail
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.response.change import change
from core.response.sphere import beam
from core.response.spread import with_spread

LINEAR, RHCP = Polarisation.LINEAR, Polarisation.RHCP
CASES = {
    "dual-edge, 6 mm air": (build_layout(thin_air()), RHCP),
    "dual-edge, 10 mm air, small plate": (build_layout(small_ground()), RHCP),
    "dual-edge, 15 mm air": (build_layout(thick_air()), RHCP),
    "probe, 5 mm foam": (probe_patch("foam:5mm", 50e-3, 12e-3, 0.11), LINEAR),
    "probe, 1.5 mm PTFE": (board_patch(40e-3, 40e-3, 1.5e-3, 2.2, 2.45e9), LINEAR),
    "dual-edge, 1.6 mm FR-4": (board_dual_edge(), RHCP),
}


def meshes():
    """Plus and minus of the normal and the fine mesh, beside what was left to the fine one."""
    print("| design | mesh | resonance, GHz | VSWR | axial ratio, dB | gain, dBi |")
    print("| --- | --- | --- | --- | --- | --- |")
    for case, (layout, polarisation) in CASES.items():
        coarser = None
        for level in LEVELS:
            found = respond_on_mesh(layout, frequency_grid(layout.frequency), SILENT, level)
            if coarser is not None:
                found = with_spread(found, coarser, "", polarisation)
            named = case if coarser is None else ""
            print(f"| {named} | {level} | {_row(found, polarisation)} |", flush=True)
            coarser = found


def _row(found, polarisation):
    spread = found.spread
    moved = [None] * len(found.modes) if spread is None else spread.modes
    modes = ", ".join(
        f"{mode.frequency / 1e9:.4f}{_pm(None if by is None else by / 1e9, 4)}"
        for mode, by in zip(found.modes, moved, strict=True)
    )
    spot = found.spot
    ratio = f"{float(spot.axial_ratio_db):.2f}" + _pm(spread and spread.axial_ratio_db)
    return " | ".join(
        [
            modes or "none seen",
            f"{float(spot.vswr):.3f}{_pm(spread and spread.vswr, 3)}",
            "" if polarisation is LINEAR else ratio,
            f"{float(spot.gain_dbi(polarisation)):.2f}{_pm(spread and spread.gain_db)}",
        ]
    )


def _pm(value, digits=2):
    return "" if value is None else f" ± {value:.{digits}f}"


def tails():
    """What a cable changes, by the size of the plate and its own length."""
    print("| plate, wavelengths | cable, wavelengths | S11 | gain, dB | front to back, dB | tilt |")
    print("| --- | --- | --- | --- | --- | --- |")
    for share in (0.5, 0.6, 0.8, 1.2):
        wavelength = 299792458.0 / 2.45e9
        layout = probe_patch("air:6mm", 54e-3, 14e-3, share * wavelength)
        grid = [2.3e9, 2.6e9]
        bare = respond_on_mesh(layout, grid, SILENT, "normal")
        for length in (0.125, 0.25, 0.5, 1.0):
            tail = coax_tail(layout, length * wavelength)
            hung = respond_on_mesh(layout, grid, SILENT, "normal", tail)
            moved = change(bare, hung, LINEAR)
            backs = [10.0 * np.log10(one.front_to_back) for one in (bare, hung)]
            tilts = [np.degrees(beam(one.sphere, LINEAR).tilt) for one in (bare, hung)]
            print(
                f"| {share:g} | {length:g} | {moved.s11:.3f} | {moved.gain_db:+.2f} | "
                f"{backs[0]:.1f} to {backs[1]:.1f} | {tilts[0]:.1f} to {tilts[1]:.1f}° |",
                flush=True,
            )


if __name__ == "__main__":
    asked = sys.argv[1:] or ["meshes", "tails"]
    for table in asked:
        {"meshes": meshes, "tails": tails}[table]()
