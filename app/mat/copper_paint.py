"""Copper that looks like copper: brushed, lit from the upper left, lying on the spacer."""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import (
    QBrush,
    QColor,
    QImage,
    QLinearGradient,
    QPainter,
    QPainterPath,
    QPen,
    QRadialGradient,
    QTransform,
)

from app import theme
from app.mat.paths import on_screen
from core.layout.model import MarkKind, Role

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from app.theme import Theme
    from core.layout.model import Layout
    from core.shapes.outline import Region

_TILE = 256  # pixels of the brushed texture


def paint_copper(
    painter: QPainter, layout: Layout, camera: Camera, shades: Theme, *, stale: bool
) -> None:
    """Top copper, its solder dots and the pin; paler where the layout is an old one."""
    # Areas are filled without smoothing, which takes five times as long; the bevel, drawn
    # smoothly over their edges, hides the steps.
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    top = [one.region for one in layout.pieces if one.role is Role.TOP_COPPER]
    paths = [on_screen(region, camera) for region in top]
    whole = QPainterPath()
    whole.setFillRule(Qt.FillRule.WindingFill)
    for path in paths:
        whole.addPath(path)
    if stale:
        painter.setOpacity(0.4)
    painter.fillPath(whole.translated(1.5, 2.0), theme.colour(shades.shade, 90))
    brush = QBrush(_brushed(shades.copper))
    brush.setTransform(QTransform.fromTranslate(camera.left, camera.top))
    painter.fillPath(whole, brush)
    painter.fillPath(whole, QBrush(_light(whole, shades)))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(QBrush(_bevel(whole, shades)), 1.4))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for path in paths:
        painter.drawPath(path)
    paint_solder(painter, layout, camera, shades)
    painter.setOpacity(1.0)


def paint_ghost(
    painter: QPainter, regions: tuple[Region, ...], camera: Camera, shades: Theme
) -> None:
    """Outline of copper that is only proposed."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setBrush(theme.colour(shades.ghost, 50))
    for dark, width in ((True, 3.5), (False, 1.8)):
        pen = QPen(theme.colour(shades.mat_halo if dark else shades.ghost), width)
        if not dark:
            pen.setDashPattern([4.0, 3.0])
        painter.setPen(pen)
        for region in regions:
            painter.drawPath(on_screen(region, camera))
        painter.setBrush(Qt.BrushStyle.NoBrush)


def _light(path: QPainterPath, shades: Theme) -> QLinearGradient:
    box = path.controlPointRect()
    light = QLinearGradient(box.topLeft(), box.bottomRight())
    light.setColorAt(0.0, theme.colour(shades.copper_light, 150))
    light.setColorAt(0.45, theme.colour(shades.copper_light, 0))
    light.setColorAt(0.55, theme.colour(shades.copper_dark, 0))
    light.setColorAt(1.0, theme.colour(shades.copper_dark, 110))
    return light


def _bevel(path: QPainterPath, shades: Theme) -> QLinearGradient:
    box = path.controlPointRect()
    bevel = QLinearGradient(box.topLeft(), box.bottomRight())
    bevel.setColorAt(0.0, theme.colour(shades.copper_light))
    bevel.setColorAt(1.0, theme.colour(shades.copper_dark))
    return bevel


def paint_solder(painter: QPainter, layout: Layout, camera: Camera, shades: Theme) -> None:
    """Solder dot where the coax joins, its pin in the middle."""
    pads = [mark for mark in layout.marks if mark.kind is MarkKind.PAD]
    port = layout.ports[0]
    for mark in pads:
        centre = QPointF(*camera.to_screen(*mark.points[0]))
        radius = max(mark.diameter / 2 * camera.scale * 0.9, 3.5)
        shine = QRadialGradient(centre, radius, centre - QPointF(radius * 0.35, radius * 0.4))
        base = QColor(shades.solder)
        shine.setColorAt(0.0, base.lighter(125))
        shine.setColorAt(0.6, base)
        shine.setColorAt(1.0, base.darker(150))
        painter.setPen(QPen(theme.colour(shades.shade, 120), 1.0))
        painter.setBrush(shine)
        painter.drawEllipse(centre, radius, radius)
        pin = max(port.diameter / 2 * camera.scale, 1.2)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(theme.colour(shades.copper_dark))
        painter.drawEllipse(centre, pin, pin)


@cache
def _brushed(tint: str) -> QImage:
    """Tile of brushed metal: streaks along x that wander a little, the same on every run."""
    noise = np.random.default_rng(29)
    rows = noise.normal(0.0, 1.0, (_TILE, 1))
    fine = noise.normal(0.0, 1.0, (_TILE, _TILE))
    spread = np.exp(-((np.arange(_TILE) - _TILE / 2) ** 2) / (2 * 22.0**2))
    kernel = np.fft.rfft(np.fft.ifftshift(spread / spread.sum()))
    streaks = np.fft.irfft(np.fft.rfft(fine, axis=1) * kernel, _TILE, axis=1)
    grain = 2.2 * rows + 26.0 * streaks
    base = QColor(tint)
    colour = np.array([base.red(), base.green(), base.blue()], dtype=float)
    shades = np.clip(colour[None, None, :] + grain[:, :, None], 0, 255).astype(np.uint8)
    data = np.ascontiguousarray(shades)
    image = QImage(data.data, _TILE, _TILE, _TILE * 3, QImage.Format.Format_RGB888)
    return image.convertToFormat(QImage.Format.Format_RGB32)  # a copy that owns its pixels
