"""Paints the plan view, and knows what of it has to be painted anew."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, QRect, Qt
from PySide6.QtGui import QPen, QPolygonF

from app import theme
from app.mat.bounds import copper_bounds
from app.mat.copper_paint import paint_copper, paint_ghost
from app.mat.ground_paint import paint_mat, paint_plate, paint_ruler, plate_key, ruler_size
from app.mat.marks_paint import paint_dimension, paint_handles
from app.mat.solved_paint import SolvedPainting
from app.mat.stamps import paint_tag
from app.views.kept import KeptPicture
from core.findings import Severity

if TYPE_CHECKING:
    from PySide6.QtGui import QPainter
    from PySide6.QtWidgets import QWidget

    from app.mat.camera import Camera
    from app.mat.hand import Hand
    from app.mat.plan import PlanState, Sight
    from app.theme import Theme

_TROUBLE = 20.0  # pixels of the ring round it
_ALWAYS = ("element.width", "element.length", "stock.ground")


class PlanPainting:
    """Painter of one plan view; keeps pictures of what stays as it is."""

    def __init__(self, widget: QWidget) -> None:
        self._widget = widget
        self._bench, self._plate = KeptPicture(), KeptPicture()
        self._spanned = copper_bounds(None)  # by the copper of the last state
        self._solved = SolvedPainting(widget)

    def paint(self, painter: QPainter, sight: Sight, hand: Hand) -> None:
        """Paint mat, plate, copper, proposal, dimensions, handles and words, in this order."""
        shades = theme.theme_of(self._widget)
        state, area, metrics = sight.state, sight.area, painter.fontMetrics()
        is_solved = state.layout is not None and sight.current.currents is not None
        if is_solved:
            self._solved.paint_still(
                painter, sight, shades, lambda onto: self._paint_below(onto, sight, shades)
            )
        else:
            self._paint_below(painter, sight, shades)
        painter.setClipRect(area, Qt.ClipOperation.IntersectClip)
        if is_solved:
            self._solved.paint_moving(painter, sight, shades)
        elif state.layout is not None:
            paint_copper(painter, state.layout, sight.camera, shades, stale=state.is_stale)
        if state.layout is not None:
            paint_ghost(painter, state.ghost, sight.camera, shades)
            _paint_dimensions(painter, sight, hand, shades)
            _paint_trouble(painter, sight, shades)
        paint_handles(painter, hand, shades)
        width = metrics.horizontalAdvance(state.note) + 8
        place = QPointF(area.left() + 8 + width / 2, area.bottom() - metrics.height())
        paint_tag(painter, place, state.note, shades)
        self._solved.paint_sense(painter, sight, shades)

    def changed(self, before: PlanState, sight: Sight) -> QRect:
        """Pixels that differ from an older state: all where more than copper has changed."""
        now, whole = sight.state, self._widget.rect()
        old, new = before.layout, now.layout
        spanned, self._spanned = self._spanned, copper_bounds(new)
        if old is None or new is None or plate_key(old) != plate_key(new):
            return whole
        if (before.is_stale, before.ghost) != (now.is_stale, now.ghost):
            return whole
        look = sight.camera.to_screen
        points = [look(one.x, one.y) for one in set(before.handles) ^ set(now.handles)]
        for low_x, low_y, high_x, high_y in (spanned, self._spanned):
            points += [look(low_x, low_y), look(high_x, high_y)]
        box = QPolygonF([QPointF(*point) for point in points]).boundingRect().toAlignedRect()
        spare = self._widget.fontMetrics().height() * 8  # for dimensions and words at a handle
        return box.adjusted(-spare, -spare, spare, spare)

    def _paint_below(self, painter: QPainter, sight: Sight, shades: Theme) -> None:
        """Mat, rulers and plate, kept as pictures while they stay as they are."""
        layout, widget = sight.state.layout, self._widget
        ratio = widget.devicePixelRatioF()
        look = (widget.size(), sight.camera, shades.name, ratio, widget.font())
        bench = self._bench.shown(
            widget, look, lambda onto: _paint_bench(onto, widget, sight.camera, shades)
        )
        key = (look, () if layout is None else plate_key(layout))

        def paint(onto: QPainter) -> None:
            onto.drawPixmap(0, 0, bench)
            onto.setClipRect(sight.area, Qt.ClipOperation.IntersectClip)
            if layout is not None:
                paint_plate(onto, layout, sight.camera, shades)

        self._plate.paint(painter, widget, key, paint)


def _paint_bench(painter: QPainter, widget: QWidget, camera: Camera, shades: Theme) -> None:
    """Mat and rulers."""
    thick = ruler_size(widget)
    paint_mat(painter, widget.rect(), camera, shades)
    top = QRect(thick, 0, widget.width() - thick, thick)
    side = QRect(0, thick, thick, widget.height() - thick)
    paint_ruler(painter, top, camera, shades, upright=False)
    paint_ruler(painter, side, camera, shades, upright=True)
    painter.fillRect(0, 0, thick, thick, theme.colour(shades.ruler))


def _paint_dimensions(painter: QPainter, sight: Sight, hand: Hand, shades: Theme) -> None:
    """Dimensions that are always shown, and those of the handle in use."""
    shown = hand.shown_handle
    active = {pull.key for pull in shown.pulls} if shown is not None else set()
    layout = sight.state.layout
    for one in layout.dimensions if layout is not None else ():
        is_active = one.field in active
        if is_active or (sight.shows_dimensions and one.field.startswith(_ALWAYS)):
            paint_dimension(painter, one, sight.camera, shades, always=is_active)


def _paint_trouble(painter: QPainter, sight: Sight, shades: Theme) -> None:
    """Ring round each place that cannot be made as it is."""
    layout = sight.state.layout
    for one in layout.findings if layout is not None else ():
        if one.location is not None and one.severity is Severity.REFUSAL:
            centre = QPointF(*sight.camera.to_screen(*one.location))
            for name, width in ((shades.mat_halo, 5.0), (shades.ghost, 2.0)):
                painter.setPen(QPen(theme.colour(name), width, Qt.PenStyle.DashLine))
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.drawEllipse(centre, _TROUBLE, _TROUBLE)
