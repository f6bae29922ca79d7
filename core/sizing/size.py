"""From a brief and the stock to a design that meets it, as far as the live model can tell."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import ceil, hypot
from typing import TYPE_CHECKING

import numpy as np
from scipy.optimize import least_squares

from core.constants import SPEED_OF_LIGHT
from core.design.feed import DualEdge, LeadBend, LeadIn, ProbeFeed, Turn
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, RectangleGround
from core.findings import Severity
from core.layout.build import build_layout, electrical_layout
from core.layout.plates import rim_distance
from core.live.respond import sample
from core.progress import SILENT, Progress
from core.sizing.goal import cross_field
from core.sizing.knobs import (
    Box,
    dual_edge_boxes,
    fixed_element_boxes,
    linear_boxes,
    on_grid,
    probe_boxes,
)
from core.sizing.seed import THICKEST, Start, starting_values

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.design.model import Design
    from core.design.stock import Ground
    from core.response.model import Samples

    Floats = NDArray[np.float64]

GOAL_VSWR = 1.5
GOAL_AXIAL_RATIO_DB = 1.5
_REFLECTION_SCALE = 0.2  # |S11| of VSWR 1.5
_CROSS_SCALE = 0.0862  # wrong-hand over right-hand field at 1.5 dB
_AIM = 0.35  # of the goals: where a search is done
_PATIENCE = 250  # evaluations after which reaching the goals is enough
_LIMIT = 650  # evaluations after which no new search begins: about a second
_SIDE_WEIGHT = 0.15  # of the frequencies beside the brief's: prefers the wider band
_ROOMY = 1.5  # times the seed's sides: larger than any that are tried
_REFUSED = 1e3  # added to the cost of what cannot be made
_BESIDE = 0.004  # relative distance of those frequencies
_MOST_TRIES = 40  # evaluations of the gradient in one search


@dataclass(frozen=True)
class Sizing:
    """What sizing came to.

    Attributes
    ----------
    design : Design
        The best found.
    met : bool
        Whether its live readings reach the goals: VSWR and axial ratio of 1.5 (dB), or the
        brief's own where those are stricter.
    reason : str
        One sentence: what was reached, and what stood in the way where it was not met.
    vswr : float
    axial_ratio_db : float
        Of no concern for a linear antenna.
    evaluations : int
        Layouts that were worked out.
    """

    design: Design
    met: bool
    reason: str
    vswr: float
    axial_ratio_db: float
    evaluations: int


def size(
    design: Design,
    *,
    keep_element: bool = False,
    fit_ground: bool = False,
    progress: Progress = SILENT,
) -> Sizing:
    """Size a design to its brief by the live model.

    Parameters
    ----------
    design : Design
        Its brief, stock, process, kind of feed, gaps and probe are kept; its sides, landing
        points, strip widths, delay strip, tee and lead-in, or its probe's place, are found.
    keep_element : bool
        Keep the sides as well.
    fit_ground : bool
        Make the ground plate reach half a wavelength beyond the copper.
    progress : Progress
        Told after each search; may cancel.

    Returns
    -------
    Sizing
        The best found, lengths on a grid of a hundredth of a millimetre.

    Raises
    ------
    Cancelled
        If the progress asks for it.

    Notes
    -----
    Damped least squares on the reflection coefficient and the ratio of the wrong-hand to the
    right-hand field, at the brief's frequency and, lightly, at two beside it, from a few
    starting points: branches near the corner, at mid-side, with a lead-in.
    """
    if fit_ground:  # out of the way while the sides are found
        design = _with_fitted_ground(design, _ROOMY)
    search = _Search(design)
    starts = [search.found(box, box.start) for box in _boxes(design, keep_element)]
    starts.sort(key=lambda start: (len(start.turns), start.cost))  # simple ones first
    best = starts[0]
    for number, start in enumerate(starts):
        progress.step(number, len(starts))
        found = search.improved(start, progress)
        if found.cost < best.cost:
            best = found
        if best.cost <= (_AIM if search.evaluations < _PATIENCE else 1.0):
            break
        if search.evaluations > _LIMIT:
            break
    progress.step(len(starts), len(starts))
    sized = _with_fitted_ground(best.design) if fit_ground else best.design
    return _sizing(sized, best, search.evaluations)


@dataclass(frozen=True)
class _Found:
    design: Design
    box: Box
    turns: Floats
    vswr: float
    axial_ratio_db: float
    refusal: str  # why it cannot be made; empty where it can
    cost: float  # worst of reflection and cross field in units of the goals; at most 1 is met


class _Search:
    """Looks for designs that meet a brief, and counts what it worked out."""

    def __init__(self, design: Design) -> None:
        brief = design.brief
        self.evaluations = 0
        self._polarisation = brief.polarisation
        self._frequencies = brief.frequency * np.array([1.0 - _BESIDE, 1.0, 1.0 + _BESIDE])
        self._weights = np.array([_SIDE_WEIGHT, 1.0, _SIDE_WEIGHT])

    def improved(self, start: _Found, progress: Progress) -> _Found:
        """Design that least squares reaches from a start."""
        if len(start.turns) == 0:
            return start

        def residuals(turns: Floats) -> Floats:
            progress.step(0, 1)
            return self._residuals(start.box.design(turns, float))

        solution = least_squares(
            residuals,
            start.turns,
            bounds=(0.0, 1.0),
            diff_step=[2e-3],
            ftol=1e-3,
            xtol=1e-4,
            gtol=1e-6,
            max_nfev=_MOST_TRIES,
        )
        return self.found(start.box, np.asarray(solution.x))

    def found(self, box: Box, turns: Floats) -> _Found:
        """Design at a point of a box, with what it reaches at the brief's frequency."""
        design = box.design(turns, on_grid)
        samples = self._samples(design).at(1)
        cost = float(np.abs(samples.s11)) / _REFLECTION_SCALE
        if self._polarisation is not Polarisation.LINEAR:
            cross = (
                float(np.abs(cross_field(samples.e_x, samples.e_y, self._polarisation)))
                / _CROSS_SCALE
            )
            cost = max(cost, cross)
        refusal = next(
            (
                one.message
                for one in build_layout(design).findings
                if one.severity is Severity.REFUSAL
            ),
            "",
        )
        if refusal:
            cost += _REFUSED
        vswr, ratio = float(samples.vswr), float(samples.axial_ratio_db)
        return _Found(design, box, turns, vswr, ratio, refusal, cost)

    def _samples(self, design: Design) -> Samples:
        """Match and field at the brief's frequency and beside it."""
        self.evaluations += 1
        return sample(electrical_layout(design), self._frequencies)

    def _residuals(self, design: Design) -> Floats:
        """Real and imaginary parts of reflection and cross field, in units of the goals."""
        samples = self._samples(design)
        parts = [samples.s11 / _REFLECTION_SCALE]
        if self._polarisation is not Polarisation.LINEAR:
            parts.append(cross_field(samples.e_x, samples.e_y, self._polarisation) / _CROSS_SCALE)
        complex_parts = np.concatenate([self._weights * part for part in parts])
        return np.concatenate([complex_parts.real, complex_parts.imag])


