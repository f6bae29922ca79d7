"""The choice of an engine, and how far its answer can be trusted."""

from __future__ import annotations

import argparse
from functools import partial
from typing import TYPE_CHECKING, Any, Protocol

from app.verbs.arguments import VerbParser, unknown_word
from app.verbs.output import table
from core.engines import ENGINES, LEVELS, LIVE
from core.materials.table import folded

if TYPE_CHECKING:
    from collections.abc import Collection, Mapping

    from core.response.model import Reading, Trust


class Told(Protocol):
    """Anything that knows how far it can be trusted, such as a response."""

    @property
    def trust(self) -> Mapping[Reading, Trust]: ...


def add_engine(parser: VerbParser, default: str | None = LIVE, left_out: str = "") -> None:
    """Give a verb the choice of the engine that answers."""
    parser.add_argument(
        "--engine",
        metavar="NAME",
        type=partial(_known, names=ENGINES, what="engine"),
        default=default,
        help=f"what works it out: {' or '.join(ENGINES)}{left_out}",
    )


def add_mesh(parser: VerbParser) -> None:
    """Give a verb the choice of how fine the field solver's mesh is."""
    parser.add_argument(
        "--mesh",
        metavar="LEVEL",
        type=partial(_known, names=LEVELS, what="mesh"),
        help=f"mesh of the field solver: {', '.join(LEVELS)}; normal if left out",
    )


def trust_record(told: Told) -> dict[str, dict[str, Any]]:
    """How far each reading can be trusted, for programs."""
    return {
        reading.value: {
            "level": trust.level.value,
            "reason": trust.reason,
            "remedy": trust.remedy or None,
        }
        for reading, trust in told.trust.items()
    }


def trust_text(told: Told) -> str:
    """How far each reading can be trusted, those alike in one line."""
    alike: dict[Trust, list[str]] = {}
    for reading, trust in told.trust.items():
        alike.setdefault(trust, []).append(reading.replace("_", " "))
    rows = [
        (trust.level.value, f"{', '.join(names)}: {trust.reason}{_cure(trust)}")
        for trust, names in alike.items()
    ]
    return f"How far to trust this\n{table(rows, '  ')}"


def _cure(trust: Trust) -> str:
    return f"; {trust.remedy}" if trust.remedy else ""


def _known(text: str, names: Collection[str], what: str) -> str:
    """One of a few names, however it is spelled."""
    for name in names:
        if folded(name) == folded(text):
            return name
    raise argparse.ArgumentTypeError(unknown_word(text, names, what))
