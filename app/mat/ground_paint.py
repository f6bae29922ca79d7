"""The still part of the plan view: mat, rulers, ground plate and spacer."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QLineF, QPointF, QRect, QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from app import theme
from app.mat.camera import grid_steps, nice_step
from app.mat.paths import on_screen
from core.layout.model import Role
from core.shapes.outline import Region

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.mat.camera import Camera
    from app.theme import Theme
    from core.layout.model import Layout


def paint_mat(painter: QPainter, area: QRect, camera: Camera, shades: Theme) -> None:
    """Cutting mat with its grid, finest lines first."""
    painter.fillRect(area, theme.colour(shades.mat))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    colours = (shades.mat_fine, shades.mat_five, shades.mat_ten)
    for step, name in zip(grid_steps(camera.scale), colours, strict=True):
        painter.setPen(QPen(theme.colour(name), 0))
        painter.drawLines(_grid_lines(area, camera, step))


def paint_plate(painter: QPainter, layout: Layout, camera: Camera, shades: Theme) -> None:
    """Ground plate and what lies on it; the copper's rim looks out all round."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    rim = QPen(theme.colour(shades.copper_light), 1.2)
    for piece in layout.pieces:
        if piece.role is Role.TOP_COPPER:
            continue
        path = on_screen(Region(piece.region.exterior), camera)  # the pin's holes lie hidden
        if piece.role is Role.GROUND_COPPER:
            painter.fillPath(path.translated(1.0, 5.0), theme.colour(shades.shade, 45))
            painter.fillPath(path.translated(1.0, 2.5), theme.colour(shades.shade, 60))
            painter.setPen(rim)
            painter.setBrush(theme.colour(shades.plate))
            painter.drawPath(path)
            bare = path
        else:
            painter.fillPath(path, theme.spacer_colour(piece.material, shades))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for pen in (QPen(theme.colour(shades.plate), 4.0), rim):
        painter.setPen(pen)
        painter.drawPath(bare)


def plate_key(layout: Layout) -> tuple[object, ...]:
    """What of a layout decides how `paint_plate` paints it."""
    return tuple(
        (piece.role, piece.material, piece.region.exterior)
        for piece in layout.pieces
        if piece.role is not Role.TOP_COPPER
    )


def ruler_size(widget: QWidget) -> int:
    """Thickness of the rulers of a view, pixels."""
    return round(widget.fontMetrics().height() * 1.5)


def paint_ruler(
    painter: QPainter, strip: QRect, camera: Camera, shades: Theme, *, upright: bool
) -> None:
    """Millimetre ruler along the top, or upright along the left."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    painter.fillRect(strip, theme.colour(shades.ruler))
    painter.setPen(QPen(theme.colour(shades.ruler_ink), 0))
    fine, five, ten = grid_steps(camera.scale)
    ticks: list[QLineF] = []
    size = strip.width() if upright else strip.height()
    for step, part in ((fine, 0.2), (five, 0.34), (ten, 0.5)):
        for place in _ticks(strip, camera, step, upright):
            if upright:
                edge = strip.right()
                ticks.append(QLineF(edge - size * part, place, edge, place))
            else:
                edge = strip.bottom()
                ticks.append(QLineF(place, edge - size * part, place, edge))
    painter.drawLines(ticks)
    _paint_numbers(painter, strip, camera, upright)


def _paint_numbers(painter: QPainter, strip: QRect, camera: Camera, upright: bool) -> None:
    """Millimetres, as many as there is room for."""
    metrics = painter.fontMetrics()
    step = nice_step(metrics.horizontalAdvance("−000.0 ") / camera.scale)
    for n in _counts(strip, camera, step, upright):
        words = f"{n * step * 1e3:.6g}".replace("-", "−")
        across, down = camera.to_screen(n * step, n * step)
        wide = metrics.horizontalAdvance(words) + 3
        if (down - wide < strip.top()) if upright else (across + wide > strip.right()):
            continue  # half a number is worse than none
        if upright:
            painter.save()
            painter.translate(strip.left() + metrics.ascent(), down - 3)
            painter.rotate(-90)
            painter.drawText(QPointF(0, 0), words)
            painter.restore()
        else:
            painter.drawText(QPointF(across + 3, strip.top() + metrics.ascent()), words)


def _grid_lines(area: QRect, camera: Camera, step: float) -> list[QLineF]:
    rect = QRectF(area)
    return [
        *(
            QLineF(place, rect.top(), place, rect.bottom())
            for place in _ticks(area, camera, step, False)
        ),
        *(
            QLineF(rect.left(), place, rect.right(), place)
            for place in _ticks(area, camera, step, True)
        ),
    ]


def _counts(strip: QRect, camera: Camera, step: float, upright: bool) -> range:
    """Numbers of the steps that fall into a strip."""
    low_x, high_y = camera.to_mat(strip.left(), strip.top())
    high_x, low_y = camera.to_mat(strip.right() + 1, strip.bottom() + 1)
    low, high = (low_y, high_y) if upright else (low_x, high_x)
    return range(int(np.ceil(low / step)), int(np.floor(high / step)) + 1)


def _ticks(strip: QRect, camera: Camera, step: float, upright: bool) -> list[float]:
    """Pixels at which the steps fall, on whole pixels so that lines stay crisp."""
    counts = _counts(strip, camera, step, upright)
    if upright:
        return [round(camera.top - n * step * camera.scale) + 0.0 for n in counts]
    return [round(camera.left + n * step * camera.scale) + 0.0 for n in counts]
