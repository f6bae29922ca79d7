"""An antenna on a board over an infinite ground plane as a system to solve."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.fullwave.equations import Equations
from core.fullwave.far_field import moment_weights
from core.fullwave.layered_fields import BoardCurrents, boresight_of_moments, power_into_space
from core.fullwave.layered_moments import (
    LayeredMoments,
    board_basis,
    build_layered_moments,
    layered_matrix,
)
from core.fullwave.layered_probe import (
    ProbeMoments,
    add_probe,
    build_probe_moments,
    port_voltages,
)
from core.fullwave.moments import currents
from core.fullwave.system import Solution, sheet_impedance
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.board_kernels import BoardKernels
    from core.fullwave.layered_mesh import BoardMesh

    Complexes = NDArray[np.complex128]

_NEAR: Final = 1.5  # longest cells, to which images are integrated exactly


@dataclass(frozen=True, eq=False)
class LayeredSystem:
    """An antenna on a board, ready to be solved up to some frequency.

    Attributes
    ----------
    mesh : BoardMesh
    kernels : BoardKernels
    moments : LayeredMoments
    probe : ProbeMoments
    reach, near : float
        As `plan_tables` takes them, m.
    """

    mesh: BoardMesh
    kernels: BoardKernels
    moments: LayeredMoments
    probe: ProbeMoments
    reach: float
    near: float


def build_layered_system(mesh: BoardMesh, kernels: BoardKernels) -> LayeredSystem:
    """Work out all that does not change with frequency.

    Parameters
    ----------
    mesh : BoardMesh
    kernels : BoardKernels
        Of the board, up to the highest frequency to be solved for.

    Returns
    -------
    LayeredSystem
    """
    corners = mesh.vertices[mesh.triangles]
    longest = float(np.linalg.norm(np.roll(corners, 1, axis=1) - corners, axis=2).max())
    reach = float(np.linalg.norm(np.ptp(mesh.vertices, axis=0))) + 1.01 * mesh.port.outer
    plan = kernels.plan(reach, _NEAR * longest)
    basis = board_basis(mesh, kernels.profiles)
    pin = mesh.vertices[mesh.pin][..., :2]
    grid = plan.step, plan.far.shape[1]
    return LayeredSystem(
        mesh=mesh,
        kernels=kernels,
        moments=build_layered_moments(basis, mesh.triangles, plan),
        probe=build_probe_moments(basis, pin, mesh.port, kernels.profiles, grid),
        reach=reach,
        near=_NEAR * longest,
    )


def solve_layered(system: LayeredSystem, frequency: float) -> Solution:
    """Solve for the currents at one frequency.

    Parameters
    ----------
    system : LayeredSystem
    frequency : float
        Hz, > 0, up to what the board's kernels are for.

    Returns
    -------
    Solution
        `lost` is all that does not go into space: heat and surface waves.
    """
    posed = layered_equations(system, frequency)
    return layered_solution(system, posed, currents(posed.matrix, posed.excitation))


def layered_equations(system: LayeredSystem, frequency: float) -> Equations:
    """Equations at one frequency.

    Parameters
    ----------
    system : LayeredSystem
    frequency : float
        Hz, > 0, up to what the system was built for.

    Returns
    -------
    Equations
    """
    kernels, basis = system.kernels, system.moments.basis
    wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
    sheet = sheet_impedance(kernels.foil, frequency)
    tables = kernels.tables(system.reach, system.near, frequency)
    matrix = layered_matrix(system.moments, tables, wavenumber, sheet)
    pin = sheet * total_thickness(kernels.layers)
    add_probe(matrix, basis, system.probe, tables, wavenumber, pin)
    return Equations(
        frequency=frequency,
        matrix=matrix,
        excitation=port_voltages(basis, system.probe, tables),
        shunt=kernels.mouth_admittance(system.mesh.port, frequency),
        boresight=boresight_of_moments(kernels.layers, wavenumber, sheet)
        * moment_weights(basis, 0.0),
    )


def layered_solution(system: LayeredSystem, posed: Equations, solved: Complexes) -> Solution:
    """What currents that were found mean.

    Parameters
    ----------
    system : LayeredSystem
    posed : Equations
        That they solve; the matrix is not read.
    solved : (n,) ndarray of complex
        A/m.

    Returns
    -------
    Solution
    """
    admittance = posed.admittance(solved)
    accepted = admittance.real / 2.0
    flowing = board_currents(system, solved, posed.frequency)
    e_x, e_y = posed.boresight_field(solved)
    return Solution(
        frequency=posed.frequency,
        currents=solved,
        admittance=admittance,
        e_x=e_x,
        e_y=e_y,
        losing=lambda: 1.0 - power_into_space(flowing) / accepted,
    )


def board_currents(system: LayeredSystem, solved: Complexes, frequency: float) -> BoardCurrents:
    """Currents as what far fields are made of.

    Parameters
    ----------
    system : LayeredSystem
    solved : (n,) ndarray of complex
        A/m.
    frequency : float
        Hz.

    Returns
    -------
    BoardCurrents
    """
    probe = system.probe
    rising = solved[len(solved) - probe.count :] * probe.function_lengths
    return BoardCurrents.of(
        system.kernels.layers,
        frequency,
        sheet_impedance(system.kernels.foil, frequency),
        system.moments.basis,
        solved,
        (probe.middles, rising.reshape(probe.profiles, -1), probe.port),
    )
