"""Follows the document: each design is looked at once, and whoever shows it is told."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal

from app.evaluation import Evaluation, evaluate

if TYPE_CHECKING:
    from app.document import Document
    from core.design.model import Design


class Pipeline(QObject):
    """Keeps the evaluation of the current design, and the last one that could be drawn.

    A look takes a few milliseconds, so it is done at once, in the step of a drag too.
    """

    evaluated = Signal(object)

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self.current: Evaluation = evaluate(document.design)
        self.last_drawn = self.current
        document.design_changed.connect(self._on_design_changed)

    def _on_design_changed(self, design: Design) -> None:
        self.current = evaluate(design)
        if self.current.layout is not None:
            self.last_drawn = self.current
        self.evaluated.emit(self.current)
