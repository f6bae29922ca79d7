"""The choice of an engine, for the verbs that ask one."""

from __future__ import annotations

import argparse

from app.verbs.arguments import VerbParser, unknown_word
from core.engines import ENGINES
from core.materials.table import folded


def add_engine(parser: VerbParser) -> None:
    """Give a verb the choice of the engine that answers."""
    parser.add_argument(
        "--engine",
        metavar="NAME",
        type=_engine,
        default=next(iter(ENGINES)),
        help=f"what works it out: {' or '.join(ENGINES)}",
    )


def _engine(text: str) -> str:
    """Name of an engine, however it is spelled."""
    for name in ENGINES:
        if folded(name) == folded(text):
            return name
    raise argparse.ArgumentTypeError(unknown_word(text, ENGINES, "engine"))
