"""How words on the command line are read, the same way for every verb."""

from __future__ import annotations

import argparse
import difflib
import re
from enum import Enum
from pathlib import Path
from typing import TYPE_CHECKING, NoReturn, TypeVar

from core.design.spelled import spacer
from core.errors import FileError, InputError
from core.materials.table import folded
from core.storage.project import read_project
from core.units import parse_quantity

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Sequence

    from core.design.model import Design
    from core.design.stock import SpacerLayer
    from core.units import Quantity

_T = TypeVar("_T")
_E = TypeVar("_E", bound=Enum)
_NEGATIVE = re.compile(r"[-−][.,]?\d")
_LONGEST_QUOTE = 40


class BadInputError(Exception):
    """Words on the command line, or a file they name, that cannot be taken."""


class VerbParser(argparse.ArgumentParser):
    """Parser that tells a mistake in one line, and counts every word of a repeated option."""

    def __init__(self, verb: str, summary: str) -> None:
        super().__init__(
            prog=f"kerfwave {verb}",
            description=summary,
            allow_abbrev=False,
            formatter_class=argparse.RawDescriptionHelpFormatter,
        )

    def error(self, message: str) -> NoReturn:
        said = message.removeprefix("argument ")
        said = said.replace("the following arguments are required:", "left out:")
        if "accepted: " not in said:
            usage = " ".join(self.format_usage().split()).removeprefix("usage: ")
            said = f"{said}; accepted: {usage}"
        raise BadInputError(said)

    def read(self, words: Sequence[str]) -> argparse.Namespace:
        """Read the words of a verb, positional ones and options in any order."""
        found, extra = self.parse_known_intermixed_args(_joined_negatives(words))
        if extra and extra[0][:1] != "-":
            self.error(f"{extra[0][:_LONGEST_QUOTE]!r} is one word too many")
        if extra:
            options = [option for option in self._option_string_actions if option[:2] == "--"]
            self.error(unknown_word(extra[0], options, "option"))
        return found


def unknown_word(word: str, known: Iterable[str], what: str) -> str:
    """Message for a word that is none of those known, with the one that was meant."""
    known = list(known)
    close = difflib.get_close_matches(word.casefold(), known, n=1)
    hint = f" (did you mean {close[0]}?)" if close else ""
    quoted = repr(word[:_LONGEST_QUOTE])
    return f"{quoted} is no {what}{hint}; accepted: {', '.join(known)}"


def taken_by(read: Callable[[str], _T]) -> Callable[[str], _T]:
    """Reader for an option out of one that raises InputError; the words are kept."""

    def read_option(text: str) -> _T:
        try:
            return read(text)
        except InputError as error:
            raise argparse.ArgumentTypeError(str(error)) from None

    return read_option


def word(kind: type[_E]) -> Callable[[str], _E]:
    """Reader of one of a few words, however it is spelled."""

    def read(text: str) -> _E:
        for member in kind:
            if folded(str(member.value)) == folded(text):
                return member
        words = [str(member.value) for member in kind]
        raise argparse.ArgumentTypeError(unknown_word(text, words, "choice"))

    return read


def quantity(
    kind: Quantity, minimum: float | None = None, maximum: float | None = None
) -> Callable[[str], float]:
    """Reader of one quantity, for an option; SI."""
    return taken_by(lambda text: parse_quantity(text, kind, minimum=minimum, maximum=maximum))


def whole_number(text: str) -> int:
    """Read a whole number, for an option."""
    if not re.fullmatch(r"[+-]?[0-9]{1,9}", text.strip()):
        shown = repr(text[:_LONGEST_QUOTE])
        raise argparse.ArgumentTypeError(f"{shown} is no whole number; accepted: such as 201")
    return int(text)


def add_file(parser: VerbParser) -> None:
    """Give a verb the project file that it works on."""
    parser.add_argument("file", metavar="FILE", type=Path, help="project file (.kerf)")


def add_json(parser: VerbParser) -> None:
    """Give a verb the choice of one JSON object instead of text."""
    parser.add_argument("--json", action="store_true", help="print one JSON object, SI units")


def add_output(parser: VerbParser, help_text: str) -> None:
    """Give a verb a project file to write."""
    parser.add_argument("-o", "--output", metavar="FILE", type=Path, help=help_text)
    parser.add_argument("--replace", action="store_true", help="overwrite a file that is there")


def add_spacer(parser: VerbParser, help_text: str, *, required: bool = False) -> None:
    """Give a verb spacer layers, from the ground up; every word and repetition counts."""
    parser.add_argument(
        "--spacer",
        metavar="MATERIAL:THICKNESS",
        nargs="+",
        action="extend",
        type=taken_by(spacer),
        required=required,
        help=help_text,
    )


def layers(given: Iterable[tuple[SpacerLayer, ...]]) -> tuple[SpacerLayer, ...]:
    """Every layer that `add_spacer` collected."""
    return tuple(layer for some in given for layer in some)


def load(path: Path) -> Design:
    """Design in a project file; any trouble with it is bad input."""
    try:
        return read_project(path)
    except FileError as error:
        raise BadInputError(str(error)) from error


def _joined_negatives(words: Sequence[str]) -> list[str]:
    """Join "--width" "-3mm" to "--width=-3mm", which is no option but a value to judge."""
    joined: list[str] = []
    for word in words:
        if joined and joined[-1][:2] == "--" and "=" not in joined[-1] and _NEGATIVE.match(word):
            joined[-1] = f"{joined[-1]}={word}"
        else:
            joined.append(word)
    return joined
