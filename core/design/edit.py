"""Every parameter of a design by its dotted name: list, read, change.

An edit moves only what it names. Layers are counted from 1, from the ground up. Beside the
numbers there are names for whole parts, typed as on the command line: "stock.spacer",
"stock.ground", "stock.foil", "element", "feed", "feed.lead_in.bends", "making.process".
"""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from enum import Enum
from functools import lru_cache
from typing import TYPE_CHECKING, Any

from core.design import defaults, spelled
from core.design.model import Design, OwnMaterial
from core.design.specs import Spec
from core.design.stock import SpacerLayer
from core.errors import InputError, OutOfRangeError
from core.materials.table import folded
from core.units import check_quantity, parse_quantity

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

_SHOWN = 40


@dataclass(frozen=True)
class Parameter:
    """One parameter of a design.

    Attributes
    ----------
    key : str
        Dotted name.
    label : str
    value : float, str or Enum
    spec : Spec or None
        None for text and for a choice of words.
    """

    key: str
    label: str
    value: float | str | Enum
    spec: Spec | None


@lru_cache(8)  # asked several times for one design in a step of a drag
def parameters(design: Design) -> tuple[Parameter, ...]:
    """Every parameter of a design, in the order of the job.

    Parameters
    ----------
    design : Design

    Returns
    -------
    tuple of Parameter
    """
    return tuple(_walk(design, ""))


def value_at(design: Design, key: str) -> float | str | Enum:
    """Value of the parameter with a dotted name.

    Parameters
    ----------
    design : Design
    key : str

    Returns
    -------
    float, str or Enum

    Raises
    ------
    InputError
        If there is no such parameter.
    """
    return _parameter(design, key).value


def with_number(design: Design, key: str, value: float) -> Design:
    """Return a new design with one numeric parameter changed.

    Parameters
    ----------
    design : Design
    key : str
        Dotted name.
    value : float
        SI.

    Returns
    -------
    Design

    Raises
    ------
    InputError
        If there is no such number, or the value is out of range.
    """
    spec = _spec(design, key)
    if spec is None:
        raise _unknown(design, key)
    check_quantity(value, spec.kind, field=key, minimum=spec.minimum, maximum=spec.maximum)
    return _replaced_design(design, key, float(value))


def with_text(design: Design, key: str, text: str) -> Design:
    """Return a new design with one parameter, or one whole part, changed as typed.

    Parameters
    ----------
    design : Design
    key : str
        Dotted name; case, spaces, hyphens and underscores do not matter.
    text : str

    Returns
    -------
    Design

    Raises
    ------
    InputError
        If there is no such name, or the text is not taken.
    """
    key = _known_name(design, key.strip())
    whole = _whole_part(design, key, text)
    if whole is not None:
        return whole
    spec = _spec(design, key)
    if spec is not None:
        value = parse_quantity(
            text, spec.kind, field=key, minimum=spec.minimum, maximum=spec.maximum
        )
        return _replaced_design(design, key, value)
    old = value_at(design, key)
    if isinstance(old, Enum):
        return _replaced_design(design, key, _word(type(old), text, key))
    return _replaced_design(design, key, text.strip())


def with_texts(design: Design, changes: Iterable[tuple[str, str]]) -> Design:
    """Return a new design with several changes that together make sense, in any order.

    Parameters
    ----------
    design : Design
    changes : iterable of (str, str)
        Dotted names and texts. One that is refused is tried again after the others, so that
        "brief.polarisation=linear feed=probe" works either way round.

    Returns
    -------
    Design

    Raises
    ------
    InputError
        The first refusal that stands.
    """
    pending = list(changes)
    while pending:
        refused: list[tuple[str, str]] = []
        first: InputError | None = None
        for key, text in pending:
            try:
                design = with_text(design, key, text)
            except InputError as error:
                first = first or error
                refused.append((key, text))
        if first is not None and len(refused) == len(pending):
            raise first
        pending = refused
    return design


def _walk(part: Any, prefix: str) -> Iterator[Parameter]:  # noqa: ANN401
    """Parameters of a dataclass, depth first."""
    for field in dataclasses.fields(part):
        value = getattr(part, field.name)
        key = prefix + field.name
        if dataclasses.is_dataclass(value):
            yield from _walk(value, key + ".")
        elif isinstance(value, tuple):
            for number, item in enumerate(value, 1):
                yield from _walk(item, f"{key}.{number}.")
        else:
            yield _leaf(key, field, value)


def _known_name(design: Design, typed: str) -> str:
    """Dotted name of a parameter or a whole part that is typed in other letters."""
    wanted = folded(typed)
    for parameter in parameters(design):
        name = parameter.key
        while name:
            if folded(name) == wanted:
                return name
            name = name.rpartition(".")[0]
    return typed


def _spec(design: Design, key: str) -> Spec | None:
    return _parameter(design, key).spec


