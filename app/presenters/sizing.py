"""Sizing to the brief: worked out beside the window, shown as a proposal, taken in one step."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

from app.jobs.runner import Request
from core.engines import ENGINES, LIVE
from core.layout.build import build_layout, top_copper
from core.progress import SILENT
from core.response.model import Reading, TrustLevel

if TYPE_CHECKING:
    from app.document import Document
    from app.jobs.runner import Runner
    from core.design.model import Design
    from core.errors import CoreError
    from core.progress import Progress
    from core.shapes.outline import Region
    from core.sizing.size import Sizing

KIND = "size"
_UNTOLD = "The best that the equations find."  # their numbers would be taken for the antenna's
_DOUBT = "An estimate, not to cut by: equations cannot vouch for it here."


class Stage(Protocol):
    """Where a proposal is shown."""

    def show_ghost(self, ghost: tuple[Region, ...]) -> None: ...


class Offer(Protocol):
    """Where it is told and taken."""

    def show_sizing(self, busy: str, proposal: str) -> None: ...


class Bar(Protocol):
    """Where a failure is told."""

    def tell(self, notice: str, **words: str) -> None: ...


class SizingPresenter:
    """Runs the sizing and keeps its proposal until it is taken, left or overtaken."""

    def __init__(
        self, document: Document, runner: Runner, stage: Stage, offer: Offer, bar: Bar
    ) -> None:
        self._document, self._runner = document, runner
        self._stage, self._offer, self._bar = stage, offer, bar
        self.proposed: Sizing | None = None
        self._is_busy = False
        document.design_changed.connect(self._on_design_changed)

    def start(self) -> None:
        self._drop()
        design = self._document.design
        self._is_busy = True
        self._offer.show_sizing("Sizing…", "")
        self._runner.start(
            Request(
                KIND,
                lambda progress: _sized(design, progress),
                self._on_sized,
                self._on_failed,
                self._on_stepped,
            )
        )

    def accept(self) -> None:
        sizing = self.proposed
        self._drop()
        if sizing is not None:
            self._document.change(sizing.design, "Size to this brief")

    def discard(self) -> None:
        self._runner.stop(KIND)
        self._drop()

    def _on_stepped(self, done: int, total: int) -> None:
        if self._is_busy and total > 1:
            self._offer.show_sizing(f"Sizing: {done} of {total} starting points", "")

    def _on_sized(self, answer: tuple[Sizing, bool, tuple[Region, ...]]) -> None:
        sizing, is_known, copper = answer
        self._is_busy = False
        self.proposed = sizing
        told = sizing.reason if is_known or not sizing.met else _UNTOLD
        doubt = "" if is_known else f" {_DOUBT}"
        self._offer.show_sizing("", f"Dashed on the Mat. {told}{doubt}")
        self._stage.show_ghost(copper)

    def _on_failed(self, error: CoreError) -> None:
        self._drop()
        self._bar.tell("size-failed", reason=str(error))

    def _on_design_changed(self, _design: Design) -> None:
        """An edit overtakes a proposal for the design before it."""
        if self.proposed is not None or self._is_busy:
            self.discard()

    def _drop(self) -> None:
        had_ghost, self.proposed, self._is_busy = self.proposed is not None, None, False
        self._offer.show_sizing("", "")
        if had_ghost:
            self._stage.show_ghost(())


def _sized(design: Design, progress: Progress) -> tuple[Sizing, bool, tuple[Region, ...]]:
    """Sizing, whether its match can be vouched for, and its copper."""
    # Loaded when it is first used: its optimiser would slow the start of the window.
    from core.sizing.size import size  # noqa: PLC0415

    sizing = size(design, progress=progress)
    layout = build_layout(sizing.design)
    response = ENGINES[LIVE](layout, [sizing.design.brief.frequency], SILENT)
    is_known = response.trust[Reading.MATCH].level is not TrustLevel.UNKNOWN
    return sizing, is_known, top_copper(layout)
