"""Plan view of the Mat: shows the layout and says what the hand does to it."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, QRect, QSize, Qt, Signal
from PySide6.QtGui import QPainter, QPolygonF
from PySide6.QtWidgets import QWidget

from app import theme
from app.mat.camera import Camera, fitted
from app.mat.copper_paint import paint_copper, paint_ghost
from app.mat.ground_paint import paint_mat, paint_plate, paint_ruler, plate_key
from app.mat.hand import Hand
from app.mat.marks_paint import paint_dimension, paint_handle, paint_tag
from app.mat.paths import MM, region_path
from app.views.kept import KeptPicture
from core.layout.model import Role

if TYPE_CHECKING:
    from collections.abc import Mapping

    from PySide6.QtGui import QPaintEvent, QResizeEvent

    from app.mat.hand import HandView
    from app.mat.handles import Handle
    from app.theme import Theme
    from core.layout.model import Layout
    from core.shapes.outline import Region

_SPARE = 0.1  # of the room, left free round what is fitted
_ALWAYS = ("element.width", "element.length", "stock.ground")


@dataclass(frozen=True)
class PlanState:
    """What the plan view shows.

    Attributes
    ----------
    layout : Layout or None
    handles : tuple of Handle
    words : mapping of str
        What each handle stands at, by its name.
    is_stale : bool
        Whether the layout is that of an older design, because this one has none.
    note : str
        Words in the corner.
    ghost : tuple of Region
        Copper that is proposed.
    """

    layout: Layout | None
    handles: tuple[Handle, ...]
    words: Mapping[str, str] = field(default_factory=dict)
    is_stale: bool = False
    note: str = ""
    ghost: tuple[Region, ...] = ()


class PlanView(QWidget):
    """The copper from above, on a mat with rulers."""

    pull_started = Signal(str)
    pulled = Signal(float, float)  # metres across and up since it started
    pull_ended = Signal()
    pull_cancelled = Signal()
    nudged = Signal(str, float, float, bool)
    pointed = Signal(object)  # (x, y) in metres, or None
    camera_changed = Signal(object)

    def __init__(self) -> None:
        super().__init__()
        self.hand = Hand(self)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Mat, plan view")
        self.state = PlanState(None, ())
        self.camera = Camera(2000.0, 0.0, 0.0)
        self.shows_dimensions = True
        self._follows_fit = True
        self._bench, self._plate = KeptPicture(), KeptPicture()
        self._plate_seen: object = None

    @property
    def ruler(self) -> int:
        """Thickness of the rulers, pixels."""
        return round(self.fontMetrics().height() * 1.5)

    @property
    def area(self) -> QRect:
        """The mat without its rulers."""
        return self.rect().adjusted(self.ruler, self.ruler, 0, 0)

    def show_state(self, state: PlanState) -> None:
        before, self.state = self.state, state
        if before.layout is None:
            self.fit()
        self.hand.follow()
        self.update(self._changed(before))

    def look(self, camera: Camera, *, fit: bool = False) -> None:
        """Look from elsewhere; `fit` keeps following the window's size."""
        self._follows_fit = fit
        if camera != self.camera:
            self.camera = camera
            self.camera_changed.emit(camera)
            self.update()

    def fit(self) -> None:
        """Show the whole plate, whatever the size of the window."""
        self.fit_to(_bounds(self.state.layout), follow=True)

    def fit_to(self, bounds: tuple[float, float, float, float], *, follow: bool = False) -> None:
        """Show a part of the Mat: x and y from, x and y to, m."""
        room = self.area
        spare = min(room.width(), room.height()) * _SPARE
        inside = (
            room.left() + spare,
            room.top() + spare,
            max(room.width() - 2 * spare, 1.0),
            max(room.height() - 2 * spare, 1.0),
        )
        self.look(fitted(bounds, inside), fit=follow)

    def zoom(self, factor: float, at: QPointF | None = None) -> None:
        middle = at or QPointF(self.area.center())
        self.look(self.camera.zoomed(factor, middle.x(), middle.y()))

    def pixels(self, handle: Handle) -> tuple[float, float]:
        return self.camera.to_screen(handle.x, handle.y)

    def metres(self, across: float, down: float) -> tuple[float, float]:
        return self.camera.to_mat(across, down)

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 40, em * 30)

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 16, em * 12)

    def resizeEvent(self, event: QResizeEvent) -> None:
        if self._follows_fit:
            self.fit()
        super().resizeEvent(event)

    def event(self, event: QEvent) -> bool:
        return self.hand.take(event) or super().event(event)

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        shades = theme.theme_of(self)
        self._paint_below(painter, shades)
        layout, area = self.state.layout, self.area
        painter.setClipRect(area, Qt.ClipOperation.IntersectClip)
        if layout is not None:
            paint_copper(painter, layout, self.camera, shades, stale=self.state.is_stale)
            paint_ghost(painter, self.state.ghost, self.camera, shades)
            self._paint_dimensions(painter, layout)
        paint_handles(painter, self.hand, self, shades)
        note = self.state.note
        width = painter.fontMetrics().horizontalAdvance(note) + 8
        place = QPointF(area.left() + 8 + width / 2, area.bottom() - painter.fontMetrics().height())
        paint_tag(painter, place, note, shades)

    def _changed(self, before: PlanState) -> QRect:
        """Pixels that differ from an older state: all where more than copper has changed."""
        old, new = before.layout, self.state.layout
        if old is None or new is None or plate_key(old) != plate_key(new):
            return self.rect()
        if (before.is_stale, before.ghost) != (self.state.is_stale, self.state.ghost):
            return self.rect()
        points = [self.pixels(one) for one in set(before.handles) ^ set(self.state.handles)]
        for layout in (old, new):
            low_x, low_y, high_x, high_y = copper_bounds(layout)
            points += [self.camera.to_screen(low_x, low_y), self.camera.to_screen(high_x, high_y)]
        box = QPolygonF([QPointF(*point) for point in points]).boundingRect().toAlignedRect()
        spare = self.fontMetrics().height() * 8  # for dimensions and the words at a handle
        return box.adjusted(-spare, -spare, spare, spare)

    def _paint_below(self, painter: QPainter, shades: Theme) -> None:
        """Mat, rulers and plate, kept as pictures while they stay as they are."""
        layout = self.state.layout
        look = (self.size(), self.camera, shades.name, self.devicePixelRatioF(), self.font())
        bench = self._bench.shown(self, look, self._paint_bench)
        key = (look, () if layout is None else plate_key(layout))

        def paint(onto: QPainter) -> None:
            onto.drawPixmap(0, 0, bench)
            onto.setClipRect(self.area, Qt.ClipOperation.IntersectClip)
            if layout is not None:
                paint_plate(onto, layout, self.camera, shades)

        # A plate that changes at every paint, as in a drag, is not worth a picture.
        if self._plate_seen == key:
            painter.drawPixmap(0, 0, self._plate.shown(self, key, paint))
        else:
            self._plate_seen = key
            painter.save()
            paint(painter)
            painter.restore()

    def _paint_bench(self, painter: QPainter) -> None:
        shades, thick = theme.theme_of(self), self.ruler
        paint_mat(painter, self.rect(), self.camera, shades)
        top = QRect(thick, 0, self.width() - thick, thick)
        side = QRect(0, thick, thick, self.height() - thick)
        paint_ruler(painter, top, self.camera, shades, upright=False)
        paint_ruler(painter, side, self.camera, shades, upright=True)
        painter.fillRect(0, 0, thick, thick, theme.colour(shades.ruler))

    def _paint_dimensions(self, painter: QPainter, layout: Layout) -> None:
        shown = self.hand.shown_handle
        active = {pull.key for pull in shown.pulls} if shown is not None else set()
        for one in layout.dimensions:
            is_active = one.field in active
            if is_active or (self.shows_dimensions and one.field.startswith(_ALWAYS)):
                paint_dimension(painter, one, self.camera, theme.theme_of(self), always=is_active)


