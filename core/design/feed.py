"""How the element is fed: two branches with a delay between them, or a probe from behind.

Lengths are stored as the right-hand antenna is drawn: the first branch lands on the lower
side, the delayed one on the right side. The left-hand antenna is its mirror image in x.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

from core.design.specs import Checked, metres
from core.errors import InputError

MOST_BENDS = 4


class Corner(Enum):
    """How a strip turns a corner."""

    SQUARE = "square"
    MITRED = "mitred"


class Turn(Enum):
    """Which way a strip turns, walking away from the tee."""

    LEFT = "left"
    RIGHT = "right"


@dataclass(frozen=True)
class Branch(Checked):
    """One branch from the strip beside a side to that side.

    Attributes
    ----------
    landing : float
        Distance along the side from the shared corner to the branch's centre line, m.
    gap : float
        From the element's edge to the edge of the strip beside it, m.
    width : float
        m.
    """

    landing: float = metres("Landing", 0.0, 2.0)
    gap: float = metres("Gap", 20e-6, 0.5)
    width: float = metres("Width", 20e-6, 0.5)


@dataclass(frozen=True)
class LeadBend(Checked):
    """A right-angled bend in the lead-in: how far from the tee (m), and which way."""

    distance: float = metres("Bend distance", 0.0, 2.0)
    turn: Turn = Turn.LEFT


@dataclass(frozen=True)
class LeadIn(Checked):
    """Common strip from the tee to the probe; none where its length is 0.

    Attributes
    ----------
    length : float
        Along the centre line from the delay strip's centre line to the probe, m.
    width : float
        m.
    bends : tuple of LeadBend
        In the order met from the tee.
    """

    length: float = metres("Lead-in length", 0.0, 2.0, 0.0)
    width: float = metres("Lead-in width", 20e-6, 0.5, 3e-3)
    bends: tuple[LeadBend, ...] = ()

    def __post_init__(self) -> None:
        super().__post_init__()
        distances = [bend.distance for bend in self.bends]
        if len(distances) > MOST_BENDS or distances != sorted(set(distances)):
            raise InputError(
                f"feed.lead_in.bends: accepted: up to {MOST_BENDS} bends at rising distances",
                field="feed.lead_in.bends",
                value=distances,
                allowed=f"up to {MOST_BENDS} bends at rising distances from the tee",
            )


@dataclass(frozen=True)
class ProbePin(Checked):
    """The coax's inner conductor on its way up.

    Attributes
    ----------
    diameter : float
        m.
    pad : float
        Diameter of the copper round it where it is soldered, m.
    clearance : float
        Diameter of the hole in the ground copper, m.
    """

    diameter: float = metres("Probe diameter", 0.1e-3, 20e-3, 1.27e-3)
    pad: float = metres("Pad diameter", 0.2e-3, 60e-3, 3.0e-3)
    clearance: float = metres("Ground clearance diameter", 0.2e-3, 60e-3, 4.1e-3)

    def __post_init__(self) -> None:
        super().__post_init__()
        for name in ("pad", "clearance"):
            if getattr(self, name) <= self.diameter:
                raise InputError(
                    f"{name}: must be larger than the probe's diameter",
                    field=name,
                    value=getattr(self, name),
                    allowed="more than the probe's diameter",
                )


@dataclass(frozen=True)
class DualEdge(Checked):
    """Two branches on neighbouring sides, joined by a delay strip round the corner.

    Attributes
    ----------
    first, second : Branch
        On the lower side (not delayed) and on the right side (delayed).
    delay_width : float
        Of the strip that joins the branches, m.
    delay_length : float
        Of that strip along its centre line, from branch to branch, m.
    tee : float
        Where the lead-in or the probe meets the strip: distance from the first branch, m.
    lead_in : LeadIn
    probe : ProbePin
    corners : Corner
    """

    first: Branch
    second: Branch
    delay_width: float = metres("Delay strip width", 20e-6, 0.5)
    delay_length: float = metres("Delay strip length", 50e-6, 4.0)
    tee: float = metres("Tee position", 0.0, 4.0, 0.0)
    lead_in: LeadIn = field(default_factory=LeadIn)
    probe: ProbePin = field(default_factory=ProbePin)
    corners: Corner = Corner.SQUARE


@dataclass(frozen=True)
class ProbeFeed(Checked):
    """A probe from behind, under the element.

    Attributes
    ----------
    x, y : float
        From the element's centre, m.
    probe : ProbePin
    """

    x: float = metres("Probe x", -2.0, 2.0)
    y: float = metres("Probe y", -2.0, 2.0)
    probe: ProbePin = field(default_factory=ProbePin)


Feed = DualEdge | ProbeFeed
