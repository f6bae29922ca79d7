"""Edge-on view of the Mat, under the plan view and on the same scale across."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, QRect, QSize, Qt, Signal
from PySide6.QtGui import QPainter
from PySide6.QtWidgets import QWidget

from app import theme
from app.mat.camera import Camera
from app.mat.edge import EdgeState
from app.mat.edge_paint import layers_key, paint_edge, paint_layers
from app.mat.gestures import Gestures
from app.mat.ground_paint import paint_ruler, ruler_size
from app.mat.hand import Hand
from app.mat.marks_paint import paint_handles
from app.views.kept import KeptPicture

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent, QResizeEvent

    from app.mat.handles import Handle

_STRETCHES = (
    1,
    2,
    3,
    4,
    5,
    6,
    8,
    10,
    15,
    20,
    30,
    50,
    100,
)  # how much taller than wide the view may be drawn
_FILLED = 0.5  # of the room above the ground plate, by the stack


class EdgeView(QWidget):
    """The layers from the side; their thickness is what can be pulled."""

    pull_started = Signal(str)
    pulled = Signal(float, float)
    pull_ended = Signal()
    pull_cancelled = Signal()
    nudged = Signal(str, float, float, bool)
    pointed = Signal(object)
    looked = Signal(object)
    zoomed = Signal(float, float)  # factor, and the pixel across that stays

    def __init__(self) -> None:
        super().__init__()
        self.hand = Hand(self)
        self._gestures = Gestures(self.hand)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Mat, edge-on view")
        self.state = EdgeState(None, ())
        self.camera = Camera(2000.0, 0.0, 0.0)
        self.stretch = 1
        self._still = KeptPicture()

    @property
    def floor(self) -> float:
        """Pixel of the ground plane."""
        return self.height() - self.fontMetrics().height() * 2.4

    def show_state(self, state: EdgeState) -> None:
        self.state = state
        self.hand.follow()
        if not self.hand.is_holding:
            self._choose_stretch()
        self.update()

    def show_camera(self, camera: Camera) -> None:
        """Follow the plan view across."""
        self.camera = camera
        self._choose_stretch()
        self.update()

    def look(self, camera: Camera) -> None:
        self.looked.emit(Camera(camera.scale, camera.left, self.camera.top))

    def zoom(self, factor: float, at: QPointF) -> None:
        self.zoomed.emit(factor, at.x())

    def side_camera(self) -> Camera:
        """Camera of heights: y is the height above the ground plane."""
        return Camera(self.camera.scale * self.stretch, self.camera.left, self.floor)

    def pixels(self, handle: Handle) -> tuple[float, float]:
        """Handles stand in a column at the right, whatever is looked at."""
        em = self.fontMetrics().height()
        return self.width() - em * 2.0, self.side_camera().to_screen(0.0, handle.y)[1]

    def metres(self, across: float, down: float) -> tuple[float, float]:
        x = (across - self.camera.left) / self.camera.scale
        return x, self.side_camera().to_mat(across, down)[1]

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 40, em * 10)

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 16, em * 6)

    def resizeEvent(self, event: QResizeEvent) -> None:
        self._choose_stretch()
        super().resizeEvent(event)

    def event(self, event: QEvent) -> bool:
        return self._gestures.take(event) or super().event(event)

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        shades, across, side = theme.theme_of(self), self.camera, self.side_camera()
        thick = ruler_size(self)
        area = self.rect().adjusted(thick, 0, 0, 0)

        def paint_still(onto: QPainter) -> None:
            onto.fillRect(self.rect(), theme.colour(shades.mat))
            strip = QRect(0, 0, thick, self.height())
            paint_ruler(onto, strip, side, shades, upright=True)
            onto.setClipRect(area)
            paint_layers(onto, area, self.state, across, side, shades)

        look = (self.size(), across, side, shades.name, self.devicePixelRatioF(), self.font())
        self._still.paint(painter, self, (look, layers_key(self.state)), paint_still)
        painter.setClipRect(area)
        paint_edge(painter, area, self.state, across, side, shades)
        paint_handles(painter, self.hand, shades)

    def _choose_stretch(self) -> None:
        """The largest stretch with which the stack leaves room to be pulled up."""
        height = sum(thickness for _, _, _, thickness in self.state.layers)
        room = max(self.floor * _FILLED, 1.0)
        fitting = [n for n in _STRETCHES if height * self.camera.scale * n <= room]
        self.stretch = fitting[-1] if fitting else 1
