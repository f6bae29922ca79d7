"""What a card shows: rows of fields, as plain values."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from functools import cached_property, lru_cache
from typing import TYPE_CHECKING

from core.design import edit
from core.units import exact_text, format_quantity

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.design.edit import Parameter
    from core.design.model import Design
    from core.units import Quantity


@dataclass(frozen=True)
class Heading:
    """A line of words over the rows that follow."""

    label: str
    more: bool = False


@dataclass(frozen=True)
class Field:
    """A line to type in: a quantity with its unit, or text.

    Attributes
    ----------
    key : str
        Dotted name of the parameter.
    label, text, tip : str
    steps : bool
        Whether the up and down keys change it.
    more : bool
        Hidden until asked for.
    """

    key: str
    label: str
    text: str
    tip: str = ""
    steps: bool = False
    more: bool = False


@dataclass(frozen=True)
class Choice:
    """One of several; `typed` lets the user type one of their own.

    Attributes
    ----------
    options : tuple of (str, str)
        Text for the core, and words for people.
    """

    key: str
    label: str
    value: str
    options: tuple[tuple[str, str], ...]
    typed: bool = False
    more: bool = False
    tip: str = ""


@dataclass(frozen=True)
class Deed:
    """A button in a row: what it does, and an icon for its face where it is small."""

    key: str
    label: str
    icon: str = ""
    enabled: bool = True


@dataclass(frozen=True)
class Deeds:
    """A row of buttons under some words."""

    label: str
    deeds: tuple[Deed, ...]
    more: bool = False


Row = Heading | Field | Choice | Deeds


class CardState:
    """One folded card: what stands on it when it is closed, and its rows.

    Both are made when they are looked at: rows of a closed card never are.

    Attributes
    ----------
    id, title : str
    source : tuple
        All parts of the design that the card tells of: where these are the same, so is the card.
    """

    def __init__(
        self,
        name: str,
        title: str,
        source: tuple[object, ...],
        summary: Callable[[], str],
        rows: Callable[[], tuple[Row, ...]],
    ) -> None:
        self.id, self.title, self.source = name, title, source
        self._summary, self._rows = summary, rows

    def is_like(self, other: CardState) -> bool:
        """Whether another state is made of the very same parts."""
        pairs = zip(self.source, other.source, strict=True)
        return self.title == other.title and all(one is another for one, another in pairs)

    @cached_property
    def summary(self) -> str:
        return self._summary()

    @cached_property
    def rows(self) -> tuple[Row, ...]:
        return self._rows()


class Rows:
    """Makes rows out of a design's parameters, looked up once."""

    def __init__(self, design: Design) -> None:
        self.design = design

    @cached_property
    def _parameters(self) -> dict[str, Parameter]:
        return {one.key: one for one in edit.parameters(self.design)}

    def number(self, key: str, label: str = "", *, more: bool = False, tip: str = "") -> Field:
        """Row of a numeric parameter; the tip tells it to the last digit."""
        parameter = self._parameters[key]
        spec, value = parameter.spec, parameter.value
        if spec is None or isinstance(value, str | Enum):
            raise TypeError(f"{key} is no number")
        return Field(
            key,
            label or spec.label,
            _shown_text(value, spec.kind),
            tip=f"{tip}\n{_whole_text(value, spec.kind)}".strip(),
            steps=True,
            more=more,
        )

    def text(self, key: str, label: str, *, more: bool = False) -> Field:
        """Row of a parameter that is words."""
        return Field(key, label, str(self._parameters[key].value), more=more)


@lru_cache(1024)
def _shown_text(value: float, kind: Quantity) -> str:
    return format_quantity(value, kind)


@lru_cache(1024)
def _whole_text(value: float, kind: Quantity) -> str:
    return exact_text(value, kind)
