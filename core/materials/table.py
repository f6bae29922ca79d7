"""The stock table in assets, loaded once and checked."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING, Any, TypeVar

from core.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Mapping

_T = TypeVar("_T")


@dataclass(frozen=True)
class Dielectric:
    """A spacer material.

    Attributes
    ----------
    name : str
    eps_r, loss_tangent : tuple of float
        Low, typical and high.
    source, verified : str
        Where the values come from, and how well that was seen.
    is_board : bool
        Comes clad with copper, as a board.
    melts : bool
        Melts under a soldering iron.
    drinks_water : bool
        Changes with damp.
    """

    name: str
    eps_r: tuple[float, float, float]
    loss_tangent: tuple[float, float, float]
    source: str
    verified: str
    is_board: bool = False
    melts: bool = False
    drinks_water: bool = False


@dataclass(frozen=True)
class FoilStock:
    """A conductor: thickness in m, conductivity in S/m."""

    name: str
    thickness: float
    conductivity: float
    source: str
    verified: str


@dataclass(frozen=True)
class Process:
    """A way to make the copper, with what it can hold.

    Attributes
    ----------
    name : str
    tolerance : float
        How far an edge strays, m.
    narrowest_strip, narrowest_gap : float
        m.
    edge_margin : float
        What the ground plate needs beyond the copper, m.
    vswr, axial_ratio_db : float
        Targets that such work can hold.
    source, verified : str
    """

    name: str
    tolerance: float
    narrowest_strip: float
    narrowest_gap: float
    edge_margin: float
    vswr: float
    axial_ratio_db: float
    source: str
    verified: str


def dielectrics() -> Mapping[str, Dielectric]:
    """Spacer materials by name, in the order of the table."""
    return _tables()[0]


def foils() -> Mapping[str, FoilStock]:
    """Conductors by name, in the order of the table."""
    return _tables()[1]


def processes() -> Mapping[str, Process]:
    """Processes by name, in the order of the table."""
    return _tables()[2]


def find(table: Mapping[str, _T], name: str, what: str, field: str = "") -> _T:
    """Entry of a table by name; case, spaces, hyphens and underscores do not matter.

    Parameters
    ----------
    table : mapping of str
    name : str
        As typed.
    what : str
        What is looked for, for the message: "material", "foil", "process".
    field : str
        Dotted name of the parameter.

    Raises
    ------
    InputError
        If there is no such entry; the message lists the names.
    """
    wanted = folded(name)
    for key, entry in table.items():
        if folded(key) == wanted:
            return entry
    names = ", ".join(table)
    raise InputError(
        f"{what} {name[:40]!r} is not known; known are {names}",
        field=field,
        value=name,
        allowed=names,
    )


def folded(name: str) -> str:
    """Name without case, spaces, hyphens and underscores, for comparing what people type."""
    return "".join(letter for letter in name.casefold() if letter not in " -_")


@cache
def _tables() -> tuple[dict[str, Dielectric], dict[str, FoilStock], dict[str, Process]]:
    record = tomllib.loads(files("assets").joinpath("materials.toml").read_text("utf-8"))
    return (
        {name: _dielectric(name, row) for name, row in record["dielectric"].items()},
        {name: FoilStock(name, **row) for name, row in record["foil"].items()},
        {name: Process(name, **row) for name, row in record["process"].items()},
    )


def _dielectric(name: str, row: dict[str, Any]) -> Dielectric:
    """Entry of the table, its low, typical and high values checked for order."""
    for key in ("eps_r", "loss_tangent"):
        low, typical, high = row[key]
        if not 0.0 <= low <= typical <= high:
            raise ValueError(f"materials.toml: {name}.{key} is not low <= typical <= high")
    return Dielectric(
        name,
        tuple(row["eps_r"]),
        tuple(row["loss_tangent"]),
        row["source"],
        row["verified"],
        row.get("board", False),
        row.get("heat_warning", False),
        row.get("drinks_water", False),
    )
