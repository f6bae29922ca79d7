"""The hand on a view of the Mat: mouse, wheel and keys become pulls, nudges, zoom and pan."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent, QNativeGestureEvent, QWheelEvent

from app.mat.marks_paint import REACH, apart

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from PySide6.QtCore import SignalInstance

    from app.mat.camera import Camera
    from app.mat.handles import Handle

_NUDGE = 1e-4  # m
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, 1),
    Qt.Key.Key_Down: (0, -1),
}


class Hands(Protocol):
    """What a state shows to the hand."""

    @property
    def handles(self) -> tuple[Handle, ...]: ...
    @property
    def words(self) -> Mapping[str, str]: ...


class HandView(Protocol):
    """What the hand needs of the view it works on."""

    pull_started: SignalInstance
    pulled: SignalInstance
    pull_ended: SignalInstance
    pull_cancelled: SignalInstance
    nudged: SignalInstance
    pointed: SignalInstance

    @property
    def state(self) -> Hands: ...
    @property
    def camera(self) -> Camera: ...
    def pixels(self, handle: Handle) -> tuple[float, float]: ...
    def metres(self, across: float, down: float) -> tuple[float, float]: ...
    def look(self, camera: Camera) -> None: ...
    def zoom(self, factor: float, at: QPointF) -> None: ...
    def update(self) -> None: ...
    def hasFocus(self) -> bool: ...
    def setCursor(self, shape: Qt.CursorShape) -> None: ...
    def setAccessibleDescription(self, words: str) -> None: ...


@dataclass
class _Grip:
    """A button held down: on a handle, or on the mat itself where `name` is empty."""

    name: str
    pressed: QPointF
    last: QPointF


class Hand:
    """Keeps what is under the pointer, held or chosen by key; changes nothing itself."""

    def __init__(self, view: HandView) -> None:
        self._view = view
        self._hover = ""
        self._chosen = ""
        self._grip: _Grip | None = None
        self._space = False
        self._takers: dict[QEvent.Type, Callable[..., bool]] = {
            QEvent.Type.MouseButtonPress: self._press,
            QEvent.Type.MouseMove: self._move,
            QEvent.Type.MouseButtonRelease: self._release,
            QEvent.Type.Leave: self._leave,
            QEvent.Type.Wheel: self._wheel,
            QEvent.Type.NativeGesture: self._pinch,
            QEvent.Type.KeyPress: self._key,
            QEvent.Type.KeyRelease: self._key_up,
            QEvent.Type.FocusIn: self._focus,
            QEvent.Type.FocusOut: self._focus,
        }

    @property
    def shown_handle(self) -> Handle | None:
        """The handle that is held, pointed at or chosen by key, in this order."""
        held = self._grip.name if self._grip else ""
        chosen = self._chosen if self._view.hasFocus() else ""
        name = held or self._hover or chosen
        return next((one for one in self._view.state.handles if one.name == name), None)

    @property
    def has_key_focus(self) -> bool:
        shown = self.shown_handle
        return self._view.hasFocus() and shown is not None and shown.name == self._chosen

    @property
    def is_holding(self) -> bool:
        """Whether a handle is held."""
        return self._grip is not None and bool(self._grip.name)

    def visible_handles(self) -> tuple[Handle, ...]:
        held = self._grip.name if self._grip else ""
        kept = frozenset(filter(None, (held, self._chosen if self._view.hasFocus() else "")))
        return apart(self._view.state.handles, self._view.pixels, kept)

    def take(self, event: QEvent) -> bool:
        """Deal with an event of the view; False where it is none of the hand's."""
        taker = self._takers.get(event.type())
        return taker is not None and taker(event)

    def follow(self) -> None:
        """Forget handles that are no longer there."""
        names = {one.name for one in self._view.state.handles}
        self._hover = self._hover if self._hover in names else ""
        self._chosen = self._chosen if self._chosen in names else ""

    def _under(self, place: QPointF) -> str:
        best, found = REACH * 1.42, ""
        for handle in self.visible_handles():
            across, down = self._view.pixels(handle)
            away = max(abs(across - place.x()), abs(down - place.y()))
            if away <= REACH and away < best:
                best, found = away, handle.name
        return found

    def _press(self, event: QMouseEvent) -> bool:
        place = event.position()
        if self._grip is not None:
            return True
        wants_pan = event.button() is Qt.MouseButton.MiddleButton or self._space
        if event.button() not in (Qt.MouseButton.LeftButton, Qt.MouseButton.MiddleButton):
            return False
        name = "" if wants_pan else self._under(place)
        self._grip = _Grip(name, place, place)
        if name:
            self._choose(name)
            self._view.pull_started.emit(name)
        else:
            self._view.setCursor(Qt.CursorShape.ClosedHandCursor)
        self._view.update()
        return False  # the view itself takes the focus

    def _move(self, event: QMouseEvent) -> bool:
        place, grip = event.position(), self._grip
        self._view.pointed.emit(self._view.metres(place.x(), place.y()))
        if grip is None:
            self._point_at(self._under(place))
        elif grip.name:
            x, y = self._view.metres(place.x(), place.y())
            from_x, from_y = self._view.metres(grip.pressed.x(), grip.pressed.y())
            self._view.pulled.emit(x - from_x, y - from_y)
        else:
            moved = place - grip.last
            self._view.look(self._view.camera.panned(moved.x(), moved.y()))
        if grip is not None:
            grip.last = place
        return True

    def _release(self, event: QMouseEvent) -> bool:
        grip, self._grip = self._grip, None
        if grip is not None and grip.name:
            self._view.pull_ended.emit()
        self._point_at(self._under(event.position()), always=True)
        return True

    def _leave(self, _event: QEvent) -> bool:
        self._view.pointed.emit(None)
        if self._grip is None:
            self._point_at("")
        return False

    def _wheel(self, event: QWheelEvent) -> bool:
        if self._grip is None:
            self._view.zoom(1.2 ** (event.angleDelta().y() / 120.0), event.position())
        return True

    def _pinch(self, event: QNativeGestureEvent) -> bool:
        if event.gestureType() is not Qt.NativeGestureType.ZoomNativeGesture:
            return False
        self._view.zoom(1.0 + event.value(), event.position())
        return True

    def _key(self, event: QKeyEvent) -> bool:
        key, keys = event.key(), event.modifiers()
        if key == Qt.Key.Key_Space and not event.isAutoRepeat():
            self._space = True
            self._view.setCursor(Qt.CursorShape.OpenHandCursor)
            return True
        if key == Qt.Key.Key_Escape and self._grip is not None and self._grip.name:
            self._grip = None
            self._view.pull_cancelled.emit()
            return True
        if key in (Qt.Key.Key_Tab, Qt.Key.Key_Backtab):
            return self._choose_next(1 if key == Qt.Key.Key_Tab else -1)
        if key in _ARROWS and self._chosen and self._grip is None:
            size = _NUDGE * (10.0 if keys & Qt.KeyboardModifier.ShiftModifier else 1.0)
            size = _NUDGE * 0.1 if keys & Qt.KeyboardModifier.ControlModifier else size
            across, up = _ARROWS[Qt.Key(key)]
            self._view.nudged.emit(self._chosen, across * size, up * size, event.isAutoRepeat())
            return True
        return False

    def _key_up(self, event: QKeyEvent) -> bool:
        if event.key() == Qt.Key.Key_Space and not event.isAutoRepeat():
            self._space = False
            self._point_at(self._hover, always=True)
            return True
        return False

    def _focus(self, event: QFocusEvent) -> bool:
        handles = self._view.state.handles
        if event.gotFocus() and handles:
            if event.reason() is Qt.FocusReason.TabFocusReason:
                self._choose(handles[0].name)
            elif event.reason() is Qt.FocusReason.BacktabFocusReason:
                self._choose(handles[-1].name)
        self._space = False
        self._view.update()
        return False

    def _choose_next(self, step: int) -> bool:
        """Go to the next handle; False past the last, so that the focus moves on."""
        names = [one.name for one in self._view.state.handles]
        # With none chosen yet, Tab goes to the first one and Shift+Tab leaves.
        place = (names.index(self._chosen) if self._chosen in names else -1) + step
        if not 0 <= place < len(names):
            return False
        self._choose(names[place])
        return True

    def _choose(self, name: str) -> None:
        self._chosen = name
        self._view.setAccessibleDescription(self._view.state.words.get(name, ""))
        self._view.update()

    def _point_at(self, name: str, *, always: bool = False) -> None:
        if name != self._hover or always:
            self._hover = name
            shape = Qt.CursorShape.PointingHandCursor if name else Qt.CursorShape.ArrowCursor
            self._view.setCursor(Qt.CursorShape.OpenHandCursor if self._space else shape)
            self._view.update()
