"""The hand on a view of the Mat: what it points at, holds or has chosen."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import QPointF, Qt

from app.mat.reach import REACH, apart

if TYPE_CHECKING:
    from PySide6.QtCore import SignalInstance

    from app.mat.camera import Camera
    from app.mat.handles import Handle, Words


class Hands(Protocol):
    """What a state shows to the hand."""

    @property
    def handles(self) -> tuple[Handle, ...]: ...
    @property
    def words(self) -> Words: ...


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
    def accessibleDescription(self) -> str: ...
    def setAccessibleDescription(self, words: str) -> None: ...


@dataclass
class Grip:
    """A button held down: on a handle, or on the mat itself where `name` is empty."""

    name: str
    pressed: QPointF
    last: QPointF


class Hand:
    """Keeps what is under the pointer, held or chosen by key; changes nothing itself."""

    def __init__(self, view: HandView) -> None:
        self.view = view
        self.hover = ""
        self.chosen = ""
        self.grip: Grip | None = None
        self.is_panning = False

    @property
    def shown_handle(self) -> Handle | None:
        """The handle that is held, pointed at or chosen by key, in this order."""
        held = self.grip.name if self.grip else ""
        chosen = self.chosen if self.view.hasFocus() else ""
        name = held or self.hover or chosen
        return next((one for one in self.view.state.handles if one.name == name), None)

    @property
    def has_key_focus(self) -> bool:
        shown = self.shown_handle
        return self.view.hasFocus() and shown is not None and shown.name == self.chosen

    @property
    def is_holding(self) -> bool:
        """Whether a handle is held."""
        return self.grip is not None and bool(self.grip.name)

    def visible_handles(self) -> tuple[Handle, ...]:
        held = self.grip.name if self.grip else ""
        kept = frozenset(filter(None, (held, self.chosen if self.view.hasFocus() else "")))
        return apart(self.view.state.handles, self.view.pixels, kept)

    def follow(self) -> None:
        """Forget handles that are no longer there."""
        names = {one.name for one in self.view.state.handles}
        self.hover = self.hover if self.hover in names else ""
        self.chosen = self.chosen if self.chosen in names else ""
        self._speak()

    def under(self, place: QPointF) -> str:
        best, found = REACH * 1.42, ""
        for handle in self.visible_handles():
            across, down = self.view.pixels(handle)
            away = max(abs(across - place.x()), abs(down - place.y()))
            if away <= REACH and away < best:
                best, found = away, handle.name
        return found

    def choose(self, name: str) -> None:
        self.chosen = name
        self._speak()
        self.view.update()

    def _speak(self) -> None:
        """Tell a screen reader what the chosen handle stands at."""
        state = self.view.state
        chosen = next((one for one in state.handles if one.name == self.chosen), None)
        words = state.words(chosen) if chosen is not None else ""
        if words != self.view.accessibleDescription():
            self.view.setAccessibleDescription(words)

    def point_at(self, name: str, *, always: bool = False) -> None:
        if name != self.hover or always:
            self.hover = name
            shape = Qt.CursorShape.PointingHandCursor if name else Qt.CursorShape.ArrowCursor
            self.view.setCursor(Qt.CursorShape.OpenHandCursor if self.is_panning else shape)
            self.view.update()
