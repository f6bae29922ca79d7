"""The field solver as an engine: from a Layout to the Response of its very shape.

Shapes: k solved frequencies, n wanted ones, m angles.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, field, replace
from math import pi
from typing import TYPE_CHECKING, ClassVar, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.board_kernels import BoardKernels
from core.fullwave.equations import Equations, project
from core.fullwave.far_field import direction_frame, sphere_power
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
from core.fullwave.mesh_model import mesh_quality
from core.fullwave.rational import fit_rational
from core.fullwave.surface_currents import board_top_currents, plate_currents
from core.fullwave.sweep import Sweep, adaptive_sweep, first_points
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
from core.progress import SILENT
from core.response.model import (
    Mode,
    PatternCut,
    Reading,
    Response,
    Samples,
    Trust,
    TrustLevel,
)

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from core.layout.model import Layout
    from core.progress import Progress
    from core.response.currents import Currents

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_ENGINE: Final = "field"
MOST_AIR_LIKE: Final = 1.5
"""Thickness-averaged permittivity up to which the finite plate is meshed in free space."""

_QUICK_POINTS: Final = 3  # frequencies solved at the quick level
_UNBALANCED = 0.02  # share of the power that may go missing in free space
_BAND = 1.2  # that kernels made for single frequencies reach, of the brief's frequency
_TOLERANCE = 2e-3  # of reflection coefficient and field ratio in a sweep
_MODE_REACH = 1.3  # ratio to the brief's frequency within which a pole is a mode of the element
_LOWEST_Q, _HIGHEST_Q = 2.0, 2000.0
_SEEN = 0.15  # least height of a mode's peak over what is usual in the band
_APART = 0.5  # least distance of two modes of one direction, in half a width
_BESIDE = 1e-7  # of a pole, to take its residue at


def respond(
    layout: Layout, frequencies: ArrayLike, progress: Progress, level: Level = Level.NORMAL
) -> Response:
    """Response of a layout by a full-wave solution.

    Parameters
    ----------
    layout : Layout
    frequencies : (n,) array_like of float
        Hz, > 0, rising.
    progress : Progress
        Told after each solved frequency; may cancel.
    level : Level
        Fineness of the mesh.

    Returns
    -------
    Response

    Raises
    ------
    ModelError
        If the stack is outside what the solver covers.
    ConvergenceError
        If the sweep does not settle.
    Cancelled
        If the progress asks for it.
    """
    wanted = np.asarray(frequencies, dtype=np.float64)
    band = (min(wanted[0], layout.frequency), max(wanted[-1], layout.frequency))
    solver = _solver(layout, level, _kernels(layout, band[1]))
    impedance = layout.ports[0].impedance
    sweep = _swept(solver, band, impedance, progress)
    at_spot = _samples(np.array([layout.frequency]), sweep, solver, impedance).at(0)
    at_spot = replace(at_spot, efficiency=np.asarray(1.0 - np.clip(solver.spot.lost, 0.0, 1.0)))
    gain = abs(complex(at_spot.e_x)) ** 2 + abs(complex(at_spot.e_y)) ** 2
    return Response(
        engine=_ENGINE,
        reference_impedance=impedance,
        sweep=_samples(wanted, sweep, solver, impedance),
        spot=at_spot,
        modes=_modes(sweep, layout.frequency),
        directivity=gain / float(at_spot.efficiency),
        cuts=tuple(_cut(solver, phi) for phi in (0.0, pi / 2)),
        front_to_back=solver.front_to_back(),
        trust=_trust(level, sweep) | solver.doubts(),
        currents=solver.currents(),
    )


def _swept(
    solver: _Solver, band: tuple[float, float], impedance: float, progress: Progress
) -> Sweep:
    """Solve over a band: at each frequency of the sweep, or quickly at three for them all."""
    spot = solver.layout.frequency
    quantities = solver.quantities
    tolerance = _TOLERANCE
    if solver.level is Level.QUICK:
        points = first_points(band, spot, _QUICK_POINTS)
        projection, solved = project(solver.posed, points, progress)
        solver.solved[spot] = solver.finished(*solved[spot])
        quantities, progress, tolerance = projection.quantities, SILENT, _TOLERANCE / 10.0

    def distance(one: Complexes, other: Complexes) -> Floats:
        return _apart(one, other, impedance)

    return adaptive_sweep(quantities, band, spot, distance, tolerance, progress)


class Solving:
    """Solves layouts of one stack one after another, each at one frequency.

    What they have in common is worked out once.
    """

    def __init__(self) -> None:
        self._kernels: BoardKernels | None = None

    def __call__(self, layout: Layout, frequency: float, level: Level) -> Solution:
        """Solve a layout.

        Parameters
        ----------
        layout : Layout
            Of the same stack, foil and brief's frequency as the first.
        frequency : float
            Hz, at most a fifth over the brief's.
        level : Level
            Fineness of the mesh.

        Returns
        -------
        Solution

        Raises
        ------
        ModelError
            If the copper cannot be meshed, or the stack is outside what the solver covers.
        """
        if self._kernels is None or self._kernels.layers != layout.stack:
            self._kernels = _kernels(layout, _BAND * layout.frequency)
        return _solver(layout, level, self._kernels).solve(frequency)


@dataclass(frozen=True, eq=False)
class _Solver(ABC):
    """A system and what has been solved of it."""

    farthest: ClassVar[float]
    """Angle from boresight up to which there is a far field, degrees."""

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
    def angles(self) -> Floats:
        """Angles from boresight at which the far field is worked out, rad."""
        step = 4.0 if self.level is Level.QUICK else 2.0
        return np.asarray(np.radians(np.arange(-self.farthest, self.farthest + 1.0, step)))

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
    def pattern(self, phi: float) -> tuple[Complexes, Complexes]:
        """Far field along theta and phi at the angles in one plane, V."""

    @abstractmethod
    def front_to_back(self) -> float | None:
        """Power at boresight over that straight behind, where there is a behind."""

    @abstractmethod
    def currents(self) -> Currents:
        """Currents at the brief's frequency, 1 W accepted."""

    @abstractmethod
    def doubts(self) -> dict[Reading, Trust]:
        """What the system leaves out of some readings."""


