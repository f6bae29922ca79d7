"""The solved current on a plan view, and the clock that moves it."""

from __future__ import annotations

from math import pi
from typing import TYPE_CHECKING, Final

from PySide6.QtCore import QEvent, QObject, QTimer

from app.mat.current import CurrentState

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

STEP: Final = 40  # ms between two pictures
_STEPS: Final = 50  # of a period, which so takes two seconds


class CurrentLayer(QObject):
    """Keeps what a view shows of a solution, and steps through a period while that is seen.

    Attributes
    ----------
    state : CurrentState
    phase : float
        Of the instant shown, rad.
    """

    def __init__(self, view: QWidget) -> None:
        super().__init__(view)
        self._view = view
        self.state = CurrentState()
        self.phase = 0.0
        self._count = 0
        self._clock = QTimer(self)
        self._clock.setInterval(STEP)
        self._clock.timeout.connect(self.step)
        view.installEventFilter(self)

    @property
    def is_moving(self) -> bool:
        """Whether the clock runs."""
        return self._clock.isActive()

    def show_state(self, state: CurrentState) -> None:
        self.state = state
        self._follow()
        self._view.update()

    def step(self) -> None:
        """Go on by one picture."""
        self._count = (self._count + 1) % _STEPS
        self.phase = 2.0 * pi * self._count / _STEPS
        self._view.update()

    def eventFilter(self, _watched: QObject, event: QEvent) -> bool:
        if event.type() in (QEvent.Type.Show, QEvent.Type.Hide):
            self._follow(is_hidden=event.type() is QEvent.Type.Hide)
        return False

    def _follow(self, *, is_hidden: bool = False) -> None:
        """Run while there is something to be seen moving."""
        # A window put away as an icon hides its views, which call themselves visible still.
        wanted = self.state.moves and self.state.sheet is not None
        if wanted and self._view.isVisible() and not is_hidden:
            self._clock.start()
        else:
            self._clock.stop()
