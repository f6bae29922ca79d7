"""The two modes that a rectangular element is used in, as closed forms give them."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from typing import TYPE_CHECKING

from core.constants import VACUUM_PERMITTIVITY
from core.lines.stack import Layer, series_loss_tangent, series_permittivity, total_thickness
from core.live.element import (
    QualityFactors,
    effective_permittivity,
    end_extension,
    quality_factors,
    resonant_frequency,
)

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
    Physical sides go into the quality factors, as published; with the effective area in the
    capacitance the edge resistance by radiation then agrees with that of two slots within
    12 % up to 0.06 wavelength of height, 20 % at 0.12 (docs/models/element.md).
    """
    substrate = Layer(
        total_thickness(stack), series_permittivity(stack), series_loss_tangent(stack)
    )
    return ElementModes(
        x=_side_mode(width, length, substrate, foil),
        y=_side_mode(length, width, substrate, foil),
        substrate=substrate,
    )


def _side_mode(length: float, width: float, substrate: Layer, foil: Foil) -> SideMode:
    height, eps_r = substrate.thickness, substrate.eps_r
    eps_eff = effective_permittivity(width / height, eps_r)
    extension = height * end_extension(width / height, eps_eff)
    frequency = resonant_frequency(length, eps_eff, extension)
    losses = quality_factors(
        width,
        length,
        height,
        eps_r,
        frequency,
        loss_tangent=substrate.loss_tangent,
        conductivity=foil.conductivity,
        roughness=foil.roughness,
    )
    return SideMode(length, width, frequency, eps_eff, length + 2.0 * extension, losses)