@dataclass(frozen=True, eq=False)
class _FreeSpace(_Solver):
    """Copper in free space, its ground plate as large as it is."""

    system: System
    farthest: ClassVar[float] = 180.0

    def solve(self, frequency: float) -> Solution:
        return solve(self.system, frequency)

    def posed(self, frequency: float) -> Equations:
        return equations(self.system, frequency)

    def finished(self, posed: Equations, found: Complexes) -> Solution:
        return solution(self.system, posed, found)

    def pattern(self, phi: float) -> tuple[Complexes, Complexes]:
        towards, along_theta, along_phi = direction_frame(self.angles, phi)
        field = radiated_field(self.system, self.spot.currents, self.spot.frequency, towards)
        return np.sum(field * along_theta, axis=1), np.sum(field * along_phi, axis=1)

    def front_to_back(self) -> float:
        ends = np.array([[0.0, 0.0, 1.0], [0.0, 0.0, -1.0]])
        field = radiated_field(self.system, self.spot.currents, self.spot.frequency, ends)
        front, back = np.sum(np.abs(field) ** 2, axis=1)
        return float(front / back)

    def currents(self) -> Currents:
        return plate_currents(self.system, self.spot)

    def doubts(self) -> dict[Reading, Trust]:
        if self.level is Level.QUICK:  # the balance takes as long as one more frequency
            return {}
        frequency = self.spot.frequency
        sent = sphere_power(
            lambda towards: radiated_field(self.system, self.spot.currents, frequency, towards),
            frequency,
            float(np.ptp(self.system.mesh.vertices, axis=0).max()),
        )
        missing = abs(1.0 - self.spot.lost - 2.0 * sent / self.spot.admittance.real)
        if missing < _UNBALANCED:
            return {}
        quality = mesh_quality(self.system.mesh)
        reason = (
            f"{100.0 * missing:.0f} % of the power that goes in is not found again, on "
            f"{quality.triangles} triangles with angles down to "
            f"{np.degrees(quality.smallest_angle):.0f} degrees"
        )
        doubt = Trust(TrustLevel.ROUGH, reason, "a thinner or lighter spacer is told better")
        return dict.fromkeys((Reading.GAIN, Reading.EFFICIENCY, Reading.PATTERN), doubt)


