"""Rows of long validations, kept from run to run, and the tables in docs/validation.md."""

from __future__ import annotations

import json
import re
import sys
from hashlib import sha256
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping

ROOT = Path(__file__).parents[2]
_DOCUMENT = ROOT / "docs" / "validation.md"
_KEPT = ROOT / ".validation"


def kept_rows(script: str, cases: Mapping[str, Callable[[], dict]]) -> dict[str, dict]:
    """What each case yields: worked out now, or before by the same solver and script.

    With `--tables` on the command line the script may have changed since, the solver not.
    """
    sources = sorted((ROOT / "core" / "fullwave").glob("*.py"))
    stamp = {"solver": _digest(sources), "script": _digest([Path(script)])}
    checked = ("solver",) if "--tables" in sys.argv else ("solver", "script")
    rows = {}
    for name, work in cases.items():
        path = _KEPT / Path(script).stem / f"{name}.json"
        row = json.loads(path.read_text("utf-8")) if path.exists() else {}
        if any(row.get(key) != stamp[key] for key in checked):
            row = {**stamp, **work()}
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(json.dumps(row), "utf-8")
        rows[name] = row
        print(name, flush=True)
    return rows


def _digest(paths: Iterable[Path]) -> str:
    return sha256(b"".join(path.read_bytes() for path in paths)).hexdigest()[:16]


def write_table(name: str, head: Iterable[str], lines: Iterable[Iterable[str]]) -> None:
    """Put a table between its two marks in docs/validation.md."""
    columns = list(head)
    rows = [columns, ["---"] * len(columns), *(list(line) for line in lines)]
    write_block(name, "\n".join(f"| {' | '.join(row)} |" for row in rows))


def write_block(name: str, body: str) -> None:
    """Put text between its two marks in docs/validation.md."""
    text = _DOCUMENT.read_text("utf-8")
    marks = re.compile(rf"(<!-- table {name} -->\n).*?(<!-- end {name} -->)", re.DOTALL)
    changed, found = marks.subn(lambda old: f"{old[1]}\n{body}\n\n{old[2]}", text)
    if found != 1:
        raise SystemExit(f"docs/validation.md: no marks for {name}")
    _DOCUMENT.write_text(changed, "utf-8")


def percent(value: float, digits: int = 1) -> str:
    """A ratio less one, signed."""
    return f"{100.0 * (value - 1.0):+.{digits}f} %"
