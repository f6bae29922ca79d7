"""Progress of long work: told to whoever listens, stopped by whoever asks."""

from __future__ import annotations

from typing import Protocol


class Progress(Protocol):
    """Listener that long work reports to."""

    def step(self, done: int, total: int) -> None:
        """Report `done` of `total` steps; raises Cancelled when the work should stop."""


class _Silent:
    """Listens to nothing and never cancels."""

    def step(self, done: int, total: int) -> None:
        """Do nothing."""


SILENT: Progress = _Silent()