def paint_handles(painter: QPainter, hand: Hand, view: HandView, shades: Theme) -> None:
    """Handles that are not crowded out, and the words of the one in use."""
    shown = hand.shown_handle
    for handle in hand.visible_handles():
        is_shown = shown is not None and handle.name == shown.name
        centre = QPointF(*view.pixels(handle))
        focus = is_shown and hand.has_key_focus
        paint_handle(painter, handle, centre, shades, active=is_shown, focus=focus)
    if shown is not None:
        across, down = view.pixels(shown)
        place = QPointF(across, down + painter.fontMetrics().height() * 1.7)
        paint_tag(painter, place, view.state.words.get(shown.name, shown.label), shades)


def copper_bounds(layout: Layout | None) -> tuple[float, float, float, float]:
    """What the top copper spans, with a little room round it, m."""
    bounds = _bounds(layout, Role.TOP_COPPER)
    spare = 0.15 * max(bounds[2] - bounds[0], bounds[3] - bounds[1])
    return bounds[0] - spare, bounds[1] - spare, bounds[2] + spare, bounds[3] + spare


def _bounds(layout: Layout | None, role: Role | None = None) -> tuple[float, float, float, float]:
    """What the pieces span, m; only those of a role where one is named."""
    pieces = layout.pieces if layout is not None else ()
    boxes = [
        region_path(piece.region).boundingRect() for piece in pieces if role in (None, piece.role)
    ]
    if not boxes:
        return (-0.1, -0.1, 0.1, 0.1)
    whole = boxes[0]
    for box in boxes[1:]:
        whole = whole.united(box)
    return whole.left() / MM, whole.top() / MM, whole.right() / MM, whole.bottom() / MM
