"""Where the Mat is looked at: metres to pixels and back, zoom and pan."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import floor, log10

LEAST, MOST = 50.0, 200_000.0  # pixels per metre: 20 m to 5 mm across a thousand pixels


@dataclass(frozen=True)
class Camera:
    """A look at the Mat, y up.

    Attributes
    ----------
    scale : float
        Pixels per metre.
    left, top : float
        Pixel of the Mat's origin.
    """

    scale: float
    left: float
    top: float

    def to_screen(self, x: float, y: float) -> tuple[float, float]:
        return self.left + x * self.scale, self.top - y * self.scale

    def to_mat(self, across: float, down: float) -> tuple[float, float]:
        return (across - self.left) / self.scale, (self.top - down) / self.scale

    def panned(self, across: float, down: float) -> Camera:
        return replace(self, left=self.left + across, top=self.top + down)

    def zoomed(self, factor: float, across: float, down: float) -> Camera:
        """Zoom so that what lies under the given pixel stays there."""
        scale = min(max(self.scale * factor, LEAST), MOST)
        kept = scale / self.scale
        return Camera(scale, across - (across - self.left) * kept, down - (down - self.top) * kept)


def fitted(
    bounds: tuple[float, float, float, float], room: tuple[float, float, float, float]
) -> Camera:
    """Camera that shows bounds (x and y from, x and y to; m) in a rectangle of pixels.

    `room` is left, top, width, height.
    """
    low_x, low_y, high_x, high_y = bounds
    left, top, width, height = room
    scale = min(width / max(high_x - low_x, 1e-6), height / max(high_y - low_y, 1e-6))
    scale = min(max(scale, LEAST), MOST)
    return Camera(
        scale,
        left + width / 2 - (low_x + high_x) / 2 * scale,
        top + height / 2 + (low_y + high_y) / 2 * scale,
    )


def grid_steps(scale: float) -> tuple[float, float, float]:
    """Fine, middle and coarse distance of the grid (m) at so many pixels per metre."""
    step = 1e-4
    while step * scale < 3.5:
        step *= 10
    return step, step * 5, step * 10


def nice_step(least: float) -> float:
    """Smallest of 1, 2, 5 times a power of ten that is no less."""
    power = 10.0 ** floor(log10(least))
    return next(n * power for n in (1, 2, 5, 10) if n * power >= least * (1.0 - 1e-9))
