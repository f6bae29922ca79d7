"""The strips between probe and element as two-ports. Shapes: n frequencies."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.layout.model import Bend, Segment
from core.lines.discontinuities import (
    BendCircuit,
    TeePlanes,
    mitred_bend,
    pin_inductance,
    square_bend,
    tee_planes,
)
from core.lines.microstrip import LineProperties, line_properties
from core.lines.multilayer import equivalent_layer
from core.lines.network import (
    TwoPort,
    cascade,
    line_two_port,
    series_two_port,
    shunt_two_port,
)
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.layout.model import FeedNetwork, Foil, Run
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_NOTHING = TwoPort(1.0, 0.0, 0.0, 1.0)


@dataclass(frozen=True, eq=False)
class Branches:
    """Two-ports of a feed.

    Attributes
    ----------
    trunk : TwoPort
        From the connector to the tee, the pin included.
    arms : tuple of TwoPort
        From the tee to each landing.
    """

    trunk: TwoPort
    arms: tuple[TwoPort, ...]


def build_branches(
    feed: FeedNetwork,
    stack: tuple[Layer, ...],
    foil: Foil,
    frequencies: Floats,
    extensions: tuple[float, ...],
) -> Branches:
    """Two-ports of all strips of a feed.

    Parameters
    ----------
    feed : FeedNetwork
    stack : tuple of Layer
        From the ground up.
    foil : Foil
    frequencies : (n,) ndarray of float
        Hz, > 0.
    extensions : tuple of float
        How far the element's field fringes beyond the side that each arm lands on, m.

    Returns
    -------
    Branches

    Notes
    -----
    Strips run along their centre lines; a corner takes half a strip's width off each
    neighbour and puts its bend there; a tee moves the start of its three strips. A change of
    width at a corner counts by these lengths alone. Where a strip lands the element's field
    does not fringe as if its side were open: the strip's own charge over that length is taken
    off, its current is not (a step of our own, see docs/live-errors.md). A probe under the
    element has its inductance in the element's cavity, one under a strip its own.
    """
    parts = {part for run in (feed.trunk, *feed.arms) for part in run}
    widths = {part.width for part in parts if isinstance(part, Segment)}
    lines = {
        width: line_properties(
            width,
            stack,
            frequencies,
            conductor_thickness=foil.thickness,
            conductivity=foil.conductivity,
            roughness=foil.roughness,
        )
        for width in widths
    }
    if not widths:
        return Branches(_NOTHING, (_NOTHING,) * len(feed.arms))
    height = total_thickness(stack)
    planes = _planes(feed, lines, height)
    omega = TWO_PI * frequencies
    bends = {part: _bend(part, stack, omega) for part in parts if isinstance(part, Bend)}
    pin = _reactive(omega * pin_inductance(feed.probe.diameter / 2.0, height))
    trunk = _two_ports(feed.trunk, 0.0, planes.side, lines, bends)
    starts = (planes.through_a, planes.through_b)
    arms = [
        _two_ports(arm, start, 0.0, lines, bends)
        for arm, start in zip(feed.arms, starts, strict=False)
    ]
    covered = [
        _covered(lines[landing.width], extension, omega)
        for landing, extension in zip(feed.landings, extensions, strict=True)
    ]
    return Branches(
        cascade(series_two_port(pin), *trunk),
        tuple(cascade(*arm, end) for arm, end in zip(arms, covered, strict=True)),
    )


def _covered(line: LineProperties, extension: float, omega: Floats) -> TwoPort:
    """Charge that a strip already holds where the element's open side would fringe, taken off."""
    per_length = np.sqrt(line.eps_eff) / (SPEED_OF_LIGHT * line.characteristic_impedance)
    return shunt_two_port(_reactive(-omega * per_length * extension))


def _planes(feed: FeedNetwork, lines: dict[float, LineProperties], height: float) -> TeePlanes:
    """What the tee takes off its strips, at the middle of the frequencies."""
    if not feed.tee_widths:
        return TeePlanes(0.0, 0.0, 0.0)
    side, first, second = (_middle(lines[width]) for width in feed.tee_widths)
    return tee_planes(height, first, second, side)


def _middle(line: LineProperties) -> tuple[float, float]:
    """Impedance and effective permittivity at the middle of the frequencies."""
    i = line.eps_eff.size // 2
    return float(line.characteristic_impedance[i]), float(line.eps_eff[i])


def _two_ports(
    run: Run,
    cut_start: float,
    cut_end: float,
    lines: dict[float, LineProperties],
    bends: dict[Bend, TwoPort],
) -> list[TwoPort]:
    """Two-ports of the parts of a run, without what is cut off its ends."""
    parts = []
    for i, part in enumerate(run):
        if isinstance(part, Bend):
            parts.append(bends[part])
            continue
        before = cut_start if i == 0 else _half_corner(run, i - 1, i - 2)
        after = cut_end if i == len(run) - 1 else _half_corner(run, i + 1, i + 2)
        parts.append(line_two_port(lines[part.width], part.length - before - after))
    return parts


def _half_corner(run: Run, corner: int, beyond: int) -> float:
    """Half the width of the strip on the other side of a corner; 0 where there is none."""
    return run[beyond].width / 2.0 if isinstance(run[corner], Bend) else 0.0


def _bend(bend: Bend, stack: tuple[Layer, ...], omega: Floats) -> TwoPort:
    """A corner as its inductances and capacitance."""
    substrate = equivalent_layer(bend.width, stack)
    formula = mitred_bend if bend.mitred else square_bend
    circuit: BendCircuit = formula(bend.width, substrate.thickness, substrate.eps_r)
    arm = series_two_port(_reactive(omega * circuit.arm_inductance))
    return cascade(arm, shunt_two_port(_reactive(omega * circuit.capacitance)), arm)


def _reactive(size: Floats) -> Complexes:
    return np.asarray(1j * size, dtype=np.complex128)
