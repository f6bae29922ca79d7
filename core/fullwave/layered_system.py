"""An antenna on a board over an infinite ground plane as a system to solve."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import floor, log2, pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI
from core.fullwave.coax_mouth import mouth_capacitance
from core.fullwave.equations import Equations
from core.fullwave.far_field import moment_weights
from core.fullwave.kernel_table import TablePlan, plan_tables
from core.fullwave.layered_fields import (
    BoardCurrents,
    boresight_of_moments,
    power_into_space,
    power_into_waves,
)
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
from core.fullwave.spectral import complex_permittivity
from core.fullwave.system import Solution, sheet_impedance
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.layered_mesh import BoardMesh
    from core.layout.model import Foil
    from core.lines.stack import Layer

    Complexes = NDArray[np.complex128]

_THIN: Final = 0.5  # height of the stack, rad, up to which few vertical currents will do
_FEW, _MORE = 3, 5  # vertical currents: the first two also for the charge near both ends
_NEAR: Final = 1.5  # longest cells, to which images are integrated exactly


@dataclass(frozen=True, eq=False)
class LayeredSystem:
    """An antenna on a board, ready to be solved up to some frequency.

    Attributes
    ----------
    mesh : BoardMesh
    layers : tuple of Layer
        From the ground up.
    foil : Foil
        Of top copper, ground plane and probe.
    moments : LayeredMoments
    probe : ProbeMoments
    capacitance : float
        That the coax's mouth adds by itself, F.
    plans : dict of int to TablePlan
        By octaves below the highest wavenumber; made as they are wanted.
    reach, near, highest : float
        As `plan_tables` takes them, m, m and 1/m.
    """

    mesh: BoardMesh
    layers: tuple[Layer, ...]
    foil: Foil
    moments: LayeredMoments
    probe: ProbeMoments
    capacitance: float
    reach: float
    near: float
    highest: float
    plans: dict[int, TablePlan] = field(default_factory=dict)

    def plan(self, wavenumber: float) -> TablePlan:
        """Plan of the tables that hold at a wavenumber (1/m)."""
        octave = max(0, floor(log2(self.highest / wavenumber)))
        if octave not in self.plans:
            self.plans[octave] = plan_tables(
                self.layers,
                self.highest / 2.0**octave,
                self.reach,
                self.near,
                self.probe.profiles,
            )
        return self.plans[octave]


def build_layered_system(
    mesh: BoardMesh, layers: tuple[Layer, ...], foil: Foil, highest: float
) -> LayeredSystem:
    """Work out all that does not change with frequency.

    Parameters
    ----------
    mesh : BoardMesh
    layers : tuple of Layer
        From the ground up.
    foil : Foil
    highest : float
        Frequency up to which it is to be solved, Hz.

    Returns
    -------
    LayeredSystem
    """
    wavenumber = TWO_PI * highest / SPEED_OF_LIGHT
    profiles = _profiles(layers, wavenumber)
    corners = mesh.vertices[mesh.triangles]
    longest = float(np.linalg.norm(np.roll(corners, 1, axis=1) - corners, axis=2).max())
    reach = float(np.linalg.norm(np.ptp(mesh.vertices, axis=0))) + 1.01 * mesh.port.outer
    plan = plan_tables(layers, wavenumber, reach, _NEAR * longest, profiles)
    basis = board_basis(mesh, profiles)
    probe = build_probe_moments(
        basis, mesh.vertices[mesh.pin][..., :2], mesh.port, profiles, (plan.step, plan.far.shape[1])
    )
    return LayeredSystem(
        mesh=mesh,
        layers=layers,
        foil=foil,
        moments=build_layered_moments(basis, mesh.triangles, plan),
        probe=probe,
        capacitance=mouth_capacitance(layers, mesh.port.inner, mesh.port.outer),
        reach=reach,
        near=_NEAR * longest,
        highest=wavenumber,
        plans={0: plan},
    )


def solve_layered(system: LayeredSystem, frequency: float) -> Solution:
    """Solve for the currents at one frequency.

    Parameters
    ----------
    system : LayeredSystem
    frequency : float
        Hz, > 0, up to what the system was built for.

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
    wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
    sheet = sheet_impedance(system.foil, frequency)
    tables = system.plan(wavenumber).tables(np.array([wavenumber]), sheet)
    basis = system.moments.basis
    matrix = layered_matrix(system.moments, tables, wavenumber, sheet)
    pin = sheet * total_thickness(system.layers)
    add_probe(matrix, basis, system.probe, tables, wavenumber, pin)
    mouth = board_currents(system, np.zeros(basis.count, complex), frequency).mouth_alone()
    sent = power_into_space(mouth) + power_into_waves(mouth)
    return Equations(
        frequency=frequency,
        matrix=matrix,
        excitation=port_voltages(basis, system.probe, tables),
        shunt=2.0 * sent + 1j * TWO_PI * frequency * system.capacitance,
        boresight=boresight_of_moments(mouth) * moment_weights(basis, 0.0),
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
    field = posed.boresight @ solved
    field *= np.sqrt(4.0 * pi / (2.0 * FREE_SPACE_IMPEDANCE * accepted))
    return Solution(
        frequency=posed.frequency,
        currents=solved,
        admittance=admittance,
        lost=1.0 - power_into_space(flowing) / accepted,
        e_x=complex(field[0]),
        e_y=complex(field[1]),
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
        system.layers,
        frequency,
        sheet_impedance(system.foil, frequency),
        system.moments.basis,
        solved,
        (probe.middles, rising.reshape(probe.profiles, -1), probe.port),
    )


def _profiles(layers: tuple[Layer, ...], wavenumber: float) -> int:
    """Vertical currents that a probe in this stack needs."""
    turns = sum(
        wavenumber * abs(complex_permittivity(layer)) ** 0.5 * layer.thickness for layer in layers
    )
    return _FEW if turns < _THIN else _MORE
