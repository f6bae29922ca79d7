"""The two ways to solve a layout: in free space with its own plate, or on an endless board.

Shapes: d directions, t triangles.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, field, replace
from math import pi
from typing import TYPE_CHECKING, ClassVar, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE
from core.errors import InputError
from core.fullwave.board_kernels import BoardKernels
from core.fullwave.far_field import direction_frame, sphere_power
from core.fullwave.far_sphere import full_sphere, half_sphere
from core.fullwave.layered_fields import BoardCurrents, power_into_waves, space_field
from core.fullwave.layered_mesh import build_board_mesh
from core.fullwave.layered_system import (
    LayeredSystem,
    board_currents,
    build_layered_system,
    layered_equations,
    layered_solution,
    solve_layered,
)
from core.fullwave.layered_trust import rim_doubts
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.mesh_model import Sheet
from core.fullwave.surface_currents import board_top_currents, plate_currents
from core.fullwave.system import (
    Solution,
    System,
    build_system,
    equations,
    radiated_field,
    solution,
    solve,
)
from core.lines.stack import series_permittivity
from core.response.model import FarSphere, Reading, Trust, TrustLevel

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.equations import Equations
    from core.layout.model import Layout
    from core.layout.tail import Tail
    from core.response.currents import Currents

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

MOST_AIR_LIKE: Final = 1.5
"""Thickness-averaged permittivity up to which the finite plate is meshed in free space."""

_UNBALANCED = 0.01  # share of the power that may go missing in free space


@dataclass(frozen=True, eq=False)
class Solver(ABC):
    """A meshed layout and what has been solved of it.

    Attributes
    ----------
    farthest : float
        Angle from boresight up to which there is a far field, degrees.
    layout : Layout
    level : Level
    solved : dict of float to Solution
        By frequency, Hz.
    """

    farthest: ClassVar[float]

    layout: Layout
    level: Level
    solved: dict[float, Solution] = field(default_factory=dict, init=False)

    @property
    def spot(self) -> Solution:
        """What was solved at the brief's frequency."""
        return self.solved[self.layout.frequency]

    def quantities(self, frequency: float) -> Complexes:
        """Admittance and boresight field of 1 V at the port, analytic in the frequency."""
        solution = self.solve(frequency)
        self.solved[frequency] = solution
        volts = np.sqrt(FREE_SPACE_IMPEDANCE * solution.admittance.real / (4.0 * pi))
        return np.array([solution.admittance, solution.e_x * volts, solution.e_y * volts])

    @property
    def scale(self) -> float:
        """Of far fields of the solved spot, V, that makes gains of their squares."""
        accepted = self.spot.admittance.real
        return float(np.sqrt(4.0 * pi / (FREE_SPACE_IMPEDANCE * accepted)))

    @property
    @abstractmethod
    def meshed(self) -> tuple[Floats, Ints, int]:
        """Corners of the triangles (t, 3, 3), m, their sheets (t,) and the unknowns."""

    @abstractmethod
    def solve(self, frequency: float) -> Solution:
        """Solution at one frequency (Hz)."""

    @abstractmethod
    def posed(self, frequency: float) -> Equations:
        """Equations at one frequency (Hz)."""

    @abstractmethod
    def finished(self, posed: Equations, found: Complexes) -> Solution:
        """Solution from the currents that solve them."""

    @abstractmethod
    def far_field(self, theta: Floats, phi: Floats) -> tuple[Complexes, Complexes]:
        """Components along theta and phi (d,) in directions, in the scale of `Samples`."""

    @abstractmethod
    def sphere(self) -> FarSphere:
        """Far field in all directions."""

    @abstractmethod
    def currents(self) -> Currents:
        """Currents at the brief's frequency, 1 W accepted."""

    @abstractmethod
    def doubts(self) -> dict[Reading, Trust]:
        """What the system leaves out of some readings."""


