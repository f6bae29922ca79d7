"""What a Layout is made of: the one shape that drawings, exports and both engines share."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from core.findings import Finding
    from core.lines.stack import Layer
    from core.shapes.outline import Region

Point = tuple[float, float]


class Role(Enum):
    """What a piece is."""

    TOP_COPPER = "top copper"
    GROUND_COPPER = "ground copper"
    SPACER = "spacer"


@dataclass(frozen=True)
class Piece:
    """One named piece of the antenna, seen from the radiating side.

    Attributes
    ----------
    name : str
        Such as "element", "branches", "ground plate", "spacer 1 (card)".
    role : Role
    region : Region
        Plan outline, m.
    z : float
        Height of its underside above the ground plane, m.
    thickness : float
        m.
    material : str
        Name for the cut list.
    cut : bool
        False where there is nothing to cut, such as a layer of air.
    flaps : tuple of Region
        Foil beyond the fold lines that is cut with the piece and turned over its rim.
    """

    name: str
    role: Role
    region: Region
    z: float
    thickness: float
    material: str
    cut: bool = True
    flaps: tuple[Region, ...] = ()


@dataclass(frozen=True)
class Hole:
    """A round hole to drill or punch.

    Attributes
    ----------
    name : str
    x, y : float
        Centre, m.
    diameter : float
        m.
    through : tuple of str
        Names of the pieces that it goes through.
    """

    name: str
    x: float
    y: float
    diameter: float
    through: tuple[str, ...]


class MarkKind(Enum):
    """What a mark asks of the builder."""

    SCORE = "score"  # scratch or draw, so that pieces can be lined up
    FOLD = "fold"
    PAD = "pad"  # solder here


@dataclass(frozen=True)
class Mark:
    """A line on a piece that is not cut through.

    Attributes
    ----------
    name : str
    kind : MarkKind
    points : tuple of Point
        Open polyline, m; the one centre of a pad.
    piece : str
        Name of the piece that carries it.
    diameter : float
        Of a pad, m; 0 for lines.
    """

    name: str
    kind: MarkKind
    points: tuple[Point, ...]
    piece: str
    diameter: float = 0.0


@dataclass(frozen=True)
class Dimension:
    """A measured distance worth drawing.

    Attributes
    ----------
    field : str
        Dotted name of the parameter it shows; empty for a derived one.
    label : str
    start, end : Point
        m.
    value : float
        m; not always the distance between the ends (a strip's length follows its bends).
    offset : float
        Signed distance of the dimension line from start-end, to the left of that direction, m.
    """

    field: str
    label: str
    start: Point
    end: Point
    value: float
    offset: float


@dataclass(frozen=True)
class Segment:
    """Straight run of microstrip: width and length, m."""

    width: float
    length: float


@dataclass(frozen=True)
class Bend:
    """Right-angled corner in a strip of the given width (m), square or mitred."""

    width: float
    mitred: bool


Run = tuple[Segment | Bend, ...]


@dataclass(frozen=True)
class Landing:
    """Where a run meets the element.

    Attributes
    ----------
    x, y : float
        Middle of the contact, m; on a side for a branch, inside for a probe.
    width : float
        Width of the contact along the side, or the probe's diameter, m.
    side : str
        "x" on a side of constant x, "y" on a side of constant y, "" inside.
    """

    x: float
    y: float
    width: float
    side: str


@dataclass(frozen=True)
class Probe:
    """Pin from the ground plane up to the top copper.

    Attributes
    ----------
    x, y : float
        m.
    diameter : float
        m.
    """

    x: float
    y: float
    diameter: float


@dataclass(frozen=True)
class FeedNetwork:
    """The strips between probe and element, as lines.

    Attributes
    ----------
    probe : Probe
    trunk : Run
        From the probe to the tee; empty without a lead-in.
    tee_widths : tuple of float
        Widths that meet at the tee: trunk, first arm, second arm, m; empty without a tee.
    arms : tuple of Run
        From the tee to each landing, in the order of `landings`; one empty run for a probe
        that stands under the element.
    landings : tuple of Landing
    clearance : float
        Smallest distance between a strip that runs beside the element and the element, m;
        infinite without such a strip.
    over_ground : bool
        Whether every strip lies wholly over the ground plate.
    """

    probe: Probe
    trunk: Run
    tee_widths: tuple[float, ...]
    arms: tuple[Run, ...]
    landings: tuple[Landing, ...]
    clearance: float
    over_ground: bool


@dataclass(frozen=True)
class Port:
    """Where the coax joins.

    Attributes
    ----------
    name : str
    x, y : float
        m.
    diameter : float
        Of the pin, m.
    impedance : float
        Of the connector, ohm.
    """

    name: str
    x: float
    y: float
    diameter: float
    impedance: float


@dataclass(frozen=True)
class Foil:
    """Conductor of the top copper and the ground plate: m, S/m, rms roughness in m."""

    thickness: float
    conductivity: float
    roughness: float = 0.0


@dataclass(frozen=True)
class Layout:
    """The whole shape, made from a Design, that everything else reads.

    Attributes
    ----------
    pieces : tuple of Piece
        From the ground up.
    holes : tuple of Hole
    marks : tuple of Mark
    dimensions : tuple of Dimension
    ports : tuple of Port
    element_width, element_length : float
        Sides of the element along x and y, m.
    ground_reach : float
        Smallest distance from the element's edge to the ground plate's rim, m; negative where
        the element overhangs.
    stack : tuple of Layer
        Dielectric layers from the ground up.
    foil : Foil
    feed : FeedNetwork
    frequency : float
        The brief's frequency, at which patterns are computed, Hz.
    findings : tuple of Finding
        What cannot be made, and what to know.
    """

    pieces: tuple[Piece, ...]
    holes: tuple[Hole, ...]
    marks: tuple[Mark, ...]
    dimensions: tuple[Dimension, ...]
    ports: tuple[Port, ...]
    element_width: float
    element_length: float
    ground_reach: float
    stack: tuple[Layer, ...]
    foil: Foil
    feed: FeedNetwork
    frequency: float
    findings: tuple[Finding, ...]

    @property
    def height(self) -> float:
        """Height of the top copper above the ground plane, m."""
        return sum(layer.thickness for layer in self.stack)
