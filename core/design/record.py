"""A Design as a plain record of dicts, lists, numbers and text, and back.

Numbers are SI. A record is read strictly: a key that is missing or not known is refused
with its dotted name, so that nothing is lost in silence.
"""

from __future__ import annotations

import dataclasses
import hashlib
import json
import types
import typing
from enum import Enum
from typing import Any

from core.design.feed import DualEdge, ProbeFeed
from core.design.model import Design
from core.design.stock import DiscGround, RectangleGround
from core.errors import InputError

_TAGS: dict[type, tuple[str, str]] = {
    DiscGround: ("shape", "disc"),
    RectangleGround: ("shape", "rectangle"),
    DualEdge: ("kind", "dual-edge"),
    ProbeFeed: ("kind", "probe"),
}


def to_record(design: Design) -> dict[str, Any]:
    """Plain record of a design.

    Parameters
    ----------
    design : Design

    Returns
    -------
    dict
        Ready for JSON.
    """
    record: dict[str, Any] = _plain(design)
    return record


def from_record(record: object) -> Design:
    """Design of a plain record.

    Parameters
    ----------
    record : object
        As `to_record` makes it.

    Returns
    -------
    Design

    Raises
    ------
    InputError
        If a key is missing, not known or holds a value that is not taken.
    """
    design: Design = _value(Design, record, "design")
    return design


def short_code(design: Design) -> str:
    """Six letters and digits that change whenever the design does.

    Parameters
    ----------
    design : Design

    Returns
    -------
    str
        Upper case, from the SHA-256 of the record.
    """
    text = json.dumps(to_record(design), sort_keys=True, separators=(",", ":"))
    return hashlib.sha256(text.encode()).hexdigest()[:6].upper()


def _plain(value: object) -> Any:  # noqa: ANN401
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        record: dict[str, Any] = {}
        if type(value) in _TAGS:
            key, tag = _TAGS[type(value)]
            record[key] = tag
        for field in dataclasses.fields(value):
            record[field.name] = _plain(getattr(value, field.name))
        return record
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    return value.value if isinstance(value, Enum) else value


def _value(kind: Any, raw: object, path: str) -> Any:  # noqa: ANN401
    """Value of the annotated kind out of a plain one."""
    if typing.get_origin(kind) in (typing.Union, types.UnionType):
        return _tagged(typing.get_args(kind), raw, path)
    if typing.get_origin(kind) is tuple:
        if not isinstance(raw, list):
            raise _refused(path, raw, "a list")
        item = typing.get_args(kind)[0]
        return tuple(_value(item, one, f"{path}.{i}") for i, one in enumerate(raw, 1))
    if dataclasses.is_dataclass(kind):
        return _part(typing.cast("type", kind), raw, path)
    if issubclass(kind, Enum):
        words = [member.value for member in kind]
        if raw not in words:
            raise _refused(path, raw, " or ".join(words))
        return kind(raw)
    if kind is float:
        if isinstance(raw, bool) or not isinstance(raw, int | float):
            raise _refused(path, raw, "a number")
        return float(raw)
    if not isinstance(raw, str):
        raise _refused(path, raw, "text")
    return raw


def _tagged(kinds: tuple[type, ...], raw: object, path: str) -> Any:  # noqa: ANN401
    """Part of a union, told apart by its tag."""
    key = _TAGS[kinds[0]][0]
    tag = raw.get(key) if isinstance(raw, dict) else None
    for kind in kinds:
        if _TAGS[kind][1] == tag:
            return _part(kind, raw, path)
    raise _refused(f"{path}.{key}", tag, " or ".join(_TAGS[kind][1] for kind in kinds))


def _part(kind: type, raw: object, path: str) -> Any:  # noqa: ANN401
    """Dataclass out of a dict; every key must be known and every field without default there."""
    if not isinstance(raw, dict):
        raise _refused(path, raw, "an object")
    hints = typing.get_type_hints(kind)
    fields = {field.name: field for field in dataclasses.fields(kind)}
    extra = set(raw) - set(fields) - ({_TAGS[kind][0]} if kind in _TAGS else set())
    if extra:
        raise _refused(f"{path}.{min(map(str, extra))[:40]}", None, f"only {', '.join(fields)}")
    values = {}
    for name, field in fields.items():
        if name in raw:
            values[name] = _value(hints[name], raw[name], f"{path}.{name}")
        elif field.default is dataclasses.MISSING and field.default_factory is dataclasses.MISSING:
            raise _refused(f"{path}.{name}", None, "a value; none is there")
    try:
        return kind(**values)
    except InputError as error:
        raise InputError(
            f"{path}: {error}", field=path, value=error.value, allowed=error.allowed
        ) from None


def _refused(path: str, raw: object, allowed: str) -> InputError:
    path = path.removeprefix("design.")
    return InputError(
        f"{path}: {str(raw)[:40]!r} is not taken; accepted: {allowed}",
        field=path,
        value=raw,
        allowed=allowed,
    )
