"""Text as outlines of the bundled typeface, where real text would need a transform."""

from __future__ import annotations

from functools import cache
from importlib.resources import files
from io import BytesIO
from typing import Any, Final

from fontTools.pens.svgPathPen import SVGPathPen  # type: ignore[import-untyped]
from fontTools.pens.transformPen import TransformPen  # type: ignore[import-untyped]
from fontTools.ttLib import TTFont  # type: ignore[import-untyped]

from core.drawing.sheet import Anchor

_BEFORE: Final = {Anchor.START: 0.0, Anchor.MIDDLE: 0.5, Anchor.END: 1.0}


def font_bytes() -> bytes:
    """The bundled TrueType font.

    Returns
    -------
    bytes
    """
    return files("assets").joinpath("fonts", "DejaVuSans.ttf").read_bytes()


def upward_text_path(text: str, x_mm: float, y_mm: float, height_mm: float, anchor: Anchor) -> str:
    """SVG path of a line of text that reads upwards.

    Parameters
    ----------
    text : str
    x_mm, y_mm : float
        Point of the baseline that the anchor names, y down.
    height_mm : float
        Of the letters' body.
    anchor : Anchor

    Returns
    -------
    str
        Path data in mm, four decimals.
    """
    font = _font()
    glyphs, names = font.getGlyphSet(), font.getBestCmap()
    scale = height_mm / font["head"].unitsPerEm
    letters = [glyphs[names.get(ord(letter), ".notdef")] for letter in text]
    start = -_BEFORE[anchor] * sum(letter.width for letter in letters)
    pen = SVGPathPen(glyphs, ntos=lambda number: f"{number:.4f}".rstrip("0").rstrip("."))
    for letter in letters:
        # A quarter turn: along the baseline is up the sheet, above it is to the left.
        letter.draw(TransformPen(pen, (0.0, -scale, -scale, 0.0, x_mm, y_mm - start * scale)))
        start += letter.width
    path: str = pen.getCommands()
    return path


@cache
def _font() -> Any:  # noqa: ANN401 - untyped library
    return TTFont(BytesIO(font_bytes()))
