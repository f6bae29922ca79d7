"""The command line: picks a verb or opens the workbench, and tells a failure in one line.

Exit status: 0 done; 2 bad input, a usage error or a project file that cannot be read;
1 anything else. Nothing here, and no verb, loads Qt; only the workbench does.
"""

from __future__ import annotations

import importlib
import io
import os
import sys
import traceback
from contextlib import suppress
from importlib.metadata import version
from pathlib import Path
from typing import TYPE_CHECKING, Final, TextIO

from app.launch import StartError, open_workbench
from app.verbs.arguments import BadInputError, VerbParser, unknown_word
from app.verbs.output import table
from core.errors import CoreError, ExistingFileError, InputError, LayoutError

if TYPE_CHECKING:
    from collections.abc import Sequence

PROGRAM: Final = "kerfwave"
VERBS: Final = {
    "size": "from a brief and the stock at hand to a sized project",
    "show": "all parameters with units, what follows from them, and what can't be built",
    "set": "change parameters of a project by their dotted names",
    "readings": "what the antenna does over frequency, held against its brief",
    "export": "write template, artwork and cut list",
    "line": "one microstrip line: impedance and loss, or the width for an impedance",
}
_DONE, _FAILED, _BAD_INPUT, _INTERRUPTED = 0, 1, 2, 130


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command and return its exit status."""
    words = list(sys.argv[1:] if argv is None else argv)
    answer = io.StringIO()
    try:
        status = _dispatch(words, answer)
        return _print(answer.getvalue()) or status
    except KeyboardInterrupt:
        return _INTERRUPTED
    except Exception as error:
        name = f"{PROGRAM} {words[0]}" if words and words[0] in VERBS else PROGRAM
        status, message = _told(error)
        _complain(f"{name}: {message}")
        return status


def _dispatch(words: list[str], out: TextIO) -> int:
    first = words[0] if words else ""
    if first in VERBS:
        return _run_verb(first, words[1:], out)
    if first in ("-h", "--help"):
        out.write(_help())
    elif first == "--version":
        out.write(f"{PROGRAM} {version(PROGRAM)}\n")
    elif first.startswith("-"):
        raise BadInputError(unknown_word(first, ["--help", "--version"], "option"))
    elif not first or _is_meant_as_file(first):
        if len(words) > 1:
            raise BadInputError(
                f"{words[1][:40]!r} is one word too many; accepted: one project file"
            )
        return open_workbench(Path(first) if first else None)
    else:
        raise BadInputError(f"{unknown_word(first, VERBS, 'verb')} or a project file (.kerf)")
    return _DONE


def _run_verb(name: str, words: list[str], out: TextIO) -> int:
    # Only the verb that is asked for is loaded: a start of any other costs nothing.
    verb = importlib.import_module(f"app.verbs.{name}")
    parser = VerbParser(name, VERBS[name])
    verb.add(parser)
    if "-h" in words or "--help" in words:
        out.write(parser.format_help())
    else:
        verb.run(parser.read(words), out)
    return _DONE


def _is_meant_as_file(word: str) -> bool:
    with suppress(OSError, ValueError):  # too long for a name, for one
        return word.casefold().endswith(".kerf") or os.sep in word or Path(word).exists()
    return False


def _help() -> str:
    calls = [
        (PROGRAM, "open the workbench"),
        (f"{PROGRAM} FILE", "open the workbench with a project"),
        *((f"{PROGRAM} {name}", summary) for name, summary in VERBS.items()),
    ]
    return (
        "Kerfwave: lay out, export and correct hand-built and etched patch antennas.\n\n"
        f"{table(calls, '  ')}\n"
        f"{PROGRAM} VERB --help tells what a verb takes; {PROGRAM} --version the version.\n"
    )


def _told(error: Exception) -> tuple[int, str]:
    """Exit status and message of a failure."""
    if isinstance(error, ExistingFileError):
        return _BAD_INPUT, f"{error.path}: is there already; accepted: another name, or --replace"
    if isinstance(error, BadInputError | InputError | LayoutError):
        return _BAD_INPUT, str(error)
    if isinstance(error, CoreError | StartError):
        return _FAILED, str(error)
    if os.environ.get("KERFWAVE_TRACEBACK") == "1":
        traceback.print_exception(error)
    return _FAILED, (
        f"a fault of the program itself ({type(error).__name__}: {error}); "
        "KERFWAVE_TRACEBACK=1 shows where"
    )


def _print(text: str) -> int:
    """Print the whole answer; its exit status."""
    out = sys.stdout
    if out is None or not text:
        return _DONE
    if isinstance(out, io.TextIOWrapper):
        out.reconfigure(errors="backslashreplace")
    try:
        out.write(text)
        out.flush()
    except OSError as error:
        _drop_output()
        if not isinstance(error, BrokenPipeError):
            _complain(f"{PROGRAM}: standard output cannot be written ({error.strerror})")
        return _FAILED
    return _DONE


def _complain(message: str) -> None:
    """One line on standard error, without characters that a terminal would obey."""
    line = "".join(
        letter if letter.isprintable() else letter.encode("unicode_escape").decode()
        for letter in message
    )
    if sys.stderr is not None:
        sys.stderr.write(f"{line}\n")


def _drop_output() -> None:
    """Send what is still buffered nowhere, so that the interpreter's end stays quiet."""
    with suppress(OSError, ValueError):
        null = os.open(os.devnull, os.O_WRONLY)
        os.dup2(null, sys.stdout.fileno())
        os.close(null)
