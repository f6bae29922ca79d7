"""What a card asks, as a new design: pure, so that a refusal changes nothing."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.design import edit
from core.design.stock import DiscGround
from core.errors import InputError
from core.units import Quantity, exact_text

if TYPE_CHECKING:
    from core.design.model import Design
    from core.design.stock import Ground, SpacerLayer

STEPS = {
    Quantity.LENGTH: 1e-4,
    Quantity.FREQUENCY: 1e6,
    Quantity.RESISTANCE: 1.0,
    Quantity.RATIO: 0.01,
    Quantity.DECIBEL: 0.1,
    Quantity.ANGLE: 0.01,
    Quantity.CONDUCTIVITY: 1e5,
}
"""What one press of an arrow key in a field changes, SI."""


def typed(design: Design, key: str, text: str) -> Design:
    """Return the design with one row changed as typed or chosen.

    Raises
    ------
    InputError
        If the text is not taken there.
    """
    if key == "ground-shape":
        return _with_ground(design, text)
    if key == "feed" and text == ("dual-edge" if hasattr(design.feed, "first") else "probe"):
        return design
    return edit.with_text(design, key, text)


def stepped(design: Design, key: str, steps: float) -> Design:
    """Return the design with one number moved by so many steps.

    Raises
    ------
    InputError
        If that leaves its range.
    """
    parameter = next(one for one in edit.parameters(design) if one.key == key)
    if parameter.spec is None or not isinstance(parameter.value, float):
        return design
    size = STEPS[parameter.spec.kind]
    # A whole number of hundredths of a step, so that 0.1 mm on 54 mm is 54.1 and no more.
    value = round((parameter.value / size + steps) * 100) / 100 * size
    return edit.with_text(design, key, exact_text(float(f"{value:.12g}"), parameter.spec.kind))


def done(design: Design, deed: str) -> Design:
    """Return the design after a button of a row: "layer.up.2" and its like.

    Raises
    ------
    InputError
        If there would be too many layers, or none.
    """
    _, act, number = deed.split(".")
    layers, i = list(design.stock.spacer), int(number) - 1
    if act == "add":
        layers.insert(i + 1, layers[i])
    elif act == "remove":
        del layers[i]
    else:
        other = i + (1 if act == "up" else -1)
        layers[i], layers[other] = layers[other], layers[i]
    return _with_layers(design, tuple(layers))


def label_of(design: Design, key: str) -> str:
    """Words for a parameter, for the undo menu."""
    words = {
        "ground-shape": "ground plate",
        "stock.foil": "foil",
        "feed": "feed",
        "making.process": "process",
        "feed.lead_in.bends": "bends",
    }
    if key in words:
        return words[key]
    for parameter in edit.parameters(design):
        if parameter.key == key:
            return parameter.label[:1].lower() + parameter.label[1:]
    return key.rpartition(".")[2]


def refusal_text(error: InputError) -> str:
    """Message of a refusal without the dotted name, which the field beside it tells."""
    message = str(error)
    return message.removeprefix(f"{error.field}: ") if error.field else message


def _with_layers(design: Design, layers: tuple[SpacerLayer, ...]) -> Design:
    return replace(design, stock=replace(design.stock, spacer=layers))


def _with_ground(design: Design, shape: str) -> Design:
    """Ground plate of the other shape and much the same size, where it was."""
    old: Ground = design.stock.ground
    if isinstance(old, DiscGround):
        if shape == "disc":
            return design
        text = f"rect:{old.diameter * 1e3!r}mmx{old.diameter * 1e3!r}mm"
    elif shape == "rect":
        return design
    else:
        text = f"disc:{max(old.width, old.length) * 1e3!r}mm"
    changed = edit.with_text(design, "stock.ground", text)
    ground = replace(changed.stock.ground, offset_x=old.offset_x, offset_y=old.offset_y)
    return replace(changed, stock=replace(changed.stock, ground=ground))
