"""Stock, shapes and bends as people type them, and back."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from core.design.feed import LeadBend, Turn
from core.design.model import Element, Making, OwnMaterial
from core.design.stock import DiscGround, FoilSheet, Ground, RectangleGround, SpacerLayer
from core.errors import InputError
from core.materials.table import dielectrics, find, foils, folded, processes
from core.units import Quantity, exact_text, parse_quantity

if TYPE_CHECKING:
    from collections.abc import Iterable

_OWN_VALUES = re.compile(r"er\s*=\s*([^,]+)(?:,\s*tan\s*=\s*(.+))?", re.IGNORECASE)
_LAYER_FORM = "MATERIAL:THICKNESS, such as foam:6mm, FR-4:1.6mm or er=2.33,tan=0.001:1.5mm"


def spacer_layer(text: str, own: Iterable[OwnMaterial] = (), field: str = "spacer") -> SpacerLayer:
    """Read one spacer layer, "MATERIAL:THICKNESS".

    Parameters
    ----------
    text : str
        Material by name, or "er=2.33,tan=0.001", then a colon and the thickness.
    own : iterable of OwnMaterial
        The user's own materials; they go before the table's.
    field : str
        Dotted name, for messages.

    Returns
    -------
    SpacerLayer

    Raises
    ------
    InputError
        If the text is not of that form, or a value is out of range.
    """
    name, colon, thickness = text.rpartition(":")
    if not colon or not name.strip():
        raise InputError(
            f"{field}: {text[:40]!r} is no layer; accepted: {_LAYER_FORM}",
            field=field,
            value=text,
            allowed=_LAYER_FORM,
        )
    material = own_material(name.strip(), own, field)
    return SpacerLayer(
        material.name,
        parse_quantity(
            thickness, Quantity.LENGTH, field=f"{field} thickness", minimum=20e-6, maximum=0.2
        ),
        material.eps_r,
        material.loss_tangent,
    )


def own_material(text: str, own: Iterable[OwnMaterial] = (), field: str = "") -> OwnMaterial:
    """Material by name or by "er=…,tan=…", with its typical values.

    Parameters
    ----------
    text : str
    own : iterable of OwnMaterial
        The user's own materials; they go before the table's.
    field : str
        Dotted name, for messages.

    Returns
    -------
    OwnMaterial

    Raises
    ------
    InputError
        If the name is not known or a value is out of range.
    """
    values = _OWN_VALUES.fullmatch(text.strip())
    if values:
        eps_r = parse_quantity(
            values[1], Quantity.RATIO, field=f"{field} er", minimum=1.0, maximum=40.0
        )
        loss = parse_quantity(
            values[2] or "0", Quantity.RATIO, field=f"{field} tan", minimum=0.0, maximum=0.5
        )
        return OwnMaterial(text.strip().replace(" ", "")[:40], eps_r, loss)
    for material in own:
        if folded(material.name) == folded(text):
            return material
    found = find(dielectrics(), text, "material", field)
    return OwnMaterial(found.name, found.eps_r[1], found.loss_tangent[1])


def spacer(text: str, own: Iterable[OwnMaterial] = ()) -> tuple[SpacerLayer, ...]:
    """Read a whole spacer, layers from the ground up joined by "+".

    Parameters
    ----------
    text : str
        Such as "air:10mm + card:1mm".
    own : iterable of OwnMaterial

    Returns
    -------
    tuple of SpacerLayer

    Raises
    ------
    InputError
        If a layer cannot be read.
    """
    own = tuple(own)
    return tuple(spacer_layer(part, own, "stock.spacer") for part in text.split("+"))


def ground(text: str) -> Ground:
    """Read a ground plate, "disc:D" or "rect:WxL".

    Parameters
    ----------
    text : str

    Returns
    -------
    DiscGround or RectangleGround
        Centred under the element.

    Raises
    ------
    InputError
        If the text is neither.
    """
    kind, sizes = _shape(text, "stock.ground", {"disc": 1, "rect": 2})
    return DiscGround(sizes[0]) if kind == "disc" else RectangleGround(*sizes)


def element(text: str) -> Element:
    """Read an element, "rect:WxL": width along x, length along y.

    Parameters
    ----------
    text : str

    Returns
    -------
    Element

    Raises
    ------
    InputError
        If the text is no rectangle.
    """
    return Element(*_shape(text, "element", {"rect": 2})[1])


def foil(text: str) -> FoilSheet:
    """Foil of the stock table by name.

    Parameters
    ----------
    text : str

    Returns
    -------
    FoilSheet

    Raises
    ------
    InputError
        If the name is not known.
    """
    found = find(foils(), text, "foil", "stock.foil")
    return FoilSheet(found.name, found.thickness, found.conductivity)


def making(text: str, undercut: float = 0.0) -> Making:
    """Process of the stock table by name, with what it can hold.

    Parameters
    ----------
    text : str
    undercut : float
        Allowance to keep, m.

    Returns
    -------
    Making

    Raises
    ------
    InputError
        If the name is not known.
    """
    found = find(processes(), text, "process", "making.process")
    return Making(
        found.name,
        found.tolerance,
        found.narrowest_strip,
        found.narrowest_gap,
        found.edge_margin,
        undercut,
    )


def bends(text: str) -> tuple[LeadBend, ...]:
    """Read the bends of a lead-in, "12mm left, 20mm right"; "none" for a straight one.

    Parameters
    ----------
    text : str
        Distances from the tee, each with the way to turn when walking away from it.

    Returns
    -------
    tuple of LeadBend

    Raises
    ------
    InputError
        If a bend cannot be read.
    """
    if text.strip().casefold() in ("", "none"):
        return ()
    result = []
    for part in re.split(r"[,;](?!\d)", text):
        distance, _, way = part.strip().rpartition(" ")
        if way.casefold() not in ("left", "right") or not distance:
            raise InputError(
                f"feed.lead_in.bends: {part.strip()[:40]!r} is no bend; "
                "accepted: such as 12mm left, 20mm right; or none",
                field="feed.lead_in.bends",
                value=text,
                allowed="distances from the tee, each with left or right; or none",
            )
        at = parse_quantity(
            distance, Quantity.LENGTH, field="feed.lead_in.bends", minimum=0.0, maximum=2.0
        )
        result.append(LeadBend(at, Turn(way.casefold())))
    return tuple(result)


def bends_text(lead_bends: Iterable[LeadBend]) -> str:
    """Write bends as `bends` reads them.

    Parameters
    ----------
    lead_bends : iterable of LeadBend

    Returns
    -------
    str
    """
    texts = [
        f"{exact_text(bend.distance, Quantity.LENGTH)} {bend.turn.value}" for bend in lead_bends
    ]
    return ", ".join(texts) or "none"


def _shape(text: str, field: str, kinds: dict[str, int]) -> tuple[str, list[float]]:
    """Kind of shape and its sizes, out of "rect:30mmx40mm"."""
    name, _, rest = text.strip().partition(":")
    kind = {"rectangle": "rect", "circle": "disc"}.get(
        name.strip().casefold(), name.strip().casefold()
    )
    sizes = re.split(r"\s*[x×]\s*", rest.strip(), flags=re.IGNORECASE)
    if kind not in kinds or len(sizes) != kinds[kind]:
        forms = {"disc": "disc:DIAMETER", "rect": "rect:WIDTHxLENGTH"}
        allowed = " or ".join(forms[name] for name in kinds)
        raise InputError(
            f"{field}: {text[:40]!r} is not taken; accepted: {allowed}",
            field=field,
            value=text,
            allowed=allowed,
        )
    return kind, [
        parse_quantity(size, Quantity.LENGTH, field=field, minimum=0.5e-3, maximum=4.0)
        for size in sizes
    ]
