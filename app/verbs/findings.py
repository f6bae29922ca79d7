"""What can't be built, as the verbs print it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from core.findings import Severity

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.findings import Finding

_WORDS: Final = {
    Severity.REFUSAL: "can't be built",
    Severity.WARNING: "warning",
    Severity.NOTE: "note",
}


def findings_record(findings: Iterable[Finding]) -> list[dict[str, Any]]:
    """Findings for programs."""
    return [
        {
            "code": one.code,
            "severity": one.severity.value,
            "message": one.message,
            "field": one.field,
            "remedy": one.remedy,
            "location_m": one.location,
        }
        for one in findings
    ]


def findings_text(findings: Iterable[Finding], indent: str = "") -> str:
    """Findings for people, the gravest first: what, what to do, and with which parameter."""
    order = list(_WORDS)
    lines = []
    for one in sorted(findings, key=lambda one: order.index(one.severity)):
        cure = f" {one.remedy}" if one.remedy else ""
        field = f" [{one.field}]" if one.field else ""
        lines.append(f"{indent}{_WORDS[one.severity]}: {one.message}{cure}{field}\n")
    return "".join(lines)
