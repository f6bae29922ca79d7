"""Random designs for the benchmarks: drawn by number, buildable, sized by the live model.

A number always gives the same design, so that a run can be taken up where it stopped.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import lru_cache
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT
from core.design import spelled
from core.design.feed import DualEdge, ProbeFeed, ProbePin
from core.design.model import Brief, Design, Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, RectangleGround, Stock
from core.errors import CoreError
from core.findings import Severity
from core.layout.build import build_layout
from core.lines.stack import Layer, series_permittivity
from core.sizing.knobs import on_grid
from core.sizing.seed import seed_design, starting_values
from core.sizing.size import size

if TYPE_CHECKING:
    from core.design.stock import Ground, SpacerLayer

SEED: Final = 20_260_917
FREQUENCIES: Final = (0.8e9, 6e9)
THICKNESSES: Final = (0.005, 0.12)  # free-space wavelengths; boards: in the dielectric
PLATES: Final = (1.05, 2.5)  # side of the ground plate over the element's
AIR_LIKE: Final = ("air", "foam", "polystyrene", "foam+card")
BOARDS: Final = ("PTFE", "er=2.33,tan=0.0012", "low-loss", "FR-4")
_TRIES: Final = 60


@dataclass(frozen=True)
class Drawn:
    """One random design.

    Attributes
    ----------
    stack : str
        What the spacer is made of.
    plate : float
        Side of the ground plate over the longer side of the element.
    perturbed : bool
        Whether its lengths were changed after it was sized.
    design : Design
    """

    stack: str
    plate: float
    perturbed: bool
    design: Design


def draw(number: int) -> Drawn:
    """Design of a number: sized to its brief where even, then also perturbed where odd."""
    random = np.random.default_rng([SEED, number])
    stack, design = _sized(number // 2)
    perturbed = bool(number % 2)
    if perturbed:
        design = _perturbed(design, random)
    ground = design.stock.ground
    side = ground.diameter if isinstance(ground, DiscGround) else ground.width
    return Drawn(stack, side / max(design.element.width, design.element.length), perturbed, design)


@lru_cache(maxsize=4)
def _sized(pair: int) -> tuple[str, Design]:
    """Buildable design of a pair of numbers, and what its spacer is made of."""
    random = np.random.default_rng([SEED, pair])
    for _ in range(_TRIES):
        stack, design = _seed(random)
        try:
            design = size(design).design
        except CoreError:
            continue
        if _is_buildable(design):
            return stack, design
    raise AssertionError(f"nothing buildable after {_TRIES} tries")


def bare_element(design: Design, frequency: float) -> Design:
    """The same element, stock and plate with a thin probe that drives its mode along y alone."""
    width = design.element.length
    pin = max(width / 60.0, 0.15e-3)
    feed = ProbeFeed(0.0, -on_grid(0.3 * width), ProbePin(pin, 2.0 * pin, 3.0 * pin))
    brief = replace(design.brief, frequency=frequency, polarisation=Polarisation.LINEAR)
    return replace(design, brief=brief, feed=feed)


def _seed(random: np.random.Generator) -> tuple[str, Design]:
    """Brief, stock and kind of feed by lot."""
    frequency = round(float(np.exp(random.uniform(*np.log(FREQUENCIES)))), -6)
    is_board = random.random() < 0.5
    stack = str(random.choice(BOARDS if is_board else AIR_LIKE))
    thickness = float(np.exp(random.uniform(*np.log(THICKNESSES)))) * SPEED_OF_LIGHT / frequency
    spacer = _spacer(stack, thickness, is_board)
    feed = str(random.choice(("dual-edge", "probe")))
    senses = ["rhcp", "lhcp"] + (["linear"] if feed == "probe" else [])
    brief = Brief(frequency, Polarisation(str(random.choice(senses))), vswr=1.5, axial_ratio_db=1.5)
    making = spelled.making("photo-etch" if is_board else "knife")
    foil = spelled.foil("copper-35")
    open_stock = Stock(spacer, foil, RectangleGround(4.0, 4.0))
    side = starting_values(brief, open_stock).square
    plate = side * float(np.exp(random.uniform(*np.log(PLATES))))
    ground: Ground = RectangleGround(on_grid(plate), on_grid(plate))
    if random.random() < 0.5:
        ground = DiscGround(on_grid(max(plate, 1.42 * side)))
    return stack, seed_design("random", brief, replace(open_stock, ground=ground), making, feed)


def _spacer(stack: str, thickness: float, is_board: bool) -> tuple[SpacerLayer, ...]:
    """Layers, the thickness on a grid of a tenth of a millimetre; card half a millimetre."""
    if stack == "foam+card":
        return spelled.spacer(f"foam:{_tenths(thickness - 0.5e-3):.1f}mm + card:0.5mm")
    if is_board:
        whole = spelled.spacer(f"{stack}:1mm")[0]
        thickness /= series_permittivity((Layer(1e-3, whole.eps_r),)) ** 0.5
    return spelled.spacer(f"{stack}:{_tenths(thickness):.1f}mm")


def _tenths(thickness: float) -> float:
    return max(round(thickness * 1e4) / 10.0, 0.2)


def _perturbed(design: Design, random: np.random.Generator) -> Design:
    """Sides up to 6 % off, landing points, strips and probe place up to 20 %; still buildable."""
    for _ in range(_TRIES):
        near = lambda part: float(random.uniform(1.0 - part, 1.0 + part))  # noqa: E731
        element = Element(
            on_grid(design.element.width * near(0.06)), on_grid(design.element.length * near(0.06))
        )
        feed = design.feed
        if isinstance(feed, DualEdge):
            feed = replace(
                feed,
                first=replace(feed.first, landing=on_grid(feed.first.landing * near(0.2))),
                second=replace(feed.second, landing=on_grid(feed.second.landing * near(0.2))),
                delay_length=on_grid(feed.delay_length * near(0.1)),
            )
        else:
            feed = replace(feed, x=on_grid(feed.x * near(0.2)), y=on_grid(feed.y * near(0.2)))
        changed = replace(design, element=element, feed=feed)
        if _is_buildable(changed):
            return changed
    return design


def _is_buildable(design: Design) -> bool:
    try:
        findings = build_layout(design).findings
    except CoreError:
        return False
    return not any(one.severity is Severity.REFUSAL for one in findings)
