"""The engines: ways from a Layout to its Response, by name."""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

from numpy.typing import ArrayLike

from core.layout.model import Layout
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


ENGINES: Final[dict[str, Engine]] = {LIVE: respond_live, FIELD: _respond_field}
