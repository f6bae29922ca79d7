"""How the layers look from the side."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QLineF, QPointF, QRect, QRectF, Qt
from PySide6.QtGui import QColor, QLinearGradient, QPainter, QPen

from app import theme
from app.mat.camera import grid_steps
from app.mat.stamps import paint_tag
from core.layout.model import Role

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from app.mat.edge import EdgeState
    from app.theme import Theme
    from core.shapes.outline import Region

_FOIL = 3.0  # pixels that foil is drawn thick at least


def layers_key(state: EdgeState) -> object:
    """What of a state decides how `paint_layers` paints it."""
    layout = state.layout
    extent = None if layout is None else _extent(layout.pieces[0].region)
    return state.is_stale, state.layers, extent


def paint_layers(
    painter: QPainter, area: QRect, state: EdgeState, across: Camera, side: Camera, shades: Theme
) -> None:
    """The still part of the Mat from the side: grid of heights, layers and ground plate."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    _paint_heights(painter, area, side, shades)
    layout = state.layout
    if layout is None:
        return
    if state.is_stale:
        painter.setOpacity(0.4)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    from_x, to_x = (across.to_screen(x, 0.0)[0] for x in _extent(layout.pieces[0].region))
    for material, _, z, thickness in state.layers:
        top = side.to_screen(0.0, z + thickness)[1]
        box = QRectF(from_x, top, to_x - from_x, side.to_screen(0.0, z)[1] - top)
        painter.setPen(QPen(theme.colour(shades.shade, 130), 1.0))
        painter.setBrush(theme.spacer_colour(material, shades))
        painter.drawRect(box)
    floor = side.to_screen(0.0, 0.0)[1]
    _paint_foil(painter, QRectF(from_x, floor, to_x - from_x, _FOIL), shades.plate, shades)
    painter.setOpacity(1.0)


def paint_edge(
    painter: QPainter, area: QRect, state: EdgeState, across: Camera, side: Camera, shades: Theme
) -> None:
    """What stands on the layers: pin, top copper and words."""
    layout = state.layout
    if layout is None:
        return
    if state.is_stale:
        painter.setOpacity(0.4)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    floor = side.to_screen(0.0, 0.0)[1]
    to_x = across.to_screen(_extent(layout.pieces[0].region)[1], 0.0)[0]
    height = sum(thickness for _, _, _, thickness in state.layers)
    roof = side.to_screen(0.0, height)[1]
    for port in layout.ports:
        x = across.to_screen(port.x, 0.0)[0]
        thick = max(port.diameter * across.scale, 3.0)
        _paint_pin(painter, x, thick, roof, floor, shades)
    for piece in layout.pieces:
        if piece.role is Role.TOP_COPPER:
            low, high = (across.to_screen(x, 0.0)[0] for x in _extent(piece.region))
            box = QRectF(low, roof - _FOIL, high - low, _FOIL)
            _paint_foil(painter, box, shades.copper, shades)
    painter.setOpacity(1.0)
    pen = QPen(theme.colour(shades.mat_ink, 150), 1.0)
    pen.setDashPattern([2.0, 4.0])
    painter.setPen(pen)
    for _, _, z, thickness in state.layers:  # from each layer to its handle at the right
        top = side.to_screen(0.0, z + thickness)[1]
        painter.drawLine(QLineF(min(to_x, area.right()), top, area.right(), top))
    _paint_words(painter, area, state, side, across, shades)


def _paint_heights(painter: QPainter, area: QRect, side: Camera, shades: Theme) -> None:
    colours = (shades.mat_fine, shades.mat_five, shades.mat_ten)
    for step, name in zip(grid_steps(side.scale), colours, strict=True):
        painter.setPen(QPen(theme.colour(name), 0))
        n, lines = 0, []
        while (down := side.to_screen(0.0, n * step)[1]) > area.top():
            lines.append(QLineF(area.left(), round(down), area.right(), round(down)))
            n += 1
        painter.drawLines(lines)


def _paint_foil(painter: QPainter, box: QRectF, name: str, shades: Theme) -> None:
    painter.setPen(QPen(theme.colour(shades.copper_dark), 0.8))
    painter.setBrush(theme.colour(name))
    painter.drawRect(box)


def _paint_pin(
    painter: QPainter, x: float, thick: float, roof: float, floor: float, shades: Theme
) -> None:
    """Pin up to the top copper, and the connector's barrel under the ground plate."""
    metal = QLinearGradient(x - thick, 0.0, x + thick, 0.0)
    base = QColor(shades.solder)
    for place, tint in ((0.0, base.darker(150)), (0.4, base), (1.0, base.darker(170))):
        metal.setColorAt(place, tint)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(metal)
    painter.drawRect(QRectF(x - thick / 2, roof, thick, floor - roof))
    barrel = max(thick * 1.6, 8.0)
    painter.drawRoundedRect(QRectF(x - barrel / 2, floor + _FOIL, barrel, barrel * 1.1), 2, 2)
    painter.setBrush(base)
    painter.drawEllipse(QPointF(x, roof - _FOIL), max(thick * 0.8, 4.0), 3.0)


def _paint_words(
    painter: QPainter, area: QRect, state: EdgeState, side: Camera, across: Camera, shades: Theme
) -> None:
    metrics = painter.fontMetrics()
    last = area.bottom() + 1.0
    for _, words, z, thickness in state.layers:
        down = side.to_screen(0.0, z + thickness / 2)[1]
        down = min(down, last - metrics.height())
        last = down
        wide = metrics.horizontalAdvance(words) + 8
        paint_tag(painter, QPointF(area.left() + 8 + wide / 2, down), words, shades)
    stretch = round(side.scale / across.scale)
    note = "Edge-on" if stretch == 1 else f"Edge-on, heights × {stretch}"
    wide = metrics.horizontalAdvance(note) + 8
    low = area.bottom() - metrics.height() * 0.8
    paint_tag(painter, QPointF(area.right() - 8 - wide / 2, low), note, shades)


def _extent(region: Region) -> tuple[float, float]:
    """Smallest and largest x of a region whose arcs are half circles or straight, m."""
    xs = [vertex.x for vertex in region.exterior.vertices]
    return min(xs), max(xs)
