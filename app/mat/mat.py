"""The Mat: plan view three quarters, edge-on view one quarter, the spacing slider beside it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, QSignalBlocker, Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QSlider, QVBoxLayout, QWidget

from app.mat.edge import SLIDER_STEP, EdgeState
from app.mat.edge_view import EdgeView
from app.mat.plan import PlanState
from app.mat.plan_view import PlanView
from app.mat.show_bar import ShowBar

if TYPE_CHECKING:
    from app.mat.camera import Camera
    from app.mat.current import CurrentState


class Mat(QFrame):
    """Both views on one mat; they look at the same place."""

    spacing_set = Signal(float)
    spacing_taken = Signal()
    spacing_left = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("panel")
        self.plan, self.edge = PlanView(), EdgeView()
        self.slider = QSlider(Qt.Orientation.Vertical)
        self.slider.setAccessibleName("Spacing")
        self.slider.setToolTip("Thickness of the thickest layer")
        self._label = QLabel()
        self._label.setObjectName("muted")
        self._label.setAlignment(Qt.AlignmentFlag.AlignHCenter)
        self._label.setAccessibleName("Spacing in words")
        self._label.setMinimumWidth(self.fontMetrics().horizontalAdvance("00.00 mm"))
        beside = QWidget()
        beside.setObjectName("clear")
        column = QVBoxLayout(beside)
        column.setContentsMargins(4, 2, 4, 2)
        column.setSpacing(2)
        column.addWidget(self._label)
        column.addWidget(self.slider, 1, Qt.AlignmentFlag.AlignHCenter)
        low = QHBoxLayout()
        low.setContentsMargins(0, 0, 0, 0)
        low.setSpacing(0)
        low.addWidget(self.edge, 1)
        low.addWidget(beside)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(3, 3, 3, 3)
        layout.setSpacing(3)
        layout.addWidget(self.plan, 3)
        layout.addLayout(low, 1)
        self.shown = ShowBar(self.plan, self)
        self._connect()

    def show_current(self, state: CurrentState) -> None:
        self.plan.current.show_state(state)
        self.shown.show_state(state)

    def show_plan(self, state: PlanState) -> None:
        self.plan.show_state(state)

    def show_edge(self, state: EdgeState) -> None:
        self.edge.show_state(state)
        with QSignalBlocker(self.slider):
            if not self.slider.isSliderDown():
                self.slider.setRange(1, round(state.widest / SLIDER_STEP))
                self.slider.setSingleStep(2)
                self.slider.setPageStep(20)
            self.slider.setValue(round(state.spacing / SLIDER_STEP))
        self._label.setText(state.spacing_words)

    def _connect(self) -> None:
        self.plan.camera_changed.connect(self.edge.show_camera)
        self.edge.looked.connect(self._on_edge_looked)
        self.edge.zoomed.connect(self._on_edge_zoomed)
        self.slider.sliderPressed.connect(self.spacing_taken)
        self.slider.sliderReleased.connect(self.spacing_left)
        self.slider.valueChanged.connect(self._on_slider)

    def _on_edge_looked(self, camera: Camera) -> None:
        self.plan.look(camera)

    def _on_edge_zoomed(self, factor: float, across: float) -> None:
        self.plan.zoom(factor, QPointF(across, self.plan.area.center().y()))

    def _on_slider(self, value: int) -> None:
        # Counted in steps, so that 6 mm is 6 mm and not its nearest sum of steps.
        self.spacing_set.emit(float(f"{value * SLIDER_STEP:.9g}"))
