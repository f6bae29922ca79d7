"""Sheets with known measures that every writer of drawings has to keep."""

from math import pi, sqrt

import pytest

from core.drawing.sheet import Area, Box, Group, Purpose, Sheet
from core.shapes.outline import Outline, Vertex, circle, polyline

DOTS_MM = [(15.0, 12.0), (215.0, 12.0), (15.0, 222.0), (215.0, 222.0)]


@pytest.fixture
def dotted():
    """Four dots, 200 mm apart across and 210 mm along, on a sheet of 230 x 240 mm."""
    dots = tuple(Area((circle(3e-3, (x * 1e-3, y * 1e-3)),)) for x, y in DOTS_MM)
    box = Box(0.0, 0.0, 230e-3, 240e-3)
    return Sheet("dots", box, (Group(Purpose.COPPER, dots),))


@pytest.fixture
def holed():
    """Disc with a round hole, a slanted square hole and a bite, and its area in mm²."""
    radius, bite = 40.0, 20.0  # mm; the bite is an arc of the same chord, bent inwards
    half = sqrt(radius**2 - bite**2)  # half chord of an arc from -60 to 60 degrees
    big, small = pi / 3 * 4, pi / 3 * 2  # the arcs' angles
    start, end = (bite, -half), (bite, half)
    ring = Outline(
        (
            Vertex(end[0] * 1e-3, end[1] * 1e-3, sqrt(3.0)),  # tan of a quarter of 240 degrees
            Vertex(start[0] * 1e-3, start[1] * 1e-3, -1.0 / sqrt(3.0)),  # 120 degrees, inwards
        )
    )
    square = polyline([(-0.02, -0.006), (-0.012, 0.002), (-0.02, 0.010), (-0.028, 0.002)])
    segment = radius**2 / 2 * (small - sqrt(3.0) / 2)
    area = radius**2 / 2 * (big + sqrt(3.0) / 2) - segment - 100.0 * pi / 4 - 128.0
    rings = (ring, circle(10e-3, (-5e-3, 20e-3)), square)
    box = Box(-50e-3, -50e-3, 50e-3, 50e-3)
    return Sheet("holed", box, (Group(Purpose.COPPER, (Area(rings),)),)), area
