"""Papers, and where on a page the drawing goes."""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import Final

from core.drawing.sheet import Box

MARGIN: Final = 10e-3  # most printers leave an edge of 4 to 6.4 mm
RULE_STRIP: Final = 8e-3  # beside the window, for the rule along y
RULE_BELOW: Final = 7e-3  # below the window, for the rule along x
TITLE_HEIGHT: Final = 15e-3

_INCH: Final = 25.4e-3


@dataclass(frozen=True)
class Paper:
    """A size of paper: name, and width and length as it stands upright, m."""

    name: str
    width: float
    length: float

    @property
    def turned(self) -> Paper:
        """The same paper lying on its side."""
        return Paper(self.name, self.length, self.width)

    @property
    def box(self) -> Box:
        """The whole sheet, from its lower left corner."""
        return Box(0.0, 0.0, self.width, self.length)

    @property
    def window(self) -> Box:
        """Part of the sheet that the drawing may use."""
        return Box(
            MARGIN + RULE_STRIP,
            MARGIN + TITLE_HEIGHT + RULE_BELOW,
            self.width - MARGIN,
            self.length - MARGIN,
        )


PAPERS: Final = MappingProxyType(
    {
        "a4": Paper("A4", 210e-3, 297e-3),
        "a3": Paper("A3", 297e-3, 420e-3),
        "letter": Paper("Letter", 8.5 * _INCH, 11 * _INCH),
        "tabloid": Paper("Tabloid", 11 * _INCH, 17 * _INCH),
    }
)


def paper_round(width: float, length: float) -> Paper:
    """Paper whose window is exactly so large.

    Parameters
    ----------
    width, length : float
        Of the window, m.

    Returns
    -------
    Paper
    """
    return Paper(
        "own size",
        width + 2 * MARGIN + RULE_STRIP,
        length + 2 * MARGIN + TITLE_HEIGHT + RULE_BELOW,
    )
