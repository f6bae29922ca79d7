"""How wide text is, so that drawings can make room for it."""

from __future__ import annotations

import unicodedata
from typing import Final

CAP_HEIGHT: Final = 0.73
"""Height of a capital letter over the height of the letters' body."""

# Advance widths of the bundled typeface, thousandths of the body, from space to tilde.
_WIDTHS: Final = (
    *(318, 401, 460, 838, 636, 950, 780, 275, 390, 390, 500, 838, 318, 361, 318, 337),
    *(636, 636, 636, 636, 636, 636, 636, 636, 636, 636, 337, 337, 838, 838, 838, 531),
    *(1000, 684, 686, 698, 770, 632, 575, 775, 752, 295, 295, 656, 557, 863, 748, 787),
    *(603, 787, 695, 635, 611, 732, 684, 989, 685, 611, 685, 390, 337, 390, 838, 500),
    *(500, 613, 635, 550, 635, 615, 352, 635, 634, 278, 278, 579, 278, 974, 634, 612),
    *(635, 635, 411, 521, 392, 634, 592, 818, 592, 592, 525, 636, 337, 636, 838),
)
_NO_BREAK: Final = "\u00a0"
_WIDEST: Final = 1100  # for letters beyond ASCII: rather too much room than too little


def text_width(text: str, height: float) -> float:
    """Width of a line of text, or a little more.

    Parameters
    ----------
    text : str
    height : float
        Of the letters' body, m.

    Returns
    -------
    float
        m.
    """
    return sum(map(_width, text)) * height / 1000.0


def wrapped(text: str, height: float, width: float) -> list[str]:
    """Break text into lines that fit a width.

    Parameters
    ----------
    text : str
    height : float
        Of the letters' body, m.
    width : float
        m, at least a few letters.

    Returns
    -------
    list of str
        Broken at spaces, no-break ones excepted; words that are too long are broken too.
    """
    lines = [""]
    for word in text.split(" "):
        rest = word
        if lines[-1] and text_width(f"{lines[-1]} {word}", height) <= width:
            lines[-1] += f" {word}"
            continue
        if lines[-1]:
            lines.append("")
        while text_width(rest, height) > width and len(rest) > 1:
            fits = next(
                n
                for n in range(len(rest) - 1, 0, -1)
                if n == 1 or text_width(rest[:n], height) <= width
            )
            lines[-1] = rest[:fits]
            lines.append("")
            rest = rest[fits:]
        lines[-1] = rest
    return lines


def fitting_height(text: str, height: float, width: float) -> float:
    """Height at which a line of text fits a width.

    Parameters
    ----------
    text : str
    height, width : float
        Wanted height and room, m.

    Returns
    -------
    float
        The wanted height or less, m.
    """
    needed = text_width(text, height)
    return height if needed <= width else height * width / needed


def _width(letter: str) -> int:
    """Advance width of a letter, thousandths of the body."""
    plain = unicodedata.normalize("NFD", letter)[0].replace(_NO_BREAK, " ")  # É is as wide as E
    if " " <= plain <= "~":
        return _WIDTHS[ord(plain) - ord(" ")]
    return 0 if unicodedata.combining(letter) else _WIDEST