@dataclass(frozen=True, eq=False)
class _FreeSpace(Solver):
    """Copper in free space, its ground plate as large as it is."""

    system: System
    farthest: ClassVar[float] = 180.0

    @property
    def meshed(self) -> tuple[Floats, Ints, int]:
        basis = self.system.moments.basis
        return basis.corners, self.system.mesh.sheet, basis.count

    def solve(self, frequency: float) -> Solution:
        return solve(self.system, frequency)

    def posed(self, frequency: float) -> Equations:
        return equations(self.system, frequency)

    def finished(self, posed: Equations, found: Complexes) -> Solution:
        solved = solution(self.system, posed, found)
        if self.level is not Level.QUICK:
            return solved
        # The power sent takes a part of the time that a fill without losses takes.
        return replace(solved, losing=lambda: 1.0 - self._share_sent(solved))

    def far_field(self, theta: Floats, phi: Floats) -> tuple[Complexes, Complexes]:
        towards, along_theta, along_phi = direction_frame(theta, phi)
        field = self._radiated(towards) * self.scale
        return np.sum(field * along_theta, axis=1), np.sum(field * along_phi, axis=1)

    def sphere(self) -> FarSphere:
        reach = float(np.linalg.norm(self.system.mesh.vertices, axis=1).max())
        return full_sphere(self.far_field, self.spot.frequency, reach)

    def currents(self) -> Currents:
        return plate_currents(self.system, self.spot)

    def doubts(self) -> dict[Reading, Trust]:
        if self.level is Level.QUICK:  # the losses are what is missing
            return {}
        missing = abs(1.0 - self.spot.lost - self._share_sent(self.spot))
        if missing < _UNBALANCED:
            return {}
        reason = f"{100.0 * missing:.0f} % of the power that goes in is not found again"
        doubt = Trust(TrustLevel.ROUGH, reason, "a thinner or lighter spacer is told better")
        return dict.fromkeys((Reading.GAIN, Reading.EFFICIENCY, Reading.PATTERN), doubt)

    def _radiated(self, towards: Floats) -> Complexes:
        return radiated_field(self.system, self.spot.currents, self.spot.frequency, towards)

    def _share_sent(self, solved: Solution) -> float:
        """Power over a sphere, of the power that goes in."""

        def field(towards: Floats) -> Complexes:
            return radiated_field(self.system, solved.currents, solved.frequency, towards)

        widest = float(np.ptp(self.system.mesh.vertices, axis=0).max())
        return 2.0 * sphere_power(field, solved.frequency, widest) / solved.admittance.real


@dataclass(frozen=True, eq=False)
class _Board(Solver):
    """Copper on a board, the board and its ground plane taken as infinite."""

    system: LayeredSystem
    farthest: ClassVar[float] = 88.0

    @property
    def meshed(self) -> tuple[Floats, Ints, int]:
        mesh, basis = self.system.mesh, self.system.moments.basis
        sheets = np.full(len(mesh.triangles), int(Sheet.TOP))
        return mesh.vertices[mesh.triangles], sheets, basis.count

    def solve(self, frequency: float) -> Solution:
        return solve_layered(self.system, frequency)

    def posed(self, frequency: float) -> Equations:
        return layered_equations(self.system, frequency)

    def finished(self, posed: Equations, found: Complexes) -> Solution:
        return layered_solution(self.system, posed, found)

    def far_field(self, theta: Floats, phi: Floats) -> tuple[Complexes, Complexes]:
        e_theta, e_phi = space_field(self._flowing, theta, phi)
        return e_theta * self.scale, e_phi * self.scale

    def sphere(self) -> FarSphere:
        reach = float(np.linalg.norm(self.system.mesh.vertices[:, :2], axis=1).max())
        theta = np.radians(np.arange(0.0, self.farthest + 1.0, 2.0))
        return half_sphere(self.far_field, self.spot.frequency, reach, theta)

    def currents(self) -> Currents:
        return board_top_currents(self.system, self.spot)

    def doubts(self) -> dict[Reading, Trust]:
        accepted = self.spot.admittance.real / 2.0
        guided = power_into_waves(self._flowing) / accepted
        return rim_doubts(guided, 1.0 - self.spot.lost, self.layout)

    @property
    def _flowing(self) -> BoardCurrents:
        return board_currents(self.system, self.spot.currents, self.spot.frequency)


def build_solver(
    layout: Layout, level: Level, kernels: BoardKernels | None, tail: Tail | None = None
) -> Solver:
    """Mesh a layout for the solver that suits its stack.

    Parameters
    ----------
    layout : Layout
    level : Level
        Fineness of the mesh.
    kernels : BoardKernels or None
        As `kernels_of` makes them for its stack.
    tail : Tail, optional
        A cable behind the ground plate to solve with it.

    Returns
    -------
    Solver

    Raises
    ------
    ModelError
        If the copper cannot be meshed.
    InputError
        If a tail is asked for over an endless ground.
    """
    if kernels is None:
        mesh = build_mesh(layout, level, tail)
        return _FreeSpace(layout, level, build_system(mesh, layout.foil, layout.stack))
    if tail is not None:
        raise InputError(
            "coax tail: a board's ground plane is solved as endless, and nothing behind it "
            "is felt; accepted: a spacer of air, foam or card",
            field="tail",
        )
    return _Board(layout, level, build_layered_system(build_board_mesh(layout, level), kernels))


def kernels_of(layout: Layout, highest: float) -> BoardKernels | None:
    """Kernels of a layout's stack, if it is a board.

    Parameters
    ----------
    layout : Layout
    highest : float
        Frequency up to which they reach, Hz.

    Returns
    -------
    BoardKernels or None
        None for an air-like stack, which is solved in free space.

    Raises
    ------
    ModelError
        If the stack is outside what the solver covers.
    """
    if series_permittivity(layout.stack) <= MOST_AIR_LIKE:
        return None
    return BoardKernels(layout.stack, layout.foil, highest)
