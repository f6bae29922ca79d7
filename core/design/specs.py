"""How a parameter is declared: its label, its unit and its range, once, beside its name."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from typing import Any

from core.errors import InputError
from core.units import Quantity, check_quantity


@dataclass(frozen=True)
class Spec:
    """What a numeric parameter measures and what it may be.

    Attributes
    ----------
    label : str
        Name for people.
    kind : Quantity
    minimum, maximum : float
        Inclusive range, SI.
    """

    label: str
    kind: Quantity
    minimum: float
    maximum: float


def parameter(
    label: str, kind: Quantity, minimum: float, maximum: float, default: float | None = None
) -> Any:  # noqa: ANN401 - dataclasses.field is typed Any too
    """Dataclass field of a numeric parameter with its Spec.

    Parameters
    ----------
    label : str
    kind : Quantity
    minimum, maximum : float
        Inclusive range, SI.
    default : float, optional

    Returns
    -------
    dataclasses.Field
    """
    metadata = {"spec": Spec(label, kind, minimum, maximum)}
    if default is None:
        return dataclasses.field(metadata=metadata)
    return dataclasses.field(default=default, metadata=metadata)


def metres(label: str, minimum: float, maximum: float, default: float | None = None) -> Any:  # noqa: ANN401
    """Dataclass field of a length, m; see `parameter`."""
    return parameter(label, Quantity.LENGTH, minimum, maximum, default)


class Checked:
    """Base of dataclasses whose numeric parameters are checked against their Spec."""

    def __post_init__(self) -> None:
        for field in dataclasses.fields(self):  # type: ignore[arg-type]
            spec = field.metadata.get("spec")
            if spec is not None:
                check_quantity(
                    getattr(self, field.name),
                    spec.kind,
                    field=field.name,
                    minimum=spec.minimum,
                    maximum=spec.maximum,
                )


def checked_text(text: str, field: str, longest: int) -> str:
    """Refuse text that is too long or would break a line or a drawing.

    Parameters
    ----------
    text : str
    field : str
        Dotted name, for the message.
    longest : int
        Characters.

    Returns
    -------
    str
        The text, unchanged.

    Raises
    ------
    InputError
        If it holds control characters or is too long.
    """
    if not isinstance(text, str) or len(text) > longest or not text.isprintable():
        shown = str(text)[:40]
        raise InputError(
            f"{field}: {shown!r} is not taken; accepted: up to {longest} printable characters",
            field=field,
            value=text,
            allowed=f"up to {longest} printable characters",
        )
    return text
