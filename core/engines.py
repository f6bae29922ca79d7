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

ENGINES: Final[dict[str, Engine]] = {LIVE: respond_live}
