"""Paints a field solution on the Mat: mesh lines, current in one hue, ticks."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QLineF, QPointF, Qt
from PySide6.QtGui import QLinearGradient, QPainter, QPen

from app import theme
from app.mat.stamps import blank, paint_stamp
from core.response.currents import greatest

if TYPE_CHECKING:
    from numpy.typing import NDArray
    from PySide6.QtGui import QPixmap

    from app.mat.camera import Camera
    from app.mat.current import Scale
    from app.theme import Theme
    from core.response.currents import SheetCurrent

    Floats = NDArray[np.float64]

_FLAT = 1e-9  # steepness under which a triangle is of one colour, per pixel
_TURNS, _FINE = 120, 0.75  # angles of a tick that are told apart, and sizes, pixels
_BROAD, _NOTCH = 0.42, 0.5  # half a tick's breadth and its tail's notch, of its half length


def paint_mesh(
    painter: QPainter, sheet: SheetCurrent, camera: Camera, tint: str, alpha: int
) -> None:
    """Edges of a sheet's triangles."""
    ends = np.sort(sheet.triangles[:, [[0, 1], [1, 2], [2, 0]]].reshape(-1, 2), axis=1)
    pixels = _on_screen(sheet.vertices, camera)
    lines = pixels[np.unique(ends, axis=0)].reshape(-1, 4).tolist()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(theme.colour(tint, alpha), 0.8))
    painter.drawLines([QLineF(*line) for line in lines])


def paint_sheet(
    painter: QPainter, sheet: SheetCurrent, camera: Camera, scale: Scale, shades: Theme
) -> None:
    """Greatest current of a period in one hue, its logarithm linear over each triangle."""
    corners = _on_screen(sheet.vertices, camera)[sheet.triangles]
    values = scale.shares(greatest(sheet.at_vertices))[sheet.triangles]
    seen = _in_view(corners, painter)
    corners, values = corners[seen], values[seen]
    starts, stops = _gradients(corners, values)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    painter.setPen(Qt.PenStyle.NoPen)
    colours = theme.current_stops(shades)
    for triangle, start, stop in zip(
        corners.tolist(), starts.tolist(), stops.tolist(), strict=True
    ):
        hue = QLinearGradient(*start, *stop)
        hue.setStops(colours)
        painter.setBrush(hue)
        painter.drawConvexPolygon([QPointF(*corner) for corner in triangle])


def paint_ticks(
    painter: QPainter, places: Floats, ahead: Floats, camera: Camera, shades: Theme
) -> None:
    """Darts about their places (n, 2), m; half of them lies ahead (n, 2), pixels with y up."""
    ratio = painter.device().devicePixelRatioF()
    sizes = np.rint(np.hypot(ahead[:, 0], ahead[:, 1]) / _FINE).astype(int)
    turns = np.rint(np.arctan2(ahead[:, 1], ahead[:, 0]) / (2 * np.pi) * _TURNS).astype(int)
    pixels = _on_screen(places, camera)
    for (across, down), size, turn in zip(
        pixels.tolist(), sizes.tolist(), (turns % _TURNS).tolist(), strict=True
    ):
        if size:
            paint_stamp(painter, QPointF(across, down), _dart(size, turn, shades, ratio))


@lru_cache(4096)
def _dart(size: int, turn: int, shades: Theme, ratio: float) -> QPixmap:
    """Dart of so many steps of size and angle: drawn once, for it is seen again and again."""
    half = size * _FINE
    picture, painter = blank(2 * half + 4, 2 * half + 4, ratio)
    painter.translate(half + 2, half + 2)
    painter.rotate(-360.0 * turn / _TURNS)
    painter.setPen(QPen(theme.colour(shades.tick_edge, 140), 1.0))
    painter.setBrush(theme.colour(shades.tick))
    broad = half * _BROAD
    corners = ((half, 0.0), (-half, broad), (-half * _NOTCH, 0.0), (-half, -broad))
    painter.drawPolygon([QPointF(*corner) for corner in corners])
    painter.end()
    return picture


def _on_screen(points: Floats, camera: Camera) -> Floats:
    return points * (camera.scale, -camera.scale) + (camera.left, camera.top)


def _in_view(corners: Floats, painter: QPainter) -> NDArray[np.bool_]:
    """Whether triangles (t, 3, 2) may reach into what is painted."""
    room = painter.clipBoundingRect()
    low, high = corners.min(axis=1), corners.max(axis=1)
    inside = (high >= (room.left(), room.top())) & (low <= (room.right(), room.bottom()))
    return np.asarray(inside.all(axis=1))


def _gradients(corners: Floats, values: Floats) -> tuple[Floats, Floats]:
    """Points (t, 2) at which values linear over triangles, (t, 3), are 0 and 1."""
    one, other = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    rise, climb = values[:, 1] - values[:, 0], values[:, 2] - values[:, 0]
    twice = one[:, 0] * other[:, 1] - one[:, 1] * other[:, 0]
    twice = np.where(np.abs(twice) < 1e-12, 1e-12, twice)
    steep = np.stack(
        [rise * other[:, 1] - climb * one[:, 1], climb * one[:, 0] - rise * other[:, 0]], axis=1
    )
    steep /= twice[:, None]
    square = np.sum(steep**2, axis=1, keepdims=True)
    steep = np.where(square < _FLAT**2, (_FLAT, 0.0), steep)
    way = steep / np.maximum(square, _FLAT**2)
    starts = corners[:, 0] - values[:, :1] * way
    return starts, starts + way
