"""Paints what was solved in place of the plain copper, and keeps what does not move."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen

from app import theme
from app.mat.copper_paint import paint_copper, paint_solder
from app.mat.current import Shows, flows, ticks_on
from app.mat.current_paint import paint_mesh, paint_sheet, paint_ticks
from app.mat.legend import turn_picture
from app.mat.paths import on_screen
from app.views.kept import KeptPicture
from core.design.polarisation import Polarisation
from core.layout.model import Role

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtWidgets import QWidget

    from app.mat.current import Ticks
    from app.mat.plan import Sight
    from app.theme import Theme

_APART = 1.5  # least distance of ticks, in heights of a line of text
_MOST = 700  # ticks, about
_ROUND = 2.5  # areas of the top copper that have ticks: the ground plate round it has them too
_TURNS = {
    Polarisation.RHCP: "right-hand wave",
    Polarisation.LHCP: "left-hand wave",
    Polarisation.LINEAR: "linear wave",
    None: "no clear sense",
}


class SolvedPainting:
    """Painter of mesh and current of one view."""

    def __init__(self, widget: QWidget) -> None:
        self._widget = widget
        self._still = KeptPicture()
        self._ticks: tuple[object, Ticks] | None = None

    def paint_still(
        self, painter: QPainter, sight: Sight, shades: Theme, below: Callable[[QPainter], None]
    ) -> None:
        """Paint all that does not move, on what `below` paints: one picture while it stays."""
        widget, current = self._widget, sight.current
        look = (widget.size(), sight.camera, shades.name, widget.devicePixelRatioF())

        def paint(onto: QPainter) -> None:
            below(onto)
            onto.setClipRect(sight.area, Qt.ClipOperation.IntersectClip)
            if current.shows is Shows.MESH:
                _paint_meshes(onto, sight, shades)
            else:
                _paint_currents(onto, sight, shades)

        key = (look, current.currents, current.shows)
        painter.drawPixmap(0, 0, self._still.shown(widget, key, paint))

    def paint_moving(self, painter: QPainter, sight: Sight, shades: Theme) -> None:
        """Paint the ticks of one instant."""
        if sight.current.sheet is None:
            return
        step = _distance(sight, painter.fontMetrics().height())
        key = (sight.current.sheet, sight.current.shows, sight.camera, sight.area, step)
        if self._ticks is None or self._ticks[0] != key:
            self._ticks = (key, _ticks(sight, step))
        ticks = self._ticks[1]
        ahead = flows(ticks, sight.phase) * step
        paint_ticks(painter, ticks.places, ahead, sight.camera, shades)

    def paint_sense(self, painter: QPainter, sight: Sight, shades: Theme) -> None:
        """Say which way the wave turns, over the words in the lower left corner."""
        sense = sight.current.sense
        if sight.current.sheet is None:
            return
        ratio, high = painter.device().devicePixelRatioF(), painter.fontMetrics().height()
        picture = turn_picture(_TURNS[sense], sense, shades, painter.font(), ratio)
        painter.drawPixmap(QPointF(sight.area.left() + 8, sight.area.bottom() - 3 * high), picture)


def _distance(sight: Sight, line: int) -> float:
    """Pixels between ticks: wider where a great deal of copper is in view."""
    current, area = sight.current, sight.area
    assert current.currents is not None
    copper = _ROUND * float(current.currents.top.areas.sum()) * sight.camera.scale**2
    return float(max(_APART * line, (min(copper, area.width() * area.height()) / _MOST) ** 0.5))


def _ticks(sight: Sight, step: float) -> Ticks:
    """Ticks of the sheets that are looked at, `step` pixels apart."""
    current, camera, area = sight.current, sight.camera, sight.area
    assert current.currents is not None
    assert current.sheet is not None
    low_x, high_y = camera.to_mat(area.left(), area.top())
    high_x, low_y = camera.to_mat(area.right(), area.bottom())
    view, scale = (low_x, low_y, high_x, high_y), current.scale
    assert scale is not None
    ticks = ticks_on(current.sheet, scale, step / camera.scale, view)
    ground = current.currents.ground
    if current.shows is Shows.GROUND or ground is None:
        return ticks
    beside = ticks_on(ground, scale, step / camera.scale, view, current.currents.top)
    return ticks.with_more(beside)


def _paint_meshes(painter: QPainter, sight: Sight, shades: Theme) -> None:
    """Triangles of the ground plate, copper, and the triangles of the copper."""
    currents, layout = sight.current.currents, sight.state.layout
    assert currents is not None
    assert layout is not None
    if currents.ground is not None:
        paint_mesh(painter, currents.ground, sight.camera, shades.plate, 170)
    paint_copper(painter, layout, sight.camera, shades, stale=False)
    paint_mesh(painter, currents.top, sight.camera, shades.tick, 200)


def _paint_currents(painter: QPainter, sight: Sight, shades: Theme) -> None:
    """Current on the ground plate, and over it that of the copper or its outline alone."""
    current, camera, layout = sight.current, sight.camera, sight.state.layout
    assert current.currents is not None
    assert current.scale is not None
    assert layout is not None
    scale, top = current.scale, QPainterPath()
    top.setFillRule(Qt.FillRule.WindingFill)
    for piece in layout.pieces:
        if piece.role is Role.TOP_COPPER:
            top.addPath(on_screen(piece.region, camera))
    if current.currents.ground is not None:
        paint_sheet(painter, current.currents.ground, camera, scale, shades)
    if current.shows is Shows.CURRENT:
        painter.fillPath(top.translated(1.5, 2.0), theme.colour(shades.shade, 110))
        paint_sheet(painter, current.currents.top, camera, scale, shades)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    pen = QPen(theme.colour(shades.tick), 1.3)
    if current.shows is Shows.GROUND:
        pen.setDashPattern([4.0, 3.0])
    painter.strokePath(top.simplified(), pen)
    paint_solder(painter, layout, camera, shades)
