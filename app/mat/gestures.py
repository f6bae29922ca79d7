"""Mouse, wheel and keys on a view of the Mat become pulls, nudges, zoom and pan."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt

from app.mat.hand import Grip

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import (
        QFocusEvent,
        QKeyEvent,
        QMouseEvent,
        QNativeGestureEvent,
        QWheelEvent,
    )

    from app.mat.hand import Hand

_NUDGE = 1e-4  # m
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, 1),
    Qt.Key.Key_Down: (0, -1),
}


class Gestures:
    """Deals with the events of a view that are the hand's."""

    def __init__(self, hand: Hand) -> None:
        mouse, keys, kind = _Mouse(hand), _Keys(hand), QEvent.Type
        self._takers: dict[QEvent.Type, Callable[..., bool]] = {
            kind.MouseButtonPress: mouse.press,
            kind.MouseMove: mouse.move,
            kind.MouseButtonRelease: mouse.release,
            kind.Leave: mouse.leave,
            kind.Wheel: mouse.wheel,
            kind.NativeGesture: mouse.pinch,
            kind.KeyPress: keys.press,
            kind.KeyRelease: keys.release,
            kind.FocusIn: keys.focus,
            kind.FocusOut: keys.focus,
        }

    def take(self, event: QEvent) -> bool:
        """Deal with an event; False where the view has to as well."""
        taker = self._takers.get(event.type())
        return taker is not None and taker(event)


class _Mouse:
    """Pointer and wheel."""

    def __init__(self, hand: Hand) -> None:
        self._hand = hand

    def press(self, event: QMouseEvent) -> bool:
        place = event.position()
        if self._hand.grip is not None:
            return True
        wants_pan = event.button() is Qt.MouseButton.MiddleButton or self._hand.is_panning
        if event.button() not in (Qt.MouseButton.LeftButton, Qt.MouseButton.MiddleButton):
            return False
        name = "" if wants_pan else self._hand.under(place)
        self._hand.grip = Grip(name, place, place)
        if name:
            self._hand.choose(name)
            self._hand.view.pull_started.emit(name)
        else:
            self._hand.view.setCursor(Qt.CursorShape.ClosedHandCursor)
        self._hand.view.update()
        return True

    def move(self, event: QMouseEvent) -> bool:
        place, grip = event.position(), self._hand.grip
        self._hand.view.pointed.emit(self._hand.view.metres(place.x(), place.y()))
        if grip is None:
            self._hand.point_at(self._hand.under(place))
        elif grip.name:
            x, y = self._hand.view.metres(place.x(), place.y())
            from_x, from_y = self._hand.view.metres(grip.pressed.x(), grip.pressed.y())
            self._hand.view.pulled.emit(x - from_x, y - from_y)
        else:
            moved = place - grip.last
            self._hand.view.look(self._hand.view.camera.panned(moved.x(), moved.y()))
        if grip is not None:
            grip.last = place
        return True

    def release(self, event: QMouseEvent) -> bool:
        grip, self._hand.grip = self._hand.grip, None
        if grip is not None and grip.name:
            self._hand.view.pull_ended.emit()
        self._hand.point_at(self._hand.under(event.position()), always=True)
        return True

    def leave(self, _event: QEvent) -> bool:
        self._hand.view.pointed.emit(None)
        if self._hand.grip is None:
            self._hand.point_at("")
        return False

    def wheel(self, event: QWheelEvent) -> bool:
        if self._hand.grip is None:
            self._hand.view.zoom(1.2 ** (event.angleDelta().y() / 120.0), event.position())
        return True

    def pinch(self, event: QNativeGestureEvent) -> bool:
        if event.gestureType() is not Qt.NativeGestureType.ZoomNativeGesture:
            return False
        self._hand.view.zoom(1.0 + event.value(), event.position())
        return True


class _Keys:
    """Keyboard and focus."""

    def __init__(self, hand: Hand) -> None:
        self._hand = hand

    def press(self, event: QKeyEvent) -> bool:
        key, keys = event.key(), event.modifiers()
        if key == Qt.Key.Key_Space and not event.isAutoRepeat():
            self._hand.is_panning = True
            self._hand.view.setCursor(Qt.CursorShape.OpenHandCursor)
            return True
        if key == Qt.Key.Key_Escape and self._hand.grip is not None and self._hand.grip.name:
            self._hand.grip = None
            self._hand.view.pull_cancelled.emit()
            return True
        if key in (Qt.Key.Key_Tab, Qt.Key.Key_Backtab):
            return self._choose_next(1 if key == Qt.Key.Key_Tab else -1)
        if key in _ARROWS and self._hand.chosen and self._hand.grip is None:
            size = _NUDGE * (10.0 if keys & Qt.KeyboardModifier.ShiftModifier else 1.0)
            size = _NUDGE * 0.1 if keys & Qt.KeyboardModifier.ControlModifier else size
            across, up = _ARROWS[Qt.Key(key)]
            self._hand.view.nudged.emit(
                self._hand.chosen, across * size, up * size, event.isAutoRepeat()
            )
            return True
        return False

    def release(self, event: QKeyEvent) -> bool:
        if event.key() == Qt.Key.Key_Space and not event.isAutoRepeat():
            self._hand.is_panning = False
            self._hand.point_at(self._hand.hover, always=True)
            return True
        return False

    def focus(self, event: QFocusEvent) -> bool:
        handles = self._hand.view.state.handles
        if event.gotFocus() and handles:
            if event.reason() is Qt.FocusReason.TabFocusReason:
                self._hand.choose(handles[0].name)
            elif event.reason() is Qt.FocusReason.BacktabFocusReason:
                self._hand.choose(handles[-1].name)
        self._hand.is_panning = False
        self._hand.view.update()
        return False

    def _choose_next(self, step: int) -> bool:
        """Go to the next handle; False past the last, so that the focus moves on."""
        names = [one.name for one in self._hand.view.state.handles]
        # With none chosen yet, Tab goes to the first one and Shift+Tab leaves.
        place = (names.index(self._hand.chosen) if self._hand.chosen in names else -1) + step
        if not 0 <= place < len(names):
            return False
        self._hand.choose(names[place])
        return True
