"""Cautions that go with a way of working, from the table in assets."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable


@dataclass(frozen=True)
class Caution:
    """One caution: its topic and a line or two of text."""

    topic: str
    text: str


def cautions_for(occasions: Iterable[str]) -> tuple[Caution, ...]:
    """Cautions that apply, those for every build included.

    Parameters
    ----------
    occasions : iterable of str
        Name of the process, and the traits "heat" and "water" where the stock has them.

    Returns
    -------
    tuple of Caution
        In the order of the table.
    """
    wanted = {*occasions, "always"}
    return tuple(caution for when, caution in _table() if wanted & when)


@cache
def _table() -> tuple[tuple[frozenset[str], Caution], ...]:
    record = tomllib.loads(files("assets").joinpath("cautions.toml").read_text("utf-8"))
    return tuple(
        (frozenset(row["when"]), Caution(row["topic"], row["text"])) for row in record["caution"]
    )
