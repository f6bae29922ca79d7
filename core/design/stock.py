"""The stuff at hand: spacer layers, foil and ground plate."""

from __future__ import annotations

from dataclasses import dataclass

from core.design.specs import Checked, checked_text, metres, parameter
from core.errors import InputError
from core.units import Quantity

MOST_LAYERS = 8


@dataclass(frozen=True)
class SpacerLayer(Checked):
    """One layer between ground plane and foil; its electrical values are its own.

    Attributes
    ----------
    material : str
        Name, for people and the cut list.
    thickness : float
        m.
    eps_r, loss_tangent : float
    """

    material: str
    thickness: float = metres("Thickness", 20e-6, 0.2)
    eps_r: float = parameter("Permittivity", Quantity.RATIO, 1.0, 40.0)
    loss_tangent: float = parameter("Loss tangent", Quantity.RATIO, 0.0, 0.5, 0.0)

    def __post_init__(self) -> None:
        super().__post_init__()
        checked_text(self.material, "material", 40)


@dataclass(frozen=True)
class FoilSheet(Checked):
    """The conductor of element and ground plate.

    Attributes
    ----------
    name : str
    thickness : float
        m.
    conductivity : float
        S/m.
    """

    name: str
    thickness: float = metres("Foil thickness", 1e-6, 3e-3)
    conductivity: float = parameter("Conductivity", Quantity.CONDUCTIVITY, 1e5, 7e7, 58e6)

    def __post_init__(self) -> None:
        super().__post_init__()
        checked_text(self.name, "name", 40)


@dataclass(frozen=True)
class DiscGround(Checked):
    """Round ground plate: diameter and centre, m."""

    diameter: float = metres("Ground diameter", 4e-3, 4.0)
    offset_x: float = metres("Ground offset x", -1.0, 1.0, 0.0)
    offset_y: float = metres("Ground offset y", -1.0, 1.0, 0.0)


@dataclass(frozen=True)
class RectangleGround(Checked):
    """Rectangular ground plate: sides along x and y, and centre, m."""

    width: float = metres("Ground width", 4e-3, 4.0)
    length: float = metres("Ground length", 4e-3, 4.0)
    offset_x: float = metres("Ground offset x", -1.0, 1.0, 0.0)
    offset_y: float = metres("Ground offset y", -1.0, 1.0, 0.0)


Ground = DiscGround | RectangleGround


@dataclass(frozen=True)
class Stock:
    """Spacer layers from the ground up, foil and ground plate.

    Attributes
    ----------
    spacer : tuple of SpacerLayer
        One to eight, from the ground up.
    foil : FoilSheet
    ground : Ground
    """

    spacer: tuple[SpacerLayer, ...]
    foil: FoilSheet
    ground: Ground

    def __post_init__(self) -> None:
        if not 1 <= len(self.spacer) <= MOST_LAYERS:
            raise InputError(
                f"stock.spacer: {len(self.spacer)} layers; accepted: 1 to {MOST_LAYERS}",
                field="stock.spacer",
                value=len(self.spacer),
                allowed=f"1 to {MOST_LAYERS} layers",
            )

    @property
    def height(self) -> float:
        """Height of the foil above the ground plane, m."""
        return sum(layer.thickness for layer in self.spacer)
