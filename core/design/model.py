"""A Design: the brief, the stock, the element, its feed and how it is made."""

from __future__ import annotations

from dataclasses import dataclass, field

from core.design.feed import DualEdge, Feed
from core.design.polarisation import Polarisation
from core.design.specs import Checked, checked_text, metres, parameter
from core.design.stock import Stock
from core.errors import InputError
from core.units import Quantity

LINEAR_DUAL_EDGE = (
    "feed: dual-edge branches make circular polarisation only; "
    "accepted: brief.polarisation rhcp or lhcp, or feed probe"
)


@dataclass(frozen=True)
class Brief(Checked):
    """What the antenna must do.

    Attributes
    ----------
    frequency : float
        Hz.
    polarisation : Polarisation
        Sense by IEEE Std 145, towards +z.
    impedance : float
        Of the connector, ohm.
    vswr, axial_ratio_db : float
        Largest that will do at the frequency.
    """

    frequency: float = parameter("Frequency", Quantity.FREQUENCY, 50e6, 60e9)
    polarisation: Polarisation = Polarisation.RHCP
    impedance: float = parameter("Connector", Quantity.RESISTANCE, 5.0, 500.0, 50.0)
    vswr: float = parameter("Match, VSWR", Quantity.RATIO, 1.05, 10.0, 2.0)
    axial_ratio_db: float = parameter("Axial ratio", Quantity.DECIBEL, 0.1, 10.0, 3.0)


@dataclass(frozen=True)
class Element(Checked):
    """Rectangular element: width along x, length along y, m."""

    width: float = metres("Width (x)", 0.5e-3, 3.0)
    length: float = metres("Length (y)", 0.5e-3, 3.0)


@dataclass(frozen=True)
class Making(Checked):
    """How the copper is cut, and what that can hold.

    Attributes
    ----------
    process : str
    tolerance : float
        How far a cut edge strays, m.
    narrowest_strip, narrowest_gap : float
        m.
    edge_margin : float
        What the ground plate needs beyond the copper, m.
    undercut : float
        Allowance that artwork is grown by on every side, m.
    turnover : float
        Foil of a rectangular ground plate that is folded back round its rim, m; none at 0.
    """

    process: str
    tolerance: float = metres("Tolerance", 0.0, 10e-3)
    narrowest_strip: float = metres("Narrowest strip", 0.0, 50e-3)
    narrowest_gap: float = metres("Narrowest gap", 0.0, 50e-3)
    edge_margin: float = metres("Margin of the ground plate", 0.0, 0.1)
    undercut: float = metres("Undercut allowance", 0.0, 2e-3, 0.0)
    turnover: float = metres("Foil turned over the rim", 0.0, 50e-3, 0.0)


@dataclass(frozen=True)
class OwnMaterial(Checked):
    """A spacer material of the user's own, kept in the project file."""

    name: str
    eps_r: float = parameter("Permittivity", Quantity.RATIO, 1.0, 40.0)
    loss_tangent: float = parameter("Loss tangent", Quantity.RATIO, 0.0, 0.5, 0.0)

    def __post_init__(self) -> None:
        super().__post_init__()
        checked_text(self.name, "name", 40)


@dataclass(frozen=True)
class Design:
    """Everything a builder decides; lengths only, nothing computed.

    Attributes
    ----------
    name, revision : str
        For the title block.
    brief : Brief
    stock : Stock
    element : Element
    feed : Feed
    making : Making
    materials : tuple of OwnMaterial
        Of the user's own.
    """

    name: str
    brief: Brief
    stock: Stock
    element: Element
    feed: Feed
    making: Making
    revision: str = "1"
    materials: tuple[OwnMaterial, ...] = field(default=())

    def __post_init__(self) -> None:
        checked_text(self.name, "name", 60)
        checked_text(self.revision, "revision", 12)
        if self.brief.polarisation is Polarisation.LINEAR and isinstance(self.feed, DualEdge):
            raise InputError(
                LINEAR_DUAL_EDGE,
                field="brief.polarisation",
                value=self.brief.polarisation,
                allowed="rhcp or lhcp with dual-edge branches",
            )
