"""What one look at a design gives: its layout, what it would do, and how that stands."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from core.engines import ENGINES, LIVE
from core.errors import LayoutError, ModelError, OutOfRangeError
from core.findings import has_refusal
from core.layout.build import build_layout
from core.progress import SILENT
from core.response.bands import frequency_grid
from core.response.judge import judge

if TYPE_CHECKING:
    from core.design.model import Design
    from core.findings import Finding
    from core.layout.model import Layout
    from core.response.judge import Verdict
    from core.response.model import Response


@dataclass(frozen=True)
class Evaluation:
    """One design looked at.

    Attributes
    ----------
    design : Design
    layout : Layout or None
        None where no valid outline can be made.
    response : Response or None
        None where the model cannot answer.
    verdicts : tuple of Verdict
    problem : str
        Why there is no layout or no response; empty where there are both.
    problem_field : str
        Dotted name of the parameter that cures it.
    """

    design: Design
    layout: Layout | None = None
    response: Response | None = None
    verdicts: tuple[Verdict, ...] = ()
    problem: str = ""
    problem_field: str = ""
    findings: tuple[Finding, ...] = field(default=())

    @property
    def is_buildable(self) -> bool:
        return self.layout is not None and not has_refusal(self.findings)


def evaluate(design: Design) -> Evaluation:
    """Look at a design with the live model, at the frequencies of the curves."""
    try:
        layout = build_layout(design)
    except LayoutError as error:
        return Evaluation(design, problem=str(error), problem_field=error.field)
    try:
        frequencies = frequency_grid(design.brief.frequency)
        response = ENGINES[LIVE](layout, frequencies, SILENT)
    except (ModelError, OutOfRangeError) as error:
        return Evaluation(design, layout, problem=str(error), findings=layout.findings)
    brief = design.brief
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    return Evaluation(design, layout, response, verdicts, findings=layout.findings)
