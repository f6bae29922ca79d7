"""What the window tells the user outside its panels: one table, shown in a bar."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Notice:
    """One row: the icon before the words, the words with places to fill, and its buttons."""

    icon: str
    text: str
    buttons: tuple[str, ...] = ()


NOTICES = {
    "open-failed": Notice("refusal", "Not opened. {reason}"),
    "save-failed": Notice(
        "refusal", "Not saved, and the file is as it was. {reason}", ("Save as…",)
    ),
    "export-failed": Notice("refusal", "Not written. {reason}"),
    "exported": Notice("met", "Written to {folder}: {names}."),
    "not-ours": Notice("refusal", "{name} was not taken; accepted: a project file ending in .kerf"),
    "recovered": Notice(
        "note", "{name} was not saved when Kerfwave last ended.", ("Restore", "Delete")
    ),
    "size-failed": Notice("refusal", "Nothing was sized. {reason}"),
    "settle-failed": Notice("refusal", "Nothing was settled. {reason}"),
    "crashed": Notice(
        "refusal",
        "Something went wrong in Kerfwave itself. Your design is safe in {copy}; "
        "what happened is written in {log}.",
    ),
    "hints": Notice(
        "note",
        "Drag the white handles, or type a length such as 1/16 in. Readings follow at once; "
        "Ctrl+Z takes anything back.",
    ),
}
