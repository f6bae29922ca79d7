"""Hypothesis strategies for designs, shared by the tests.

`designs()` reaches every corner of what a Design takes; most of these cannot be built.
"""

import dataclasses

from hypothesis import strategies as st

from core.design.feed import (
    MOST_BENDS,
    Branch,
    Corner,
    DualEdge,
    LeadBend,
    LeadIn,
    ProbeFeed,
    ProbePin,
    Turn,
)
from core.design.model import Brief, Design, Element, Making, OwnMaterial
from core.design.polarisation import Polarisation
from core.design.stock import (
    MOST_LAYERS,
    DiscGround,
    FoilSheet,
    RectangleGround,
    SpacerLayer,
    Stock,
)

FINEST = 1e-9  # what lies closer to zero is refused as a mistake


def text(longest):
    """Printable text: no control characters, no separators but the space."""
    letters = st.characters(codec="utf-8", exclude_categories=("C", "Z"))
    return st.text(letters | st.just(" "), max_size=longest)


def number(spec):
    values = st.floats(spec.minimum, spec.maximum)
    return values.map(lambda value: value if abs(value) >= FINEST else 0.0)


def part(kind, **others):
    """Instances of a dataclass whose numbers lie anywhere in their declared ranges."""
    numbers = {
        field.name: number(field.metadata["spec"])
        for field in dataclasses.fields(kind)
        if "spec" in field.metadata and field.name not in others
    }
    return st.builds(kind, **numbers, **others)


def probe_pins():
    return st.builds(
        lambda diameter, pad, clearance: ProbePin(diameter, diameter + pad, diameter + clearance),
        st.floats(0.1e-3, 20e-3),
        st.floats(0.1e-3, 40e-3),
        st.floats(0.1e-3, 40e-3),
    )


def lead_ins():
    bends = st.lists(
        part(LeadBend, turn=st.sampled_from(Turn)),
        max_size=MOST_BENDS,
        unique_by=lambda bend: bend.distance,
    )
    rising = bends.map(lambda found: tuple(sorted(found, key=lambda bend: bend.distance)))
    return part(LeadIn, bends=rising)


def dual_edges():
    branch = part(Branch)
    return part(
        DualEdge,
        first=branch,
        second=branch,
        lead_in=lead_ins(),
        probe=probe_pins(),
        corners=st.sampled_from(Corner),
    )


def stocks():
    layers = st.lists(part(SpacerLayer, material=text(40)), min_size=1, max_size=MOST_LAYERS)
    return st.builds(
        Stock,
        spacer=layers.map(tuple),
        foil=part(FoilSheet, name=text(40)),
        ground=part(DiscGround) | part(RectangleGround),
    )


@st.composite
def designs(draw):
    """Any design that is taken."""
    feed = draw(dual_edges() | part(ProbeFeed, probe=probe_pins()))
    kinds = list(Polarisation)
    if isinstance(feed, DualEdge):
        kinds.remove(Polarisation.LINEAR)
    return Design(
        name=draw(text(60)),
        brief=draw(part(Brief, polarisation=st.sampled_from(kinds))),
        stock=draw(stocks()),
        element=draw(part(Element)),
        feed=feed,
        making=draw(part(Making, process=text(20))),
        revision=draw(text(12)),
        materials=tuple(draw(st.lists(part(OwnMaterial, name=text(40)), max_size=3))),
    )
