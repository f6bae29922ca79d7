"""Between the document and the card column."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

from app.presenters.cards import cards
from app.presenters.editing import done, label_of, refusal_text, stepped, typed
from core.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.document import Document
    from app.presenters.rows import CardState
    from core.design.model import Design


class CardsView(Protocol):
    """What the presenter needs of the column."""

    def show_state(self, states: tuple[CardState, ...]) -> None: ...
    def show_refusal(self, key: str, message: str) -> None: ...


class CardsPresenter:
    """Turns the design into cards, and what is typed on them into edits."""

    def __init__(self, document: Document, view: CardsView) -> None:
        self._document, self._view = document, view
        self._held: tuple[str, int] = ("", 0)
        document.design_changed.connect(self.show)
        self.show(document.design)

    def show(self, design: Design) -> None:
        self._view.show_state(cards(design))

    def edit(self, key: str, text: str) -> None:
        """Take what was typed or chosen in a field."""
        label = label_of(self._document.design, key)
        self._try(key, f"Change {label}", lambda design: typed(design, key, text))

    def step(self, key: str, steps: float, held: bool) -> None:
        """Take an arrow key in a field; one that is held down is one undo step."""
        if not held or self._held[0] != key:
            self._held = (key, self._document.next_gesture())
        label = label_of(self._document.design, key)
        self._try(key, f"Change {label}", lambda design: stepped(design, key, steps), self._held)

    def act(self, deed: str) -> None:
        """Take a press on a button of a row."""
        words = {"add": "Add a layer", "remove": "Remove a layer"}
        text = words.get(deed.split(".")[1], "Move a layer")
        self._try("stock.spacer", text, lambda design: done(design, deed))

    def _try(
        self,
        key: str,
        text: str,
        change: Callable[[Design], Design],
        merge_key: tuple[str, int] | None = None,
    ) -> None:
        try:
            after = change(self._document.design)
        except InputError as error:
            self._view.show_refusal(key, refusal_text(error))
            return
        self._document.change(after, text, merge_key)
        self.show(self._document.design)
