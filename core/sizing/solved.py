"""Designs put before the field solver, and counted."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from core.errors import LayoutError, ModelError
from core.findings import Severity
from core.fullwave.mesh import Level
from core.fullwave.solving import Solving
from core.layout.build import build_layout

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    from core.design.model import Design
    from core.layout.model import Layout
    from core.progress import Progress
    from core.sizing.goal import Goal

    Floats = NDArray[np.float64]

Spot = Callable[["Layout", float, Level], tuple[complex, complex, complex]]
"""Admittance at the port (S) and field at boresight along x and y in the scale of `Samples`, of
a layout at one frequency (Hz)."""


class FieldSpot:
    """The field solver as a spot, for designs on one stock; what they share is kept."""

    def __init__(self) -> None:
        self._solve = Solving()

    def __call__(
        self, layout: Layout, frequency: float, level: Level
    ) -> tuple[complex, complex, complex]:
        """Solve a layout at one frequency (Hz): admittance, S, and field along x and y."""
        solution = self._solve(layout, frequency, level)
        return solution.admittance, solution.e_x, solution.e_y


class SolvedDesigns:
    """Solves designs, counts how often, and remembers why one could not be solved.

    Parameters
    ----------
    goal : Goal
    spot : Spot
    progress : Progress
        Told before each solution.
    most : int
        Solutions that are expected at most, for the progress.

    Attributes
    ----------
    counts : dict of Level to int
        Solutions on each mesh.
    refusal : str
        Why the last design that could not be made or solved could not.
    """

    def __init__(self, goal: Goal, spot: Spot, progress: Progress, most: int) -> None:
        self.goal, self.refusal = goal, ""
        self.counts = dict.fromkeys(Level, 0)
        self._spot, self._progress, self._most = spot, progress, most

    @property
    def solves(self) -> int:
        """Solutions in all."""
        return sum(self.counts.values())

    def step(self, _done: int, _total: int) -> None:
        """Listen to work between solutions: what is told is how many are solved."""
        self._progress.step(min(self.solves, self._most), self._most)

    def missing(self, design: Design, level: Level) -> Floats | None:
        """Residuals of a design; None where it can't be made or meshed."""
        solved = self.at(design, design.brief.frequency, level)
        return None if solved is None else self.goal.missing(*solved)

    def at(
        self, design: Design, frequency: float, level: Level
    ) -> tuple[complex, complex, complex] | None:
        """Admittance and field of a design; None where it can't be made or meshed."""
        self.step(0, 0)
        layout = self.buildable(design)
        if layout is None:
            return None
        try:
            solved = self._spot(layout, frequency, level)
        except ModelError as error:
            self.refusal = f"{error}."
            return None
        self.counts[level] += 1
        return solved

    def buildable(self, design: Design) -> Layout | None:
        """Layout of a design; None, and the refusal kept, where it can't be made."""
        try:
            layout = build_layout(design)
        except LayoutError as error:
            self.refusal = f"{error}."
            return None
        for finding in layout.findings:
            if finding.severity is Severity.REFUSAL or finding.code == "strip-off-ground":
                self.refusal = finding.message
                return None
        return layout
