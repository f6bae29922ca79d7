"""The project file: a design as JSON, with the version of its form.

The top level is ``{"kerfwave": 1, "design": {...}}``. A file is read strictly: what is
damaged, written by a newer version or not understood is refused in one line, so that
nothing is lost when it is saved again.
"""

from __future__ import annotations

import json
import math
import stat
from pathlib import Path
from typing import Any, Final

from core.design.model import Design
from core.design.record import from_record, to_record
from core.errors import CoreError, FileError, InputError, ProjectFormatError
from core.storage.atomic import write_atomically

_VERSION_KEY: Final = "kerfwave"
_DESIGN_KEY: Final = "design"
_SCHEMA: Final = 1
_LARGEST: Final = 5_000_000  # bytes; a design has a few thousand
_LONGEST_MESSAGE: Final = 400  # characters of what a damaged file says
_ACCEPTED: Final = "accepted: a Kerfwave project file (.kerf)"


class _DamageError(Exception):
    """Says in a few words what is wrong with the text of a project file."""


def read_project(path: Path) -> Design:
    """Read a project file.

    Parameters
    ----------
    path : Path

    Returns
    -------
    Design

    Raises
    ------
    FileError
        If there is no such file, or it cannot be read.
    ProjectFormatError
        If it is damaged, written by a newer version or no project file.
    """
    try:
        return _design(_contents(path))
    except _DamageError as damage:
        message = str(damage)
    except InputError as error:
        message = str(error)
    except RecursionError:
        message = "is damaged: nested too deeply"
    if len(message) > _LONGEST_MESSAGE:
        message = message[: _LONGEST_MESSAGE - 1] + "…"
    if "accepted: " not in message:
        message = f"{message}; {_ACCEPTED}"
    raise ProjectFormatError(f"{path}: {message}", path=path)


def write_project(path: Path, design: Design, *, replace: bool) -> None:
    """Write a project file, whole or not at all.

    Parameters
    ----------
    path : Path
    design : Design
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    ExistingFileError
        If there is a file already and it may not be replaced.
    FileError
        If it cannot be written.
    CoreError
        If it would not give the same design again. In each case what was there before is
        untouched.
    """
    write_atomically(path, _project_bytes(design), replace=replace)


def _project_bytes(design: Design) -> bytes:
    """What the file holds, read back before it is handed out."""
    record = {_VERSION_KEY: _SCHEMA, _DESIGN_KEY: to_record(design)}
    data = (json.dumps(record, indent=2, ensure_ascii=False) + "\n").encode()
    try:
        survived = _design(data) == design
    except (_DamageError, InputError):
        survived = False
    if not survived:
        raise CoreError("the project would not read back as it is; nothing was written")
    return data


def _contents(path: Path) -> bytes:
    """Bytes of a regular file of reasonable size."""
    try:
        mode = path.stat().st_mode
        if stat.S_ISDIR(mode):
            raise _DamageError("is a folder")
        if not stat.S_ISREG(mode):
            raise _DamageError("is a device or pipe")
        with path.open("rb") as stream:
            data = stream.read(_LARGEST + 1)
    except FileNotFoundError:
        raise FileError(f"{path}: there is no such file; {_ACCEPTED}", path=path) from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise FileError(f"{path}: cannot be read ({reason}); {_ACCEPTED}", path=path) from error
    if len(data) > _LARGEST:
        raise _DamageError(f"is larger than {_LARGEST // 1_000_000} MB")
    return data


def _design(data: bytes) -> Design:
    """Design in the bytes of a project file."""
    record = _parsed(data)
    if not isinstance(record, dict) or _VERSION_KEY not in record:
        raise _DamageError("is not a Kerfwave project")
    version = record[_VERSION_KEY]
    if isinstance(version, bool) or not isinstance(version, int) or version < 1:
        raise _DamageError(f'is damaged: "{_VERSION_KEY}" must be the version, {_SCHEMA}')
    if version > _SCHEMA:
        raise _DamageError(
            f"was written by a newer Kerfwave (form {version}); accepted: form {_SCHEMA}"
        )
    unknown = sorted(record.keys() - {_VERSION_KEY, _DESIGN_KEY})
    if unknown:
        raise _DamageError(f"is damaged: {unknown[0][:40]!r} is not known")
    if _DESIGN_KEY not in record:
        raise _DamageError("is damaged: it holds no design")
    return from_record(record[_DESIGN_KEY])


def _parsed(data: bytes) -> object:
    """JSON value, read more strictly than the library does by itself."""
    if not data.strip():
        raise _DamageError("is empty")
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise _DamageError(f"is not UTF-8 text (byte {error.start + 1})") from None
    try:
        return json.loads(
            text,
            object_pairs_hook=_unrepeated,
            parse_float=_finite,
            parse_int=_integer,
            parse_constant=_refused_constant,
        )
    except json.JSONDecodeError as error:
        where = f"line {error.lineno}, column {error.colno}"
        raise _DamageError(f"is damaged at {where}: {error.msg}") from None


def _unrepeated(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    record: dict[str, Any] = {}
    for key, value in pairs:
        if key in record:
            raise _DamageError(f"is damaged: {key[:40]!r} stands there twice")
        record[key] = value
    return record


def _finite(digits: str) -> float:
    value = float(digits)
    if not math.isfinite(value):
        raise _DamageError(f"is damaged: {digits[:40]} is too large a number")
    return value


def _integer(digits: str) -> int | float:
    # Past this length the digits are more than a float keeps, or than Python converts.
    return int(digits) if len(digits) < 16 else _finite(digits)


def _refused_constant(word: str) -> float:
    raise _DamageError(f"is damaged: {word} is no number")
