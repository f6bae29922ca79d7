"""The two modes that a rectangular element is used in, as closed forms give them."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from typing import TYPE_CHECKING

from core.constants import VACUUM_PERMITTIVITY
from core.lines.stack import Layer, series_loss_tangent, series_permittivity, total_thickness
from core.live.element import QualityFactors, quality_factors
from core.live.resonance import Fringing, side_resonance

if TYPE_CHECKING:
    from core.layout.model import Foil


@dataclass(frozen=True)
class SideMode:
    """The half-wave mode along one side.

    Attributes
    ----------
    length, width : float
        The side along which the current flows, and the other one, m.
    frequency : float
        Of resonance, Hz.
    eps_eff : float
        Effective permittivity between its radiating edges.
    effective_length : float
        The side with its two end extensions, m.
    losses : QualityFactors
    """

    length: float
    width: float
    frequency: float
    eps_eff: float
    effective_length: float
    losses: QualityFactors

    @property
    def extension(self) -> float:
        """Apparent lengthening at each open edge, m."""
        return (self.effective_length - self.length) / 2.0


@dataclass(frozen=True)
class ElementModes:
    """A rectangular element as its two modes.

    Attributes
    ----------
    x, y : SideMode
        Along the width and along the length of the element.
    substrate : Layer
        One layer that stands for the stack: permittivity of the layers in series, loss
        weighted by their energy.
    """

    x: SideMode
    y: SideMode
    substrate: Layer

    @property
    def capacitance(self) -> float:
        """Between element and ground plane, fringing field included, F."""
        area = self.x.effective_length * self.y.effective_length
        eps_eff = sqrt(self.x.eps_eff * self.y.eps_eff)
        return VACUUM_PERMITTIVITY * eps_eff * area / self.substrate.thickness


def element_modes(
    width: float, length: float, stack: tuple[Layer, ...], foil: Foil
) -> ElementModes:
    """Work out the two modes of an element.

    Parameters
    ----------
    width, length : float
        Sides along x and y, m, > 0.
    stack : tuple of Layer
        From the ground up.
    foil : Foil

    Returns
    -------
    ElementModes

    Notes
    -----
    Effective sides go into the stored energy, physical ones into the size of the current that
    radiates [1]_: so the quality factors come nearest to the field solver's
    (docs/live-errors.md).

    References
    ----------
    .. [1] D. R. Jackson, "Microstrip antennas", in *Antenna Engineering Handbook*, 4th ed.,
       J. L. Volakis, ed., McGraw-Hill, 2007, ch. 7 (from memory).
    """
    substrate = Layer(
        total_thickness(stack), series_permittivity(stack), series_loss_tangent(stack)
    )
    along_x = side_resonance(width, length, stack)
    along_y = side_resonance(length, width, stack)
    ratio = _extended(width, along_x[1]) / _extended(length, along_y[1])
    return ElementModes(
        x=_side_mode(width, length, *along_x, ratio, substrate, foil),
        y=_side_mode(length, width, *along_y, 1.0 / ratio, substrate, foil),
        substrate=substrate,
    )


def _extended(length: float, fringing: Fringing) -> float:
    return length + 2.0 * fringing.extension


def _side_mode(
    length: float,
    width: float,
    frequency: float,
    fringing: Fringing,
    ratio: float,
    substrate: Layer,
    foil: Foil,
) -> SideMode:
    losses = quality_factors(
        width,
        length,
        substrate.thickness,
        substrate.eps_r,
        frequency,
        loss_tangent=substrate.loss_tangent,
        conductivity=foil.conductivity,
        roughness=foil.roughness,
        side_ratio=ratio,
    )
    return SideMode(length, width, frequency, fringing.eps_eff, _extended(length, fringing), losses)