@dataclass(frozen=True, eq=False)
class _Board(_Solver):
    """Copper on a board, the board and its ground plane taken as infinite."""

    system: LayeredSystem
    farthest: ClassVar[float] = 88.0

    @property
    def _flowing(self) -> BoardCurrents:
        return board_currents(self.system, self.spot.currents, self.spot.frequency)

    def solve(self, frequency: float) -> Solution:
        return solve_layered(self.system, frequency)

    def posed(self, frequency: float) -> Equations:
        return layered_equations(self.system, frequency)

    def finished(self, posed: Equations, found: Complexes) -> Solution:
        return layered_solution(self.system, posed, found)

    def pattern(self, phi: float) -> tuple[Complexes, Complexes]:
        return space_field(self._flowing, self.angles, np.full(len(self.angles), phi))

    def front_to_back(self) -> None:
        return None

    def currents(self) -> Currents:
        return board_top_currents(self.system, self.spot)

    def doubts(self) -> dict[Reading, Trust]:
        accepted = self.spot.admittance.real / 2.0
        return rim_doubts(
            power_into_waves(self._flowing) / accepted, 1.0 - self.spot.lost, self.layout
        )


def _solver(layout: Layout, level: Level, kernels: BoardKernels | None) -> _Solver:
    """Solver that suits a layout's stack; a board has kernels."""
    if kernels is not None:
        return _Board(layout, level, build_layered_system(build_board_mesh(layout, level), kernels))
    return _FreeSpace(
        layout, level, build_system(build_mesh(layout, level), layout.foil, layout.stack)
    )


def _kernels(layout: Layout, highest: float) -> BoardKernels | None:
    """Kernels up to a frequency (Hz) if the stack is a board."""
    if series_permittivity(layout.stack) <= MOST_AIR_LIKE:
        return None
    return BoardKernels(layout.stack, layout.foil, highest)


def _apart(one: Complexes, other: Complexes, impedance: float) -> Floats:
    """Largest of the differences in reflection and in field, the latter to the total field."""
    match = np.abs(_reflection(one[:, 0], impedance) - _reflection(other[:, 0], impedance))
    size = np.linalg.norm(one[:, 1:], axis=1)
    field = np.linalg.norm(one[:, 1:] - other[:, 1:], axis=1) / size
    return np.asarray(np.maximum(match, field))


def _reflection(admittance: Complexes, impedance: float) -> Complexes:
    normalised = admittance * impedance
    return np.asarray((1.0 - normalised) / (1.0 + normalised))


def _samples(frequencies: Floats, sweep: Sweep, solver: _Solver, impedance: float) -> Samples:
    """What the fit says at some frequencies."""
    values = sweep.fit.at(frequencies)
    accepted = np.maximum(values[:, 0].real, 1e-12)
    scale = np.sqrt(4.0 * pi / (FREE_SPACE_IMPEDANCE * accepted))
    solved = sorted(solver.solved)
    lost = np.array([solver.solved[one].lost for one in solved])
    return Samples(
        frequency=frequencies,
        s11=_reflection(values[:, 0], impedance),
        z_in=1.0 / values[:, 0],
        e_x=values[:, 1] * scale,
        e_y=values[:, 2] * scale,
        efficiency=1.0 - np.clip(_smooth(np.array(solved), lost, frequencies), 0.0, 1.0),
    )


