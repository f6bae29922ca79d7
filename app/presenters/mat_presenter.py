"""Between the document and the Mat."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING, Protocol

from app.mat.edge import EdgeState, edge_handles, edge_state, spacing_key
from app.mat.handles import nudged, plan_handles, pulled
from app.mat.plan import PlanState
from core.design import edit
from core.units import Quantity, format_quantity

if TYPE_CHECKING:
    from app.document import Document
    from app.mat.handles import Handle
    from app.pipeline import Pipeline
    from core.design.model import Design
    from core.shapes.outline import Region

NOTE = "Seen from the front"


class MatView(Protocol):
    """What the presenter needs of the Mat."""

    def show_plan(self, state: PlanState) -> None: ...
    def show_edge(self, state: EdgeState) -> None: ...


class MatPresenter:
    """Turns evaluations into what the Mat shows, and what the hand does into edits."""

    def __init__(self, document: Document, pipeline: Pipeline, view: MatView) -> None:
        self._document, self._pipeline, self._view = document, pipeline, view
        self._start: tuple[Design, Handle, int] | None = None
        self._held = 0
        self._slide = 0
        self._ghost: tuple[Region, ...] = ()
        pipeline.evaluated.connect(lambda _evaluation: self.show())
        self.show()

    def show(self) -> None:
        current, drawn = self._pipeline.current, self._pipeline.last_drawn
        design = current.design
        is_stale = current.layout is None
        handles = plan_handles(design)
        words = partial(_words, design)
        self._view.show_plan(PlanState(drawn.layout, handles, words, is_stale, NOTE, self._ghost))
        self._view.show_edge(edge_state(design, drawn.layout, words, is_stale))

    def show_ghost(self, ghost: tuple[Region, ...]) -> None:
        """Draw copper that is only proposed; nothing of it is on the bench."""
        self._ghost = ghost
        self.show()

    def start_pull(self, name: str) -> None:
        """A handle was taken hold of."""
        design = self._document.design
        self._start = (design, _named(design, name), self._document.next_gesture())

    def pull(self, across: float, up: float) -> None:
        """The handle that is held was moved so far (m) from where it was taken."""
        if self._start is None:
            return
        before, handle, gesture = self._start
        after = pulled(before, handle, across, up)
        self._document.change(after, f"Move {handle.label.lower()}", (handle.name, gesture))

    def end_pull(self) -> None:
        self._start = None

    def cancel_pull(self) -> None:
        """Put everything back as it was when the handle was taken."""
        if self._start is not None:
            before, handle, gesture = self._start
            self._document.change(before, "", (handle.name, gesture))
        self._start = None

    def nudge(self, name: str, across: float, up: float, held: bool) -> None:
        """Move a handle by key; a key that is held down is one undo step."""
        if not held:
            self._held = self._document.next_gesture()
        design = self._document.design
        handle = _named(design, name)
        after = nudged(design, handle, across, up)
        self._document.change(after, f"Move {handle.label.lower()}", (name, self._held))

    def take_slider(self) -> None:
        """The slider was taken hold of: what follows is one undo step."""
        self._slide = self._document.next_gesture()

    def set_spacing(self, thickness: float) -> None:
        """Take the slider: the thickest layer is what it sets."""
        design = self._document.design
        after = edit.with_number(design, spacing_key(design), thickness)
        self._document.change(after, "Change spacing", ("spacing", self._slide))


def _named(design: Design, name: str) -> Handle:
    handles = (*plan_handles(design), *edge_handles(design))
    return next(one for one in handles if one.name == name)


def _words(design: Design, handle: Handle) -> str:
    """What a handle stands at."""
    values = []
    for pull in handle.pulls:
        value = edit.value_at(design, pull.key)
        assert isinstance(value, float)
        values.append(format_quantity(value, Quantity.LENGTH))
    return f"{handle.label} {', '.join(values)}"
