"""Draw costs against unknowns on logarithmic axes, as SVG."""

from __future__ import annotations

from collections.abc import Sequence
from math import log10
from typing import Any

from svgwrite import Drawing  # type: ignore[import-untyped]

WIDTH, HEIGHT = 640, 420
LEFT, RIGHT, TOP, BOTTOM = 70, 150, 20, 50
LOWEST, HIGHEST = (200, 1e-3), (4000, 30.0)  # unknowns and seconds
PARTS = (("fill", "fill"), ("solve", "solve"), ("total", "sweep"))
DASHES = {"fill": "none", "solve": "7,4", "total": "2,3"}
COLOURS = ("#0072b2", "#d55e00")


def _place(unknowns: float, seconds: float) -> tuple[float, float]:
    """From values to the page."""
    x = log10(unknowns / LOWEST[0]) / log10(HIGHEST[0] / LOWEST[0])
    y = log10(seconds / LOWEST[1]) / log10(HIGHEST[1] / LOWEST[1])
    return (
        round(LEFT + x * (WIDTH - LEFT - RIGHT), 1),
        round(HEIGHT - BOTTOM - y * (HEIGHT - TOP - BOTTOM), 1),
    )


def _frame(drawing: Any) -> None:
    for unknowns in (200, 500, 1000, 2000, 4000):
        x, low = _place(unknowns, LOWEST[1])
        drawing.add(drawing.line((x, TOP), (x, low), stroke="#cccccc"))
        drawing.add(drawing.text(str(unknowns), (x, low + 18), text_anchor="middle"))
    for power in range(-3, 2):
        x, y = _place(LOWEST[0], 10.0**power)
        drawing.add(drawing.line((x, y), (WIDTH - RIGHT, y), stroke="#cccccc"))
        drawing.add(drawing.text(f"{10.0**power:g} s", (x - 8, y + 4), text_anchor="end"))
    middle = (LEFT + WIDTH - RIGHT) / 2
    drawing.add(drawing.text("unknowns", (middle, HEIGHT - 12), text_anchor="middle"))


def cost_plot(found: dict[str, Sequence[Any]]) -> str:
    """SVG of the costs (unknowns, fill, solve, total) of several designs."""
    drawing = Drawing(size=(WIDTH, HEIGHT), viewBox=f"0 0 {WIDTH} {HEIGHT}", debug=False)
    drawing["font-family"], drawing["font-size"] = "sans-serif", "13"
    drawing.add(drawing.rect((0, 0), (WIDTH, HEIGHT), fill="white"))
    _frame(drawing)
    row = TOP + 14
    for colour, (name, costs) in zip(COLOURS, found.items(), strict=True):
        for part, word in PARTS:
            points = [_place(cost.unknowns, getattr(cost, part)) for cost in costs]
            style = {
                "stroke": colour,
                "fill": "none",
                "stroke_width": 2,
                "stroke_dasharray": DASHES[part],
            }
            drawing.add(drawing.polyline(points, **style))
            for point in points:
                drawing.add(drawing.circle(point, 2.5, fill=colour))
            x = WIDTH - RIGHT + 12
            drawing.add(drawing.line((x, row - 4), (x + 34, row - 4), **style))
            drawing.add(drawing.text(f"{name}, {word}", (x + 42, row)))
            row += 20
    return str(drawing.tostring()) + "\n"
