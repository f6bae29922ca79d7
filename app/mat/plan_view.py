"""Plan view of the Mat: shows the layout and says what the hand does to it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, QRect, QSize, Qt, Signal
from PySide6.QtGui import QPainter
from PySide6.QtWidgets import QWidget

from app.mat.bounds import Bounds, bounds
from app.mat.camera import Camera, fitted
from app.mat.current_layer import CurrentLayer
from app.mat.gestures import Gestures
from app.mat.ground_paint import ruler_size
from app.mat.hand import Hand
from app.mat.plan import PlanState, Sight
from app.mat.plan_paint import PlanPainting

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent, QResizeEvent

    from app.mat.handles import Handle

_SPARE = 0.1  # of the room, left free round what is fitted


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
        self._gestures = Gestures(self.hand)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Mat, plan view")
        self.state = PlanState(None, ())
        self.camera = Camera(2000.0, 0.0, 0.0)
        self.shows_dimensions = True
        self._follows_fit = True
        self.current = CurrentLayer(self)
        self._painting = PlanPainting(self)

    @property
    def area(self) -> QRect:
        """The mat without its rulers."""
        return self.rect().adjusted(ruler_size(self), ruler_size(self), 0, 0)

    @property
    def sight(self) -> Sight:
        current = self.current
        return Sight(
            self.state,
            self.camera,
            self.area,
            self.shows_dimensions,
            current.state,
            current.phase,
        )

    def show_state(self, state: PlanState) -> None:
        before, self.state = self.state, state
        if before.layout is None:
            self.fit()
        self.hand.follow()
        self.update(self._painting.changed(before, self.sight))

    def look(self, camera: Camera, *, fit: bool = False) -> None:
        """Look from elsewhere; `fit` keeps following the window's size."""
        self._follows_fit = fit
        if camera != self.camera:
            self.camera = camera
            self.camera_changed.emit(camera)
            self.update()

    def fit(self) -> None:
        """Show the whole plate, whatever the size of the window."""
        self.fit_to(bounds(self.state.layout), follow=True)

    def fit_to(self, part: Bounds, *, follow: bool = False) -> None:
        """Show a part of the Mat: x and y from, x and y to, m."""
        room = self.area
        spare = min(room.width(), room.height()) * _SPARE
        inside = (
            room.left() + spare,
            room.top() + spare,
            max(room.width() - 2 * spare, 1.0),
            max(room.height() - 2 * spare, 1.0),
        )
        self.look(fitted(part, inside), fit=follow)

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
        return self._gestures.take(event) or super().event(event)

    def paintEvent(self, _event: QPaintEvent) -> None:
        self._painting.paint(QPainter(self), self.sight, self.hand)
