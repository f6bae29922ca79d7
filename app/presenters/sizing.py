"""Sizing and settling: worked out beside the window, shown as a proposal, taken in one step."""

from __future__ import annotations

from dataclasses import dataclass
from time import monotonic
from typing import TYPE_CHECKING, Protocol

from app.jobs.runner import Request
from app.presenters.offer import OfferState, settled_offer, settling_offer, sizing_offer
from core.engines import ENGINES, LIVE
from core.layout.build import build_layout, top_copper
from core.progress import SILENT
from core.response.model import Reading, TrustLevel

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.document import Document
    from app.jobs.runner import Runner
    from app.jobs.settling import Best, Settled
    from core.design.model import Design
    from core.errors import CoreError
    from core.progress import Progress
    from core.shapes.outline import Region
    from core.sizing.size import Sizing

KIND = "size"
SIZE, SETTLE = "Size to this brief", "Settle by field check"
_STOPPED = OfferState("Settling stopped: the design was edited. Nothing of it was kept.", "note")


class Stage(Protocol):
    """Where a proposal is shown."""

    def show_ghost(self, ghost: tuple[Region, ...]) -> None: ...


class Offer(Protocol):
    """Where it is told and taken."""

    def show_offer(self, offer: OfferState) -> None: ...


class Bar(Protocol):
    """Where a failure is told."""

    def tell(self, notice: str, **words: str) -> None: ...


class Settler(Protocol):
    """Settles designs by the field solver."""

    def settle(
        self, design: Design, progress: Progress, tell: Callable[[Best], None]
    ) -> Settled: ...
    def close(self) -> None: ...


class SizingPresenter:
    """Runs sizing and settling; keeps a proposal until it is taken, left or overtaken.

    Attributes
    ----------
    proposed : Design or None
    """

    def __init__(
        self,
        document: Document,
        runner: Runner,
        settler: Settler,
        stage: Stage,
        offer: Offer,
        bar: Bar,
        clock: Callable[[], float] = monotonic,
    ) -> None:
        self._document, self._runner, self._settler = document, runner, settler
        self._showing, self._bar, self._clock = _Showing(stage, offer), bar, clock
        self.proposed: Design | None = None
        self._deed = SIZE
        document.design_changed.connect(self._on_design_changed)

    def start(self) -> None:
        """Size the design on the bench by equations."""
        design = self._document.design
        self._begin(SIZE, OfferState("Sizing…", is_busy=True))
        self._runner.start(
            Request(
                KIND,
                lambda progress: _sized(design, progress),
                self._on_sized,
                self._on_failed,
                self._on_stepped,
            )
        )

    def settle(self) -> None:
        """Settle by field check what is proposed, or else the design on the bench."""
        design = self.proposed or self._document.design
        watch = _Watch(self._clock())
        self._begin(SETTLE, settling_offer(0, None, design.brief, 0.0))
        self._runner.start(
            Request(
                KIND,
                lambda progress: self._settler.settle(design, progress, watch.tell),
                lambda settled: self._on_settled(settled, watch),
                self._on_failed,
                lambda done, _total: self._on_solved(done, watch),
            )
        )

    def accept(self) -> None:
        """Put what is proposed on the bench."""
        design, deed = self.proposed, self._deed
        self.discard()
        if design is not None:
            self._document.change(design, deed)

    def discard(self) -> None:
        """Stop what is being worked out, and leave what is proposed."""
        self._runner.stop(KIND)
        self.proposed = None
        self._showing.show(OfferState(), ())

    def forget_stopped(self) -> None:
        """No longer tell that an edit has stopped settling."""
        if self._showing.state == _STOPPED:
            self._showing.show(OfferState(), ())

    def _begin(self, deed: str, shown: OfferState) -> None:
        self.discard()
        self._deed = deed
        self._showing.show(shown, ())

    def _on_stepped(self, done: int, total: int) -> None:
        if total > 1:
            words = f"Sizing: {done} of {total} starting points"
            self._showing.show(OfferState(words, is_busy=True), ())

    def _on_sized(self, answer: tuple[Sizing, bool, tuple[Region, ...]]) -> None:
        sizing, is_known, copper = answer
        self.proposed = sizing.design
        offer = sizing_offer(self._document.design, sizing, is_known)
        self._showing.show(offer, copper)

    def _on_solved(self, done: int, watch: _Watch) -> None:
        """Tell what settling is at, and draw the best so far."""
        best, brief = watch.best, self._document.design.brief
        offer = settling_offer(done, best, brief, self._clock() - watch.start)
        self._showing.show(offer, best.copper if best is not None else ())

    def _on_settled(self, settled: Settled, watch: _Watch) -> None:
        offer = settled_offer(self._document.design, settled, self._clock() - watch.start)
        self.proposed = settled.design if offer.is_proposal else None
        self._showing.show(offer, settled.copper if offer.is_proposal else ())

    def _on_failed(self, error: CoreError) -> None:
        self.discard()
        notice = "size-failed" if self._deed == SIZE else "settle-failed"
        self._bar.tell(notice, reason=str(error))

    def _on_design_changed(self, _design: Design) -> None:
        """An edit overtakes a proposal for the design before it."""
        was = self._showing.state
        if was != _STOPPED:
            self.discard()
        if was.is_busy and self._deed == SETTLE:
            self._showing.show(_STOPPED, ())


class _Showing:
    """What is told and drawn; each is shown again only where it changes."""

    def __init__(self, stage: Stage, offer: Offer) -> None:
        self._stage, self._offer = stage, offer
        self.state = OfferState()
        self._ghost: tuple[Region, ...] = ()

    def show(self, state: OfferState, ghost: tuple[Region, ...]) -> None:
        if state != self.state:
            self.state = state
            self._offer.show_offer(state)
        if ghost != self._ghost:
            self._ghost = ghost
            self._stage.show_ghost(ghost)


@dataclass
class _Watch:
    """Best so far, told in the thread that hears of it and read in the window's."""

    start: float
    best: Best | None = None

    def tell(self, best: Best) -> None:
        self.best = best


def _sized(design: Design, progress: Progress) -> tuple[Sizing, bool, tuple[Region, ...]]:
    """Sizing, whether its match can be vouched for, and its copper."""
    # Loaded when it is first used: its optimiser would slow the start of the window.
    from core.sizing.size import size  # noqa: PLC0415

    sizing = size(design, progress=progress)
    layout = build_layout(sizing.design)
    response = ENGINES[LIVE](layout, [sizing.design.brief.frequency], SILENT)
    is_known = response.trust[Reading.MATCH].level is not TrustLevel.UNKNOWN
    return sizing, is_known, top_copper(layout)
