"""Rules and the square that a builder checks a printer with."""

from __future__ import annotations

from typing import Final

from core.drawing.sheet import Anchor, Area, Ink, Line, Purpose, Text
from core.shapes.outline import rectangle

RULE: Final = 100e-3
SQUARE: Final = 50e-3
INCH_RULE: Final = 4 * 25.4e-3

_MILLIMETRE: Final = 1e-3
_LETTERS: Final = 2.1e-3


def rule_across(x: float, y: float) -> list[Ink]:
    """Rule of 100 mm to the right of (x, y), ticks below it.

    Parameters
    ----------
    x, y : float
        m.

    Returns
    -------
    list of Ink
    """
    inks = [_line((x, y), (x + RULE, y))]
    for i in range(101):
        at = x + i * _MILLIMETRE
        inks.append(_line((at, y), (at, y - _tick(i))))
        if i % 10 == 0:
            text = f"{i} mm" if i == 100 else str(i)
            inks.append(Ink(Purpose.RULER, Text(at, y - 5.2e-3, text, _LETTERS, Anchor.MIDDLE)))
    return inks


def rule_along(x: float, y: float) -> list[Ink]:
    """Rule of 100 mm up from (x, y), ticks to its left.

    Parameters
    ----------
    x, y : float
        m.

    Returns
    -------
    list of Ink
    """
    inks = [_line((x, y), (x, y + RULE))]
    for i in range(101):
        at = y + i * _MILLIMETRE
        inks.append(_line((x, at), (x - _tick(i), at)))
        if i % 10 == 0 and i > 0:
            text = Text(x - 3.6e-3, at - 0.75e-3, str(i), _LETTERS, Anchor.END)
            inks.append(Ink(Purpose.RULER, text))
    return inks


def inch_rule(x: float, y: float) -> list[Ink]:
    """Rule of 4 inches to the right of (x, y), ticks below it.

    Parameters
    ----------
    x, y : float
        m.

    Returns
    -------
    list of Ink
    """
    inks = [_line((x, y), (x + INCH_RULE, y))]
    for i in range(33):
        at = x + i * INCH_RULE / 32
        tick = (2.6e-3 if i % 8 == 0 else 1.8e-3) if i % 4 == 0 else 1.1e-3
        inks.append(_line((at, y), (at, y - tick)))
        if i % 8 == 0:
            text = "4 in" if i == 32 else str(i // 8)
            inks.append(Ink(Purpose.RULER, Text(at, y - 5.2e-3, text, _LETTERS, Anchor.MIDDLE)))
    return inks


def check_square(x: float, y: float) -> list[Ink]:
    """Square of 50 mm with its lower left corner at (x, y).

    Parameters
    ----------
    x, y : float
        m.

    Returns
    -------
    list of Ink
    """
    middle = (x + SQUARE / 2, y + SQUARE / 2)
    return [
        Ink(Purpose.RULER, Area((rectangle(SQUARE, SQUARE, middle),))),
        Ink(Purpose.RULER, Text(middle[0], y + 1.2e-3, "50 mm", _LETTERS, Anchor.MIDDLE)),
        Ink(Purpose.RULER, Text(x + 2.9e-3, middle[1], "50 mm", _LETTERS, Anchor.MIDDLE, False)),
    ]


def _line(a: tuple[float, float], b: tuple[float, float]) -> Ink:
    return Ink(Purpose.RULER, Line((a, b)))


def _tick(millimetre: int) -> float:
    """Length of a tick of a millimetre rule."""
    if millimetre % 10 == 0:
        return 2.8e-3
    return 2.0e-3 if millimetre % 5 == 0 else 1.3e-3
