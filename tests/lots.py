"""Twenty whole designs drawn by lot, over both engines, with losses and without."""

from dataclasses import replace

import numpy as np
from board_shapes import IDEAL, board_patch
from fullwave_shapes import probe_patch, stripline_design

from core.constants import SPEED_OF_LIGHT
from core.layout.build import build_layout
from core.layout.model import Foil, Layout
from core.lines.stack import Layer, total_thickness

LOTS = 20
_FREQUENCY = 2.45e9
_POOR = Foil(18e-6, 2e6)  # a foil that costs some per cent


def drawn(number: int) -> tuple[str, Layout]:
    """What is drawn, in words, and its layout."""
    draw = np.random.default_rng(number)
    kind = ("air dual edge", "air probe", "board dual edge", "board probe")[number % 4]
    make = {
        "air dual edge": _air_dual_edge,
        "air probe": _air_probe,
        "board dual edge": _board_dual_edge,
        "board probe": _board_probe,
    }[kind]
    return f"{kind} {number}", make(draw)


def _spread(draw: np.random.Generator, *values: float) -> tuple[float, ...]:
    """Values, each up to a tenth off."""
    return tuple(round(value * draw.uniform(0.9, 1.1), 2) for value in values)


def _foil(draw: np.random.Generator) -> Foil:
    return _POOR if draw.random() < 0.5 else IDEAL


def _air_stack(draw: np.random.Generator, height: float) -> tuple[Layer, ...]:
    """Air, foam, or foam under card; loss in two of three."""
    foam = Layer(height, draw.uniform(1.02, 1.2), draw.choice([0.0, 2e-3]))
    card = Layer(0.08 * height, draw.uniform(2.0, 3.2), draw.choice([0.0, 0.03]))
    under = replace(foam, thickness=height - card.thickness)
    return [(), (foam,), (under, card)][draw.integers(3)]


def _air_dual_edge(draw: np.random.Generator) -> Layout:
    height = round(draw.uniform(4.0, 15.0), 1)
    side = 56.5 - 0.85 * height
    tee = max(10.0, 28.0 - 1.6 * (height - 6.0))
    layout = build_layout(
        stripline_design(
            f"air:{height}mm",
            draw.uniform(1.9, 2.6) * side,
            _spread(draw, side, 0.97 * side),
            _spread(draw, 0.3 * side, 3.0, 2.5),
            _spread(draw, 0.3 * side, 3.0, 3.0),
            _spread(draw, 2.0, 45.0),
            tee,
            lead=12.0 if height > 12.0 else 0.0,
        )
    )
    stack = _air_stack(draw, total_thickness(layout.stack))
    return replace(layout, stack=stack or layout.stack, foil=_foil(draw))


def _air_probe(draw: np.random.Generator) -> Layout:
    height = round(draw.uniform(1.5, 12.0), 1)
    side = 1e-3 * round(draw.uniform(45.0, 60.0), 1)
    layout = probe_patch(
        f"air:{height}mm", side, draw.uniform(0.1, 0.3) * side, draw.uniform(1.3, 2.4) * side
    )
    stack = _air_stack(draw, total_thickness(layout.stack))
    return replace(layout, stack=stack or layout.stack, foil=_foil(draw))


def _board_dual_edge(draw: np.random.Generator) -> Layout:
    eps_r, height = round(draw.uniform(2.2, 5.0), 2), round(draw.uniform(0.8, 2.4), 2)
    side = 1e3 * SPEED_OF_LIGHT / _FREQUENCY / eps_r**0.5 * 0.48
    layout = build_layout(
        stripline_design(
            f"er={eps_r},tan=0:{height}mm",
            3.0 * side,
            _spread(draw, side, 0.98 * side),
            _spread(draw, 0.33 * side, 3.0, 0.6),
            _spread(draw, 0.33 * side, 3.0, 0.7),
            _spread(draw, 0.6, side),
            0.45 * side,
        )
    )
    return replace(layout, foil=IDEAL)


def _board_probe(draw: np.random.Generator) -> Layout:
    eps_r = round(draw.uniform(2.0, 10.5), 2)
    inside = SPEED_OF_LIGHT / _FREQUENCY / eps_r**0.5
    layout = board_patch(
        inside * draw.uniform(0.35, 0.6),
        inside * draw.uniform(0.4, 0.49),
        inside * draw.uniform(0.01, 0.1),
        eps_r,
        _FREQUENCY,
        draw.uniform(0.1, 0.4),
        0.0,
    )
    return replace(layout, foil=IDEAL)