def _parameter(design: Design, key: str) -> Parameter:
    """The parameter with a dotted name, straight down to it."""
    part: Any = design
    field: dataclasses.Field[Any] | None = None
    for name in key.split("."):
        if isinstance(part, tuple):
            members, field = {str(number): item for number, item in enumerate(part, 1)}, None
        else:
            field = getattr(part, "__dataclass_fields__", {}).get(name)
            members = {} if field is None else {name: getattr(part, name)}
        if name not in members:
            raise _unknown(design, key)
        part = members[name]
    if field is None or dataclasses.is_dataclass(part) or isinstance(part, tuple):
        raise _unknown(design, key)
    return _leaf(key, field, part)


def _leaf(key: str, field: dataclasses.Field[Any], value: Any) -> Parameter:  # noqa: ANN401
    spec = field.metadata.get("spec")
    label = spec.label if spec else field.name.replace("_", " ").capitalize()
    return Parameter(key, label, value, spec)


def _replaced_design(design: Design, key: str, value: Any) -> Design:  # noqa: ANN401
    """Replace what stands at a dotted name; refusals carry that name."""
    try:
        changed: Design = _replaced(design, key.split("."), value)
    except InputError as error:
        if error.field and error.field.rpartition(".")[0]:
            raise
        raise type(error)(
            f"{key.rpartition('.')[0]}.{error}".lstrip("."),
            field=key,
            value=error.value,
            allowed=error.allowed,
        ) from None
    return changed


def _replaced(part: Any, path: list[str], value: Any) -> Any:  # noqa: ANN401
    if not path:
        return value
    head, rest = path[0], path[1:]
    if isinstance(part, tuple):
        i = int(head) - 1
        return (*part[:i], _replaced(part[i], rest, value), *part[i + 1 :])
    return dataclasses.replace(part, **{head: _replaced(getattr(part, head), rest, value)})


def _word(kind: type[Enum], text: str, key: str) -> Enum:
    for member in kind:
        if folded(str(member.value)) == folded(text.strip()):
            return member
    words = ", ".join(str(member.value) for member in kind)
    raise InputError(
        f"{key}: {text[:_SHOWN]!r} is not taken; accepted: {words}",
        field=key,
        value=text,
        allowed=words,
    )


def _whole_part(design: Design, key: str, text: str) -> Design | None:
    """Change a whole part typed in one go; None where the name is not that of one."""
    own = design.materials
    makers: dict[str, Any] = {
        "stock.spacer": lambda: spelled.spacer(text, own),
        "stock.ground": lambda: spelled.ground(text),
        "stock.foil": lambda: spelled.foil(text),
        "element": lambda: spelled.element(text),
        "feed": lambda: defaults.feed_named(
            text, design.element, design.making, design.stock.height, design.feed.probe
        ),
        "feed.lead_in.bends": lambda: spelled.bends(text),
    }
    if key == "feed.lead_in.bends" and not hasattr(design.feed, "lead_in"):
        raise _unknown(design, key)
    if key in makers:
        return _replaced_design(design, key, makers[key]())
    if key == "making.process":
        return dataclasses.replace(design, making=spelled.making(text, design.making.undercut))
    if key.startswith("materials."):
        return _with_own_material(design, key.removeprefix("materials."), text)
    if key.startswith("stock.spacer.") and key.count(".") <= 3:
        return _with_layer(design, key, text)
    return None


def _with_layer(design: Design, key: str, text: str) -> Design | None:
    """Change a spacer layer as a whole, or its material with the material's values."""
    number, _, rest = key.removeprefix("stock.spacer.").partition(".")
    layers = design.stock.spacer
    if rest not in ("", "material"):
        return None
    if not (number.isascii() and number.isdigit() and 1 <= int(number) <= len(layers)):
        raise OutOfRangeError(
            f"{key}: there is no such layer; accepted: stock.spacer.1 to {len(layers)}",
            field=key,
            allowed=f"1 to {len(layers)}",
        )
    if rest == "":
        layer = spelled.spacer_layer(text, design.materials, key)
    else:
        material = spelled.own_material(text, design.materials, key)
        thickness = layers[int(number) - 1].thickness
        layer = SpacerLayer(material.name, thickness, material.eps_r, material.loss_tangent)
    return _replaced_design(design, f"stock.spacer.{number}", layer)


def _with_own_material(design: Design, name: str, text: str) -> Design:
    """Add or change one of the user's own materials: materials.NAME=er=…,tan=…."""
    values = spelled.own_material(text, (), f"materials.{name}")
    material = OwnMaterial(name, values.eps_r, values.loss_tangent)
    others = tuple(one for one in design.materials if folded(one.name) != folded(name))
    return dataclasses.replace(design, materials=(*others, material))


def _unknown(design: Design, key: str) -> InputError:
    keys = [parameter.key for parameter in parameters(design)]
    head = key.split(".", maxsplit=1)[0]
    close = [one for one in keys if one.startswith(head + ".")] or keys
    allowed = ", ".join(close[:30])
    return InputError(
        f"{key[:_SHOWN]!r} is no parameter of this design; accepted: {allowed}",
        field=key,
        allowed=allowed,
    )
