"""Correction of a design by the field solver, until the solved response meets the brief."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from core.constants import SPEED_OF_LIGHT
from core.design.feed import ProbeFeed
from core.design.polarisation import Polarisation
from core.fullwave.mesh import Level
from core.layout.build import electrical_layout
from core.live.respond import sample
from core.progress import SILENT, Progress
from core.sizing.descent import made_buildable, room_left
from core.sizing.freedoms import Freedoms, freedoms
from core.sizing.goal import Goal
from core.sizing.knobs import on_grid
from core.sizing.search import Search
from core.sizing.seed import THICKEST
from core.sizing.size import GOAL_AXIAL_RATIO_DB, GOAL_VSWR, size
from core.sizing.solved import FieldSpot, SolvedDesigns, Spot
from core.sizing.starts import family_starts
from core.sizing.surrogate import Model, linearised
from core.sizing.tuning import in_tune

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.model import Brief, Design

    Floats = NDArray[np.float64]

_AIM = 0.3  # of the goals: where the coarse search is done
_AIM_AT_LAST = 0.5  # and the search at the finest level
_WORTH = 0.95  # of the goals: coarse results that are worth a finer look
_COMFORTABLE = 0.85  # of the goals: a design nearer to them than this is not looked past
_PATIENT = 120  # solutions up to which a better start than one that barely meets is looked for
_NEAR = 2.0  # in units of the goals: a design given as near as this is not sized first
_FAR = 4.0  # in units of the goals: a start as far off as this is brought into tune first
_MOST_COARSE, _MOST_FINE = 50, 6  # solutions from one start
_MOST = 200  # solutions after which no search goes on
_LIVE_TRUST = 1.0  # how far off the live model may be, and a coarse mesh
_MESH_TRUST = 0.1


@dataclass(frozen=True)
class Settling:
    """What settling by field check came to.

    Attributes
    ----------
    design : Design
        The best found, lengths on a grid of a hundredth of a millimetre.
    met : bool
        Whether its solved response reaches the goals.
    reason : str
        One sentence: what was reached, and what stood in the way where it was not met.
    vswr, axial_ratio_db : float
        Solved at `level`; infinite where nothing could be solved. The axial ratio is 0 for
        linear polarisation, where it is of no concern.
    solves : int
        Solutions in all: one is one factorisation at one frequency.
    fine_solves : int
        Of them at `level`.
    level : Level
        Mesh that it was judged on.
    """

    design: Design
    met: bool
    reason: str
    vswr: float
    axial_ratio_db: float
    solves: int
    fine_solves: int
    level: Level


def settle(
    design: Design,
    *,
    vswr: float | None = None,
    axial_ratio_db: float | None = None,
    level: Level = Level.FINE,
    keep_element: bool = False,
    spot: Spot | None = None,
    progress: Progress = SILENT,
) -> Settling:
    """Correct a design until its solved response meets the brief.

    Parameters
    ----------
    design : Design
        Its brief, stock, process, kind of feed and probe's pin are kept. Where it is far off
        it is sized first; where that does not settle, other families of feed are tried.
    vswr, axial_ratio_db : float, optional
        Goals; 1.5 (dB), or the brief's own where those are stricter, if left out.
    level : Level
        Mesh to judge on; the search before it is on the coarse one.
    keep_element : bool
        Keep the sides as well.
    spot : Spot, optional
        The solver; the field solver if left out.
    progress : Progress
        Told after each solution; may cancel.

    Returns
    -------
    Settling

    Raises
    ------
    Cancelled
        If the progress asks for it.

    Notes
    -----
    Space mapping: the live model stands in for the coarse mesh, and that for the fine one,
    each corrected through what has been solved (`core.sizing.surrogate`). The left-hand
    antenna is the mirror image of the right-hand one, which is what is solved.
    """
    goal = settling_goal(design.brief, vswr, axial_ratio_db)
    solver = SolvedDesigns(goal, spot or FieldSpot(), progress, _MOST)
    right = replace(design, brief=replace(design.brief, polarisation=goal.polarisation))
    found = _best_found(_Starts(right, solver, keep_element), level)
    return _settling(design, found, solver, level)


def settling_goal(
    brief: Brief, vswr: float | None = None, axial_ratio_db: float | None = None
) -> Goal:
    """What settling aims for.

    Parameters
    ----------
    brief : Brief
    vswr, axial_ratio_db : float, optional
        Goals; 1.5 (dB), or the brief's own where those are stricter, if left out.

    Returns
    -------
    Goal
        For the right-hand antenna where the brief asks for the left-hand one, its mirror image.
    """
    is_linear = brief.polarisation is Polarisation.LINEAR
    return Goal(
        Polarisation.LINEAR if is_linear else Polarisation.RHCP,
        brief.impedance,
        min(GOAL_VSWR, brief.vswr) if vswr is None else vswr,
        min(GOAL_AXIAL_RATIO_DB, brief.axial_ratio_db)
        if axial_ratio_db is None
        else axial_ratio_db,
    )


@dataclass(frozen=True, eq=False)
class _Found:
    """Where the search from one start ended."""

    free: Freedoms
    turns: Floats
    missing: Floats
    level: Level

    @property
    def design(self) -> Design:
        return self.free.box.design(self.turns, on_grid)


class _Start:
    """A design to start from, made buildable, and solved on the coarse mesh."""

    def __init__(
        self, design: Design, solver: SolvedDesigns, keep_element: bool, knows: bool
    ) -> None:
        self.free = free = freedoms(design, keep_element=keep_element)
        self._solver = solver
        turns = made_buildable(free)

        def live(at: Floats) -> Model:
            return linearised(lambda one: _live_missing(free, one, solver.goal), at, free.steps)

        base = live if knows else None
        solve = partial(solver.missing, level=Level.COARSE)
        self.search = Search(free, solve, base, _LIVE_TRUST, looks=True)
        has_room = room_left(free, turns) >= 0.0
        if not has_room:  # looked at all the same, so that what is in the way can be told
            solver.buildable(free.box.design(turns, on_grid))
        self.is_solved = has_room and self.search.begin(turns)

    @property
    def design(self) -> Design:
        """Best so far."""
        return self.free.box.design(self.search.turns, on_grid)

    @property
    def worst(self) -> float:
        """How far off it is, in units of the goals."""
        return self._solver.goal.worst(self.search.missing) if self.is_solved else np.inf

    def searched(self, level: Level) -> _Found:
        """Where a search from here ends, at the wanted level if it comes that far."""
        first, solver = self.search, self._solver
        first.run(_within(solver.goal, _AIM), min(_MOST_COARSE, _MOST - solver.solves))
        found = _Found(self.free, first.turns, first.missing, Level.COARSE)
        if level is Level.COARSE or self.worst > _WORTH:
            return found
        coarse = first.model()
        solve = partial(solver.missing, level=level)
        last = Search(self.free, solve, lambda _: coarse, _MESH_TRUST, looks=False)
        if not last.begin(first.turns):
            return found
        last.run(_within(solver.goal, _AIM_AT_LAST), _MOST_FINE)
        return _Found(self.free, last.turns, last.missing, level)


@dataclass(frozen=True, eq=False)
class _Starts:
    """Where to begin, one after another."""

    given: Design
    solver: SolvedDesigns
    keep_element: bool

    def __iter__(self) -> Iterator[_Start]:
        """Design as given, or as sized by equations where that is nearer, then other families."""
        given = self._start(self.given, knows=True)
        if given.worst <= _NEAR:
            yield given
        sized = size(self.given, keep_element=self.keep_element, progress=self.solver)
        tuned = self._tuned(sized.design, knows=True)
        yield tuned if given.worst <= _NEAR else min(tuned, given, key=lambda one: one.worst)
        for family in family_starts(self.given, keep_element=self.keep_element):
            yield self._tuned(family, knows=False)

    def _tuned(self, design: Design, knows: bool) -> _Start:
        """Start that is scaled into tune where it is far off."""
        start = self._start(design, knows)
        if self.keep_element or not start.is_solved or start.worst <= _FAR:
            return start
        solve_at = partial(self.solver.at, level=Level.COARSE)
        tuned = self._start(in_tune(start.design, solve_at, self.solver.goal), knows)
        return min(start, tuned, key=lambda one: one.worst)

    def _start(self, design: Design, knows: bool) -> _Start:
        return _Start(design, self.solver, self.keep_element, knows)


def _best_found(starts: _Starts, level: Level) -> _Found | None:
    """Best of the starts, one after another until one meets the goals."""
    best: _Found | None = None
    solver = starts.solver
    for start in starts:
        if not start.is_solved:
            continue
        found = start.searched(level)
        if best is None or _rank(found, solver, level) < _rank(best, solver, level):
            best = found
        margin = _COMFORTABLE if solver.solves < _PATIENT else 1.0
        if _is_met(best, solver, level, margin) or solver.solves >= _MOST:
            break
    if best is not None and best.level is not level:
        missing = solver.missing(best.design, level)
        best = best if missing is None else replace(best, missing=missing, level=level)
    return best


def _within(goal: Goal, part: float) -> Callable[[Floats], bool]:
    """Test of residuals against a part of the goals."""
    return lambda missing: goal.worst(missing) <= part


def _rank(found: _Found, solver: SolvedDesigns, level: Level) -> tuple[bool, float]:
    return found.level is not level, solver.goal.worst(found.missing)


def _is_met(found: _Found, solver: SolvedDesigns, level: Level, margin: float = 1.0) -> bool:
    return found.level is level and solver.goal.worst(found.missing) <= margin


def _live_missing(free: Freedoms, turns: Floats, goal: Goal) -> Floats:
    """Residuals by the live model."""
    design = free.box.design(np.clip(turns, 0.0, 1.0), on_grid)
    spot = sample(electrical_layout(design), np.array([design.brief.frequency])).at(0)
    return goal.missing(1.0 / complex(spot.z_in), complex(spot.e_x), complex(spot.e_y))


def _settling(
    design: Design, found: _Found | None, solver: SolvedDesigns, level: Level
) -> Settling:
    """Put what was reached, and what stood in the way, in one sentence."""
    count = solver.solves, solver.counts[level]
    if found is None:
        reason = f"No design was found that can be made. {solver.refusal}".strip()
        return Settling(design, False, reason, np.inf, np.inf, *count, level)
    vswr, ratio = solver.goal.reached(found.missing)
    reached = f"VSWR {vswr:.2f}"
    if design.brief.polarisation is not Polarisation.LINEAR:
        reached += f", axial ratio {min(ratio, 60.0):.2f} dB"
    met = _is_met(found, solver, level)
    reason = (
        f"Solved on the {level.value} mesh: {reached}."
        if met
        else f"The best found has {reached}: {_obstacle(found)}."
    )
    settled = replace(found.design, brief=design.brief)
    return Settling(settled, met, reason, vswr, ratio, *count, level)


def _obstacle(found: _Found) -> str:
    """What a search that fell short ran into."""
    stops = found.free.box.limits_reached(found.turns)
    if stops:
        return stops
    design = found.design
    thickness = design.stock.height * design.brief.frequency / SPEED_OF_LIGHT
    if isinstance(design.feed, ProbeFeed) and thickness > THICKEST:
        return f"a straight probe is too inductive on a spacer of {thickness:.2f} wavelength"
    return "nothing that the solver tried on this stock with this feed did better"
