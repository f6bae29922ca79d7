"""The field solver as an engine: from a Layout to the Response of its very shape.

Shapes: k solved frequencies, n wanted ones.
"""

from __future__ import annotations

from dataclasses import replace
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.equations import project
from core.fullwave.mesh import Level
from core.fullwave.mesh_report import coarse_doubts, mesh_report
from core.fullwave.modes import natural_modes
from core.fullwave.solvers import build_solver, kernels_of
from core.fullwave.sweep import Sweep, adaptive_sweep, first_points
from core.progress import SILENT
from core.response.model import (
    FarSphere,
    PatternCut,
    Reading,
    Response,
    Samples,
    Trust,
    TrustLevel,
)
from core.response.sphere import pattern_cut

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from core.fullwave.solvers import Solver
    from core.layout.model import Layout
    from core.layout.tail import Tail
    from core.progress import Progress

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_ENGINE: Final = "field"
_QUICK_POINTS: Final = 3  # frequencies solved at the quick level
_QUICK_STEP: Final = 4.0  # degrees between the directions of its cuts
_TOLERANCE = 2e-3  # of reflection coefficient and field ratio in a sweep


def respond(
    layout: Layout,
    frequencies: ArrayLike,
    progress: Progress,
    level: Level = Level.NORMAL,
    tail: Tail | None = None,
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
    tail : Tail, optional
        A cable behind the ground plate to solve with it.

    Returns
    -------
    Response
        Without currents and far field over the sphere at the quick level: two cuts alone.

    Raises
    ------
    ModelError
        If the stack is outside what the solver covers.
    InputError
        If a tail is asked for over an endless ground.
    ConvergenceError
        If the sweep does not settle.
    Cancelled
        If the progress asks for it.
    """
    wanted = np.asarray(frequencies, dtype=np.float64)
    band = (min(wanted[0], layout.frequency), max(wanted[-1], layout.frequency))
    solver = build_solver(layout, level, kernels_of(layout, band[1]), tail)
    impedance = layout.ports[0].impedance
    sweep = _swept(solver, band, impedance, progress)
    at_spot = _samples(np.array([layout.frequency]), sweep, solver, impedance).at(0)
    at_spot = replace(at_spot, efficiency=np.asarray(1.0 - np.clip(solver.spot.lost, 0.0, 1.0)))
    gain = abs(complex(at_spot.e_x)) ** 2 + abs(complex(at_spot.e_y)) ** 2
    sphere, cuts = _pattern(solver)
    report = mesh_report(*solver.meshed, level, (band[1], layout.stack))
    doubts = solver.doubts(), coarse_doubts(report, band[1], layout.frequency)
    return Response(
        engine=_ENGINE,
        reference_impedance=impedance,
        sweep=_samples(wanted, sweep, solver, impedance),
        spot=at_spot,
        modes=natural_modes(sweep, layout.frequency),
        directivity=gain / float(at_spot.efficiency),
        cuts=cuts,
        front_to_back=_front_to_back(cuts[0]),
        trust=_trust(level, sweep, doubts),
        sphere=sphere,
        mesh=report,
        currents=None if level is Level.QUICK else solver.currents(),
    )


def _swept(
    solver: Solver, band: tuple[float, float], impedance: float, progress: Progress
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


def _apart(one: Complexes, other: Complexes, impedance: float) -> Floats:
    """Largest of the differences in reflection and in field, the latter to the total field."""
    match = np.abs(_reflection(one[:, 0], impedance) - _reflection(other[:, 0], impedance))
    size = np.linalg.norm(one[:, 1:], axis=1)
    field = np.linalg.norm(one[:, 1:] - other[:, 1:], axis=1) / size
    return np.asarray(np.maximum(match, field))


def _reflection(admittance: Complexes, impedance: float) -> Complexes:
    normalised = admittance * impedance
    return np.asarray((1.0 - normalised) / (1.0 + normalised))


def _samples(frequencies: Floats, sweep: Sweep, solver: Solver, impedance: float) -> Samples:
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


def _pattern(solver: Solver) -> tuple[FarSphere | None, tuple[PatternCut, PatternCut]]:
    """Far field over the sphere and in the planes of x and y; quickly in these alone."""
    if solver.level is Level.QUICK:
        theta = np.radians(np.arange(-solver.farthest, solver.farthest + 1.0, _QUICK_STEP))
        planes = (np.full(len(theta), phi) for phi in (0.0, pi / 2))
        along_x, along_y = (
            PatternCut(phi[0], theta, *solver.far_field(theta, phi)) for phi in planes
        )
        return None, (along_x, along_y)
    sphere = solver.sphere()
    return sphere, (pattern_cut(sphere, 0.0), pattern_cut(sphere, pi / 2))


def _front_to_back(cut: PatternCut) -> float | None:
    """Power at boresight over that straight behind, where there is a behind."""
    if not np.isclose(cut.theta[-1], pi):
        return None
    power = np.abs(cut.e_theta) ** 2 + np.abs(cut.e_phi) ** 2
    return float(power[len(power) // 2] / power[-1])


def _trust(
    level: Level, sweep: Sweep, doubts: tuple[dict[Reading, Trust], ...]
) -> dict[Reading, Trust]:
    """Trust in every reading: what is doubted most."""
    reason = (
        f"full-wave solution on the {level.value} mesh, {len(sweep.frequencies)} frequencies "
        f"solved, the fit between them true to {sweep.error:.1g}"
    )
    if level is Level.QUICK:
        reason = f"quick mesh, {_QUICK_POINTS} frequencies solved, not checked between them"
    grade = TrustLevel.ROUGH if level in (Level.QUICK, Level.COARSE) else TrustLevel.GOOD
    trust = dict.fromkeys(Reading, Trust(grade, reason))
    order = list(TrustLevel)
    for some in doubts:
        for reading, doubt in some.items():
            worse = order.index(doubt.level) - order.index(trust[reading].level)
            # What is doubted as much is the better reason, but none is as good as a quick mesh.
            if worse > 0 or (worse == 0 and level is not Level.QUICK):
                trust[reading] = doubt
    return trust
