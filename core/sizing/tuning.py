"""A start brought into tune: the same shape solved at other frequencies says by how much."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from core.design.feed import DualEdge
from core.design.model import Element
from core.fullwave.rational import fit_rational
from core.sizing.knobs import on_grid

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.model import Design
    from core.sizing.goal import Goal

    Floats = NDArray[np.float64]

SolveAt = Callable[["Design", float], "tuple[complex, complex, complex] | None"]
"""Admittance (S) and boresight field, in the scale of `Samples`, of a design at a frequency."""

_REACH, _POINTS = 0.15, 7  # band looked over, relative, and solutions in it
_SUPPORT = 5  # of the rational function: as many as its three quantities settle
_STEPS = 301


def in_tune(design: Design, solve_at: SolveAt, goal: Goal) -> Design:
    """Scale a design in plan so that what it does best, it does at the brief's frequency.

    Parameters
    ----------
    design : Design
    solve_at : SolveAt
    goal : Goal

    Returns
    -------
    Design
        Sides, landings, tee and probe scaled; strip widths, gaps and lead-in are kept. The
        design itself where it can't be solved.
    """
    frequency = design.brief.frequency
    ratios = 1.0 - _REACH * np.cos(np.pi * (np.arange(_POINTS) + 0.5) / _POINTS)
    samples = []
    for ratio in ratios:
        solved = solve_at(design, float(ratio * frequency))
        if solved is None:
            return design
        admittance, *field = solved
        # The field of 1 V at the port is analytic in the frequency, that of 1 W is not.
        samples.append([admittance, *(np.sqrt(admittance.real) * one for one in field)])
    fit = fit_rational(ratios, np.array(samples), _SUPPORT)
    wanted = np.linspace(ratios[0], ratios[-1], _STEPS)
    missing = np.array([goal.missing(*map(complex, values)) for values in fit.at(wanted)])
    return _scaled(design, float(wanted[np.argmin(np.sum(missing**2, axis=1))]))


def _scaled(design: Design, ratio: float) -> Design:
    """Design with its element and what hangs on it scaled in plan."""
    element, feed = design.element, design.feed
    sides = Element(on_grid(element.width * ratio), on_grid(element.length * ratio))
    if not isinstance(feed, DualEdge):
        moved = replace(feed, x=on_grid(feed.x * ratio), y=on_grid(feed.y * ratio))
        return replace(design, element=sides, feed=moved)
    first, second = (
        replace(branch, landing=on_grid(branch.landing * ratio))
        for branch in (feed.first, feed.second)
    )
    longer = first.landing - feed.first.landing + second.landing - feed.second.landing
    around = replace(
        feed,
        first=first,
        second=second,
        delay_length=on_grid(feed.delay_length + longer),
        tee=on_grid(feed.tee * (1.0 + longer / feed.delay_length)),
    )
    return replace(design, element=sides, feed=around)
