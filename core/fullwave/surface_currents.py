"""From solved basis functions to the current on each sheet, as a response carries it.

Shapes: v vertices, t triangles, n functions.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.fullwave.mesh_model import Sheet
from core.response.currents import Currents, SheetCurrent

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.basis import Basis
    from core.fullwave.layered_system import LayeredSystem
    from core.fullwave.system import Solution, System

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]


def plate_currents(system: System, solution: Solution) -> Currents:
    """Currents on an antenna in free space, 1 W accepted.

    Parameters
    ----------
    system : System
    solution : Solution
        Of it.

    Returns
    -------
    Currents
        The probe's, which run upright, are left out.
    """
    mesh = system.mesh
    density = _of_one_watt(system.moments.basis, solution)

    def on(sheet: Sheet) -> SheetCurrent:
        chosen = mesh.sheet == sheet
        return _on_sheet(mesh.vertices, mesh.triangles[chosen], density[chosen])

    return Currents(solution.frequency, on(Sheet.TOP), on(Sheet.GROUND))


def board_top_currents(system: LayeredSystem, solution: Solution) -> Currents:
    """Currents on the top copper of a board, 1 W accepted.

    Parameters
    ----------
    system : LayeredSystem
    solution : Solution
        Of it.

    Returns
    -------
    Currents
        None for the ground plane, which has no mesh.
    """
    mesh = system.mesh
    # The last triangle, of no size, stands for the probe.
    density = _of_one_watt(system.moments.basis, solution)[:-1]
    top = _on_sheet(mesh.vertices, mesh.triangles, density)
    return Currents(solution.frequency, top, None)


def _density(basis: Basis, currents: Complexes) -> Complexes:
    """Current density (t, 3, 3) at the corners of every triangle, A/m."""
    halves = basis.on_halves(currents) * basis.lengths / (2.0 * basis.areas)
    arms = basis.corners[:, :, None] - basis.corners[:, None]  # corner from corner
    return np.asarray(np.einsum("at,tcax->tcx", halves, arms))


def _of_one_watt(basis: Basis, solution: Solution) -> Complexes:
    """Density at the corners with 1 W accepted, from currents of 1 V."""
    volts = np.sqrt(2.0 / solution.admittance.real)
    return np.asarray(_density(basis, solution.currents) * volts)


def _on_sheet(vertices: Floats, triangles: Ints, density: Complexes) -> SheetCurrent:
    """Current on one flat sheet, with the vertices of that sheet alone."""
    kept, numbers = np.unique(triangles, return_inverse=True)
    return SheetCurrent(vertices[kept, :2], numbers.reshape(triangles.shape), density[:, :, :2])
