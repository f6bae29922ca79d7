"""The dielectric layers under a strip, from the ground up, and their averages."""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite

from core.errors import InputError, OutOfRangeError


@dataclass(frozen=True)
class Layer:
    """One dielectric layer between the ground plane and a strip.

    Attributes
    ----------
    thickness : float
        m, > 0.
    eps_r : float
        Relative permittivity, >= 1.
    loss_tangent : float
        0 to below 1.
    """

    thickness: float
    eps_r: float = 1.0
    loss_tangent: float = 0.0

    def __post_init__(self) -> None:
        _require(isfinite(self.thickness) and self.thickness > 0.0, self, "thickness", "> 0 m")
        _require(isfinite(self.eps_r) and self.eps_r >= 1.0, self, "eps_r", ">= 1")
        _require(0.0 <= self.loss_tangent < 1.0, self, "loss_tangent", "0 to below 1")


def total_thickness(layers: tuple[Layer, ...]) -> float:
    """Distance from the ground plane to the top of the stack.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up, at least one.

    Returns
    -------
    float
        m.

    Raises
    ------
    InputError
        If there is no layer.
    """
    if not layers:
        raise InputError(
            "no layer between ground plane and strip: give at least one",
            field="layers",
            value=layers,
            allowed="one or more layers",
        )
    return sum(layer.thickness for layer in layers)


def series_permittivity(layers: tuple[Layer, ...]) -> float:
    """Relative permittivity of the stack for a field straight across it.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up, at least one.

    Returns
    -------
    float
        Layers act as capacitors in series: total thickness over the sum of thickness over
        permittivity.

    Notes
    -----
    Exact for parallel plates much wider than the stack is thick; below a narrow strip the
    field fringes and `core.lines.multilayer.equivalent_layer` holds instead.
    """
    return total_thickness(layers) / sum(layer.thickness / layer.eps_r for layer in layers)


def series_loss_tangent(layers: tuple[Layer, ...]) -> float:
    """Loss tangent of the stack for a field straight across it.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up, at least one.

    Returns
    -------
    float
        Loss tangents weighted by the electric energy of each layer, which for one
        displacement through all of them goes as thickness over permittivity.
    """
    total_thickness(layers)
    weights = [layer.thickness / layer.eps_r for layer in layers]
    lost = sum(weight * layer.loss_tangent for weight, layer in zip(weights, layers, strict=True))
    return lost / sum(weights)


def _require(fact: bool, layer: Layer, field: str, allowed: str) -> None:
    """Refuse a layer whose `field` lies outside `allowed`."""
    if not fact:
        value = getattr(layer, field)
        raise OutOfRangeError(
            f"layer {field.replace('_', ' ')} is {value!r}: it must be {allowed}",
            field=field,
            value=value,
            allowed=allowed,
        )
