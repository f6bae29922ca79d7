"""The choice of an engine, and how far its answer can be trusted."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING, Any, Protocol

from app.verbs.arguments import VerbParser, unknown_word
from app.verbs.output import table
from core.engines import ENGINES, LIVE
from core.materials.table import folded

if TYPE_CHECKING:
    from collections.abc import Mapping

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
        type=_engine,
        default=default,
        help=f"what works it out: {' or '.join(ENGINES)}{left_out}",
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


def _engine(text: str) -> str:
    """Name of an engine, however it is spelled."""
    for name in ENGINES:
        if folded(name) == folded(text):
            return name
    raise argparse.ArgumentTypeError(unknown_word(text, ENGINES, "engine"))