def _boxes(design: Design, keep_element: bool) -> tuple[Box, ...]:
    """Families to search, the likeliest first."""
    start = starting_values(design.brief, design.stock)
    feed = design.feed
    if isinstance(feed, ProbeFeed):
        if design.brief.polarisation is Polarisation.LINEAR:
            boxes = linear_boxes(design, start.width, start.length)
        else:
            boxes = probe_boxes(design, start.square, start.quality)
    else:
        boxes = _dual_edge_families(design, feed, start)
    return fixed_element_boxes(boxes, design.element) if keep_element else boxes


def _dual_edge_families(design: Design, feed: DualEdge, start: Start) -> tuple[Box, ...]:
    """Dual-edge families, the lead-in turned along the side where the plate is too small."""
    wavelength = 2.0 * start.square  # close to the guided one; only sets how long a lead-in may be
    straight = _lead_room(design, start.square)
    if straight >= wavelength / 4:
        return dual_edge_boxes(design, start.square, wavelength, straight)
    distance = feed.first.gap / 2 + design.making.narrowest_gap + start.square / 10
    bend = LeadBend(on_grid(min(distance, max(straight, 0.0))), Turn.RIGHT)
    lead = LeadIn(feed.lead_in.length, feed.lead_in.width, (bend,))
    turned = replace(design, feed=replace(feed, lead_in=lead))
    return dual_edge_boxes(turned, start.square, wavelength, bend.distance + start.square / 2)


def _lead_room(design: Design, side: float) -> float:
    """Longest straight lead-in from a tee below the lower side, m."""
    feed = design.feed
    assert isinstance(feed, DualEdge)
    tee = (side / 4, -side / 2 - feed.first.gap - side / 20)
    low, high = 0.0, 4.0 * side
    needed = design.making.edge_margin + feed.probe.clearance / 2
    for _ in range(40):  # the distance to the rim falls all the way down
        middle = (low + high) / 2
        if rim_distance(design, (tee[0], tee[1] - middle)) > needed:
            low = middle
        else:
            high = middle
    return low


def _with_fitted_ground(design: Design, spare: float = 1.0) -> Design:
    """Ground plate that reaches half a wavelength beyond the element and covers the strips."""
    reach = 0.5 * SPEED_OF_LIGHT / design.brief.frequency
    width, length = spare * design.element.width, spare * design.element.length
    if isinstance(design.stock.ground, DiscGround):
        shape: Ground = DiscGround(_whole_mm(hypot(width, length) + 2.0 * reach))
    else:
        shape = RectangleGround(_whole_mm(width + 2.0 * reach), _whole_mm(length + 2.0 * reach))
    return replace(design, stock=replace(design.stock, ground=shape))


def _whole_mm(length: float) -> float:
    """Round up to the millimetre, with one to spare."""
    return (ceil(length * 1e3) + 1) / 1e3


def _sizing(design: Design, best: _Found, evaluations: int) -> Sizing:
    """Put what was reached, and what stood in the way, in one sentence."""
    brief = design.brief
    is_linear = brief.polarisation is Polarisation.LINEAR
    good = best.vswr <= min(GOAL_VSWR, brief.vswr) and (
        is_linear or best.axial_ratio_db <= min(GOAL_AXIAL_RATIO_DB, brief.axial_ratio_db)
    )
    reached = f"VSWR {best.vswr:.2f}"
    if not is_linear:
        reached += f", axial ratio {min(best.axial_ratio_db, 60.0):.2f} dB"
    if best.refusal:
        reason = f"The estimate reaches {reached}, but it can't be made: {best.refusal}"
    elif good:
        reason = f"The estimate reaches {reached}."
    else:
        reason = f"The best found has {reached}: {_obstacle(best)}."
    met = good and not best.refusal
    return Sizing(design, met, reason, best.vswr, best.axial_ratio_db, evaluations)


def _obstacle(found: _Found) -> str:
    """What a search that fell short ran into."""
    stops = found.box.limits_reached(found.turns)
    if stops:
        return stops
    design = found.design
    thickness = design.stock.height * design.brief.frequency / SPEED_OF_LIGHT
    if isinstance(design.feed, ProbeFeed) and thickness > THICKEST:
        return f"a straight probe is too inductive on a spacer of {thickness:.2f} wavelength"
    return "no sides and strips were found that do better on this stock with this feed"
