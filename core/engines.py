"""The engines: ways from a Layout to its Response, by name."""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

from numpy.typing import ArrayLike

from core.layout.model import Layout
from core.layout.tail import Tail
from core.live.respond import ENGINE
from core.live.respond import respond as respond_live
from core.progress import Progress
from core.response.model import Response

Engine = Callable[[Layout, ArrayLike, Progress], Response]
"""Takes a layout, frequencies (Hz, rising) and a listener."""

LIVE: Final = ENGINE
FIELD: Final = "field"


def _respond_field(layout: Layout, frequencies: ArrayLike, progress: Progress) -> Response:
    """Response by the field solver, whose libraries are loaded when it is first asked."""
    from core.fullwave.respond import respond  # noqa: PLC0415 - takes half a second

    return respond(layout, frequencies, progress)


LEVELS: Final = ("coarse", "normal", "fine")
"""Fineness of the field solver's mesh, by name."""

NEXT_COARSER: Final = {"normal": "coarse", "fine": "normal"}
"""Level that another is held against to tell how far its readings can be off."""


def respond_on_mesh(
    layout: Layout,
    frequencies: ArrayLike,
    progress: Progress,
    level: str,
    tail: Tail | None = None,
) -> Response:
    """Response by the field solver on a mesh of some fineness.

    Parameters
    ----------
    layout : Layout
    frequencies : (n,) array_like of float
        Hz, > 0, rising.
    progress : Progress
        Told after each solved frequency; may cancel.
    level : str
        One of `LEVELS`, or quick: three frequencies on a mesh coarser than coarse.
    tail : Tail, optional
        A cable behind the ground plate to solve with it.

    Returns
    -------
    Response

    Raises
    ------
    ModelError
        If the stack is outside what the solver covers.
    ConvergenceError
        If the sweep does not settle.
    InputError
        If a tail is asked for over an endless ground.
    Cancelled
        If the progress asks for it.
    """
    from core.fullwave.mesh import Level  # noqa: PLC0415 - takes half a second
    from core.fullwave.respond import respond  # noqa: PLC0415

    return respond(layout, frequencies, progress, Level(level), tail)


ENGINES: Final[dict[str, Engine]] = {LIVE: respond_live, FIELD: _respond_field}