def _smooth(solved: Floats, values: Floats, wanted: Floats) -> Floats:
    """Cubic at most through what changes slowly: the share of the power that is lost."""
    middle, half = float(np.mean(solved)), float(np.ptp(solved)) / 2.0 or 1.0
    order = min(len(solved) - 1, 3)
    cubic = np.polynomial.polynomial.polyfit((solved - middle) / half, values, order)
    return np.asarray(np.polynomial.polynomial.polyval((wanted - middle) / half, cubic))


def _modes(sweep: Sweep, frequency: float) -> tuple[Mode, ...]:
    """Natural resonances with the port open: poles of the impedance.

    exp(j omega t) dies away for poles above the real axis; f = f_r (sqrt(1 - 1/4Q²) + j/2Q).
    """
    admittance, fields = sweep.values[:, :1], sweep.values[:, 1:]
    opened = np.concatenate([1.0 / admittance, fields / admittance], axis=1)
    count, quantities = opened.shape
    fit = fit_rational(sweep.frequencies, opened, (count * quantities + 1) // (quantities + 1))
    usual = np.sqrt(np.mean(np.abs(opened) ** 2, axis=0))
    usual[1:] = np.linalg.norm(usual[1:])
    found: list[tuple[float, complex, str]] = []
    for pole in fit.poles():
        size = abs(pole)
        if pole.imag <= 0.0 or not 1.0 / _MODE_REACH < size / frequency < _MODE_REACH:
            continue
        step = _BESIDE * size
        peak = np.abs(fit.at(np.array([pole + step]))[0]) * step / pole.imag / usual
        strength = max(peak[0], float(np.linalg.norm(peak[1:])))
        # What is hardly excited is there by the mesh's want of symmetry alone.
        if _LOWEST_Q < size / (2.0 * pole.imag) < _HIGHEST_Q and strength > _SEEN:
            found.append((strength, pole, "along x" if peak[1] > peak[2] else "along y"))
    return tuple(_mode(pole, name) for pole, name in _told_apart(found))


def _told_apart(found: list[tuple[float, complex, str]]) -> list[tuple[complex, str]]:
    """Poles and names by rising frequency, the strongest of those that run into one."""
    kept: list[tuple[complex, str]] = []
    for _, pole, name in sorted(found, key=lambda one: -one[0]):
        if all(name != other or abs(pole - at) > _APART * at.imag for at, other in kept):
            kept.append((pole, name))
    return sorted(kept, key=lambda one: abs(one[0]))


def _mode(pole: complex, name: str) -> Mode:
    return Mode(name, float(abs(pole)), float(abs(pole) / (2.0 * pole.imag)))


def _cut(solver: _Solver, phi: float) -> PatternCut:
    """Pattern in a plane through boresight, as far round as there is a field."""
    e_theta, e_phi = solver.pattern(phi)
    scale = np.sqrt(4.0 * pi / (FREE_SPACE_IMPEDANCE * solver.spot.admittance.real))
    return PatternCut(phi, solver.angles, e_theta * scale, e_phi * scale)


def _trust(level: Level, sweep: Sweep) -> dict[Reading, Trust]:
    if level is Level.QUICK:
        reason = f"quick mesh, {_QUICK_POINTS} frequencies solved, not checked between them"
        return dict.fromkeys(Reading, Trust(TrustLevel.ROUGH, reason))
    reason = (
        f"full-wave solution on the {level.value} mesh, {len(sweep.frequencies)} frequencies "
        f"solved, the fit between them true to {sweep.error:.1g}"
    )
    grade = TrustLevel.ROUGH if level is Level.COARSE else TrustLevel.GOOD
    return dict.fromkeys(Reading, Trust(grade, reason))
