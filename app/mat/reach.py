"""How far a handle reaches, and which of them would crowd each other."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.mat.handles import Handle

REACH = 12.0
"""Pixels round a handle's middle in which it is hit: 24 across (WCAG 2.2, 2.5.8)."""


def apart(
    handles: tuple[Handle, ...],
    pixels: Callable[[Handle], tuple[float, float]],
    kept: frozenset[str],
) -> tuple[Handle, ...]:
    """Handles that do not crowd one that matters more; `kept` ones stay whatever happens."""
    places: list[tuple[float, float]] = []
    chosen = []
    for handle in handles:
        x, y = pixels(handle)
        crowded = any(abs(x - a) < 2 * REACH and abs(y - b) < 2 * REACH for a, b in places)
        if not crowded or handle.name in kept:
            chosen.append(handle)
        if not crowded:
            places.append((x, y))
    return tuple(chosen)
