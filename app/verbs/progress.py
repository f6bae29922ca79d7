"""Progress of long work on standard error, where it does not mix with the answer."""

from __future__ import annotations

import sys
from typing import TYPE_CHECKING, Final

from core.engines import LIVE
from core.progress import SILENT

if TYPE_CHECKING:
    from core.progress import Progress


_SOLVED: Final = "field check: {done} of about {total} frequencies solved"


class _OnStandardError:
    """Tells each solution; over itself on a terminal, a line each elsewhere."""

    def __init__(self, words: str) -> None:
        self._words, self._told = words, ""
        self._end = "\r" if sys.stderr.isatty() else "\n"

    def step(self, done: int, total: int) -> None:
        """Tell how far the work is, once."""
        words = self._words.format(done=done, total=total)
        if words != self._told:
            sys.stderr.write(words + self._end)
            sys.stderr.flush()
        self._told = words


def told_on_stderr(engine: str, words: str = _SOLVED) -> Progress:
    """Listener for an engine: silent for the one that answers at once.

    The words say what is done, with places for {done} and {total}.
    """
    return SILENT if engine == LIVE else _OnStandardError(words)
