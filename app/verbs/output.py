"""How the verbs print: aligned lines for people, one JSON object for programs."""

from __future__ import annotations

import json
import math
from enum import Enum
from typing import TYPE_CHECKING, Any

import numpy as np

from core.units import exact_text

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from core.design.edit import Parameter


def table(rows: Iterable[tuple[str, ...]], indent: str = "") -> str:
    """Lines with their columns aligned."""
    rows = list(rows)
    columns = max((len(row) for row in rows), default=0)
    widths = [max(len(row[i]) for row in rows if i < len(row)) for i in range(columns)]
    lines = []
    for row in rows:
        cells = [cell.ljust(width) for cell, width in zip(row, widths, strict=False)]
        lines.append(f"{indent}{'  '.join(cells)}".rstrip())
    return "".join(f"{line}\n" for line in lines)


def value_text(parameter: Parameter) -> str:
    """Value of a parameter, written so that `kerfwave set` reads it back the same."""
    value, spec = parameter.value, parameter.spec
    if spec is not None and isinstance(value, float | int):
        return exact_text(value, spec.kind)
    return str(value.value) if isinstance(value, Enum) else str(value)


def json_text(record: Mapping[str, Any]) -> str:
    """One JSON object: complex numbers as [re, im], what is not finite as null."""
    return json.dumps(_plain(record), allow_nan=False) + "\n"


def _plain(value: Any) -> Any:  # noqa: ANN401
    if isinstance(value, dict):
        return {str(key): _plain(item) for key, item in value.items()}
    if isinstance(value, np.ndarray | np.generic):
        return _plain(value.tolist())
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    if isinstance(value, complex):
        return [_plain(value.real), _plain(value.imag)]
    if isinstance(value, float) and not math.isfinite(value):
        return None
    return value
