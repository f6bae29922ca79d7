"""Findings: small facts about a design that a person should read, kept as data."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum


class Severity(Enum):
    """How much a finding matters."""

    REFUSAL = "refusal"  # cannot be made
    WARNING = "warning"  # can be made, but read this first
    NOTE = "note"  # good to know


@dataclass(frozen=True)
class Finding:
    """One thing to know about a design.

    Attributes
    ----------
    code : str
        Stable, kebab-case, listed in docs/findings.md.
    severity : Severity
    message : str
        One sentence with the numbers in it.
    field : str
        Dotted name of the parameter that cures it; empty where none does.
    remedy : str
        What to do about it, in words.
    location : tuple of float or None
        (x, y) on the Mat, m.
    """

    code: str
    severity: Severity
    message: str
    field: str = ""
    remedy: str = ""
    location: tuple[float, float] | None = None


def has_refusal(findings: tuple[Finding, ...]) -> bool:
    """Tell whether any finding says that the design cannot be made."""
    return any(finding.severity is Severity.REFUSAL for finding in findings)
