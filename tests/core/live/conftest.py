"""Layouts built by hand, so that these tests know every length in them."""

import numpy as np
import pytest

from core.layout.model import Bend, FeedNetwork, Foil, Landing, Layout, Port, Probe, Segment
from core.lines.stack import Layer

COPPER = Foil(35e-6, 5.8e7)
AIR = (Layer(6e-3),)
BOARD = (Layer(0.8e-3, 2.2, 0.001),)


@pytest.fixture
def dual_edge():
    """Function that makes a right-hand dual-edge layout without a drawing."""

    def make(
        width=53e-3,
        length=53e-3,
        stack=AIR,
        foil=COPPER,
        first=15e-3,  # from the middle of the lower side towards the corner
        second=15e-3,  # from the middle of the right side towards the corner
        gap=7e-3,
        strip=3e-3,
        delay=4e-3,
        tee=0.3,  # part of the delay strip's first leg between the branch and the tee
        lead=20e-3,
        frequency=2.45e9,
        reach=80e-3,
        mirror=1.0,
    ):
        clear = gap + delay / 2
        leg_x, leg_y = width / 2 - first + clear, length / 2 - second + clear
        first_arm = (Segment(delay, tee * leg_x), Bend(delay, False), Segment(strip, clear))
        second_arm = (
            Segment(delay, (1.0 - tee) * leg_x),
            Bend(delay, False),
            Segment(delay, leg_y),
            Bend(delay, False),
            Segment(strip, clear),
        )
        probe = Probe(mirror * (first + tee * leg_x), -length / 2 - clear - lead, 1.3e-3)
        feed = FeedNetwork(
            probe=probe,
            trunk=(Segment(delay, lead),) if lead else (),
            tee_widths=(delay, delay, delay) if lead else (),
            arms=(first_arm, second_arm),
            landings=(
                Landing(mirror * first, -length / 2, strip, "y"),
                Landing(mirror * width / 2, -second, strip, "x"),
            ),
            clearance=gap,
            over_ground=True,
        )
        return _layout(width, length, stack, foil, feed, frequency, reach)

    return make


@pytest.fixture
def probe_fed():
    """Function that makes a layout with a probe under the element, without a drawing."""

    def make(
        width=38e-3,
        length=38e-3,
        stack=BOARD,
        foil=COPPER,
        x=0.0,
        y=-8e-3,
        diameter=1.3e-3,
        frequency=2.5e9,
        reach=80e-3,
    ):
        feed = FeedNetwork(
            probe=Probe(x, y, diameter),
            trunk=(),
            tee_widths=(),
            arms=((),),
            landings=(Landing(x, y, diameter, ""),),
            clearance=np.inf,
            over_ground=True,
        )
        return _layout(width, length, stack, foil, feed, frequency, reach)

    return make


def _layout(width, length, stack, foil, feed, frequency, reach):
    port = Port("coax", feed.probe.x, feed.probe.y, feed.probe.diameter, 50.0)
    return Layout(
        pieces=(),
        holes=(),
        marks=(),
        dimensions=(),
        ports=(port,),
        element_width=width,
        element_length=length,
        ground_reach=reach,
        stack=stack,
        foil=foil,
        feed=feed,
        frequency=frequency,
        findings=(),
    )
