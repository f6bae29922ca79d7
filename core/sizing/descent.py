"""One step of a search that stays among designs that can be made."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np
from scipy.optimize import Bounds, NonlinearConstraint, minimize

from core.sizing.room import margins

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.sizing.freedoms import Freedoms
    from core.sizing.surrogate import Model

    Floats = NDArray[np.float64]

_Cost = Callable[["Floats"], tuple[float, "Floats"]]

_DAMPING = 0.05  # of a move by all of its reach, against residuals squared
_SPARE = 2e-5  # m; kept of every margin, so that rounding does not use it up
_MILLIMETRE = 1e-3
_FARTHEST = 3.0  # steps that a design may be moved to be made at all


def best_move(free: Freedoms, turns: Floats, reach: float, model: Model) -> Floats:
    """Turns near a point at which a model's residuals are least.

    Parameters
    ----------
    free : Freedoms
    turns : (n,) ndarray of float
    reach : float
        Farthest that each may go, in steps.
    model : Model

    Returns
    -------
    (n,) ndarray of float
        Of a design that can be made, as far as `margins` can tell.

    Notes
    -----
    Least squares with little damping, so that of the many designs which meet a goal the
    nearest is taken, by sequential quadratic programming (D. Kraft, DFVLR-FB 88-28, 1988).
    """
    scale = reach * free.steps

    def cost(move: Floats) -> tuple[float, Floats]:
        value, slope = model(turns + move * scale)
        squares = float(value @ value + _DAMPING * move @ move)
        return 0.5 * squares, (value @ slope) * scale + _DAMPING * move

    return _constrained(free, turns, scale, cost)


def made_buildable(free: Freedoms) -> Floats:
    """Turns nearest to a design's own at which it can be made.

    Parameters
    ----------
    free : Freedoms

    Returns
    -------
    (n,) ndarray of float
        Best effort: where there is no room at all, `margins` there are still negative.
    """
    inside = np.clip(free.start, 0.0, 1.0)
    if room_left(free, inside) >= 0.0:
        return inside

    def cost(move: Floats) -> tuple[float, Floats]:
        return 0.5 * float(move @ move), move

    return _constrained(free, inside, _FARTHEST * free.steps, cost)


def room_left(free: Freedoms, turns: Floats) -> float:
    """Least margin of buildability at a point, m; negative where it can't be made.

    Parameters
    ----------
    free : Freedoms
    turns : (n,) ndarray of float

    Returns
    -------
    float
    """
    return float(margins(free.box.design(turns, _above_nothing)).min())


def _constrained(free: Freedoms, turns: Floats, scale: Floats, cost: _Cost) -> Floats:
    """Point within reach, box and margins at which a cost of the move is least."""
    low, high = np.maximum(-1.0, -turns / scale), np.minimum(1.0, (1.0 - turns) / scale)

    def room(move: Floats) -> Floats:
        design = free.box.design(np.clip(turns + move * scale, 0.0, 1.0), _above_nothing)
        return (margins(design) - _SPARE) / _MILLIMETRE

    found = minimize(
        cost,
        np.zeros(len(turns)),
        jac=True,
        bounds=Bounds(low, high),
        constraints=NonlinearConstraint(room, 0.0, np.inf),
        method="SLSQP",
        options={"maxiter": 60, "ftol": 1e-4},
    )
    move = np.clip(np.nan_to_num(found.x), low, high)
    return np.asarray(np.clip(turns + move * scale, 0.0, 1.0))


def _above_nothing(value: float) -> float:
    """Length as it is, except that one too short to be a parameter is none."""
    return value if abs(value) > 2e-9 else 0.0
