"""Search over solved designs from one start: small residuals in few solutions."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np

from core.sizing.descent import best_move, room_left
from core.sizing.knobs import on_grid
from core.sizing.surrogate import Model, fitted, nothing

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.model import Design
    from core.sizing.freedoms import Freedoms

    Floats = NDArray[np.float64]

Solve = Callable[["Design"], "Floats | None"]
"""Residuals (m,) of a design; None where it can't be made or meshed."""

_GOOD, _POOR = 0.7, 0.25  # of what was predicted, gained
_FARTHEST, _SHORTEST = 2.0, 0.05  # reach, in steps
_LOOK = 0.4  # steps to each side when all freedoms are tried in turn, for a reach of 1
_LEAST_LOOK = 0.4  # of that: under it the noise of meshes hides slopes
_MOST_POOR = 2  # moves in a row


class Search:
    """Search from one start.

    Parameters
    ----------
    free : Freedoms
    solve : Solve
    base : callable or None
        From turns (n,) to a Model that is right about them: the coarser model.
    trust : float
        How far the base may be off, 1 for a base of no worth.
    looks : bool
        Whether to try every freedom in turn, and to trust no base from then on, where there
        is none or it leads astray. Otherwise the search gives up there.

    Attributes
    ----------
    turns, missing : (n,), (m,) ndarray of float
        The best so far.
    """

    turns: Floats
    missing: Floats

    def __init__(
        self,
        free: Freedoms,
        solve: Solve,
        base: Callable[[Floats], Model] | None,
        trust: float,
        looks: bool,
    ) -> None:
        self._free, self._solve = free, solve
        self._base, self._trust, self._looks = base, trust, looks
        self._tried: list[Floats] = []
        self._solved: list[Floats] = []
        self._looked_from: Floats | None = None

    def begin(self, turns: Floats) -> bool:
        """Solve the start; False where that cannot be done."""
        missing = self._try(turns)
        if missing is None:
            return False
        self.turns, self.missing = turns, missing
        return True

    def run(self, enough: Callable[[Floats], bool], most: int) -> None:
        """Improve until residuals are small enough, or nothing helps, or `most` are solved."""
        reach, poor = 1.0, _MOST_POOR if self._base is None else 0
        while not enough(self.missing) and len(self._tried) < most:
            if poor >= _MOST_POOR or reach < _SHORTEST:
                if not self._looks or (self._has_looked() and reach < _SHORTEST):
                    return
                if not self._has_looked():
                    reach = 1.0 if self._looked_from is None else max(reach, _LEAST_LOOK)
                    self._look_round(reach)
                    poor = 0
                    continue
            model = self.model()
            turns = best_move(self._free, self.turns, reach, model)
            moved = float(np.abs((turns - self.turns) / self._free.steps).max())
            gain = self._gain(turns, model(turns)[0])
            if gain > _GOOD and moved > 0.9 * reach:
                reach = min(1.6 * reach, _FARTHEST)
            elif gain < _POOR:
                reach = 0.5 * min(reach, moved)
            poor = poor + 1 if gain < _POOR else 0

    def model(self) -> Model:
        """What everything solved so far says of designs near the best."""
        blind = nothing(len(self.missing), len(self.turns))
        base = self._base(self.turns) if self._base is not None else blind
        tried, solved = np.array(self._tried), np.array(self._solved)
        return fitted(base, tried, solved, self._free.steps, self._trust)

    def _gain(self, turns: Floats, predicted: Floats) -> float:
        """Solve a point and keep it if it is better: the gain over that predicted."""
        before = self.missing @ self.missing
        missing = self._try(turns)
        if missing is None:
            return -1.0
        hoped = max(float(before - predicted @ predicted), 1e-6)
        self._keep_better(turns, missing)
        return float((before - missing @ missing) / hoped)

    def _keep_better(self, turns: Floats, missing: Floats) -> None:
        if missing @ missing < self.missing @ self.missing:
            self.turns, self.missing = turns, missing

    def _try(self, turns: Floats) -> Floats | None:
        missing = self._solve(self._free.box.design(turns, on_grid))
        if missing is not None:
            self._tried.append(turns)
            self._solved.append(missing)
        return missing

    def _has_looked(self) -> bool:
        if self._looked_from is None:
            return False
        apart = np.abs((self.turns - self._looked_from) / self._free.steps)
        return bool(apart.max() < _SHORTEST)

    def _look_round(self, reach: float) -> None:
        """Try every freedom in turn, and take the best of them; trust no base any more."""
        centre = self.turns
        for way in np.diag(_LOOK * reach * self._free.steps):
            inward = way if np.sum(centre * (way > 0)) < 0.6 else -way
            for turns in (centre + inward, centre - inward):
                if turns.min() < 0.0 or turns.max() > 1.0:
                    continue
                if room_left(self._free, turns) < 0.0:
                    continue
                missing = self._try(turns)
                if missing is not None:
                    self._keep_better(turns, missing)
                    break
        self._looked_from, self._base, self._trust = self.turns, None, 1.0
