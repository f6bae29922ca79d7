"""Where one side of an element resonates: the line under it, and how far its field fringes.

The length of a mode is the side along which its current flows, the width is the other side.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import pi, sqrt, tan
from typing import TYPE_CHECKING, Final

from scipy.optimize import brentq

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI
from core.lines.discontinuities import open_end_extension_kirschning
from core.lines.dispersion import dispersed_permittivity
from core.lines.multilayer import equivalent_layer
from core.lines.quasi_static import static_line
from core.lines.stack import series_permittivity, total_thickness
from core.live.edge import edge_pair
from core.live.element import resonant_frequency

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.lines.stack import Layer

_RATIOS: Final = (0.01, 1000.0)  # of width to height, that the line formulas take
_DENSEST: Final = 20.0  # permittivity that they take
_DEEPEST: Final = 0.42 * pi  # electrical depth from which the slab's rise is held: 0.21 wavelength
_STEPS: Final = 12  # of the search for a length: 1e-9 of it is left
_LEAST: Final = 0.02  # of half a wavelength: spacing of edges where extensions use it up
_LOWEST: Final = 1e-3  # of the highest frequency that a side can resonate at


@dataclass(frozen=True)
class Fringing:
    """Line under a side at one frequency.

    Attributes
    ----------
    eps_eff : float
        Effective relative permittivity.
    extension : float
        Apparent lengthening at each open edge, m.
    """

    eps_eff: float
    extension: float


def side_resonance(length: float, width: float, stack: tuple[Layer, ...]) -> tuple[float, Fringing]:
    """Frequency at which a side resonates, and the fringing there.

    Parameters
    ----------
    length : float
        Of the side, m, > 0.
    width : float
        Of the other side, m, > 0.
    stack : tuple of Layer
        From the ground up.

    Returns
    -------
    frequency : float
        Hz.
    fringing : Fringing

    Notes
    -----
    Half a wavelength of the line between two extended ends, both at the frequency that is
    looked for. Measured errors: docs/live-errors.md.
    """
    # The search comes back to its first frequencies.
    fringing = cache(_fringing_over_frequency(length, width, stack))

    def told(frequency: float) -> float:
        now = fringing(frequency)
        return resonant_frequency(length, now.eps_eff, now.extension)

    highest = SPEED_OF_LIGHT / (2.0 * length)
    first = told(highest)
    low, high = sorted((first, told(first)))
    if not told(low) - low >= 0.0 >= told(high) - high:
        low, high = _LOWEST * highest, highest
    frequency = float(brentq(lambda one: told(one) - one, low, high, rtol=1e-11, xtol=1e-3))
    return frequency, fringing(frequency)


def resonant_length(frequency: float, width: float, stack: tuple[Layer, ...]) -> float:
    """Side that resonates at a frequency.

    Parameters
    ----------
    frequency : float
        Hz, > 0.
    width : float
        Of the other side, m, > 0.
    stack : tuple of Layer
        From the ground up.

    Returns
    -------
    float
        m; may be 0 or negative where the extensions use up the half wavelength.
    """
    half_wave = SPEED_OF_LIGHT / (2.0 * frequency)
    length = half_wave
    for _ in range(_STEPS):  # a contraction: the edges hardly feel how far they are apart
        now = _fringing_over_frequency(max(length, _LEAST * half_wave), width, stack)(frequency)
        length = half_wave / sqrt(now.eps_eff) - 2.0 * now.extension
    return length


def _fringing_over_frequency(
    length: float, width: float, stack: tuple[Layer, ...]
) -> Callable[[float], Fringing]:
    """Effective permittivity and end extension of a strip as wide as a side.

    The line is that of Hammerstad and Jensen (1980) with the dispersion of Kirschning and
    Jansen (1982), layers joined as under any strip. Its end is the longer of two: on thin
    spacers that of Kuester, Johnk and Chang (1982), which knows of the wave that leaves, see
    `edge_pair`; on thick ones that of Kirschning, Jansen and Koster (1981), which knows how
    narrow the strip is, on a slab as thick as reacts to the fringing field as this one does,
    see `_slab_rise`.
    """
    height, across = total_thickness(stack), series_permittivity(stack)
    ratio = min(max(width / height, _RATIOS[0]), _RATIOS[1])
    eps_r = equivalent_layer(width, stack).eps_r
    line = static_line(ratio, min(eps_r, _DENSEST), 0.0)
    denser = (eps_r - 1.0) / (line.eps_r - 1.0) if eps_r > _DENSEST else 1.0
    charge = FREE_SPACE_IMPEDANCE * sqrt(line.eps_eff) / (line.impedance * line.eps_r * ratio)
    edges = edge_pair(ratio * height, length, height, eps_r, charge)

    def fringing(frequency: float) -> Fringing:
        dispersed = float(dispersed_permittivity(line, frequency * height))
        eps_eff = 1.0 + denser * (dispersed - 1.0)
        thick = height * _slab_rise(height, across, frequency)
        end = open_end_extension_kirschning(ratio * height, thick, eps_r, eps_eff)
        return Fringing(eps_eff, max(end, edges.extension(frequency)))

    return fringing


def _slab_rise(height: float, eps_r: float, frequency: float) -> float:
    """Rise with frequency of what a slab over ground reacts to a field along it.

    The reactance of a slab over ground towards a transverse magnetic field that runs along it
    as fast as light goes as tan(x)/x with x = k0 h sqrt(er - 1) (the surface impedance of R. E.
    Collin, *Field Theory of Guided Waves*, 2nd ed., 1991, ch. 11, from memory). A thin slab
    that is thicker by that rise reacts alike. To put it into an extension that was published
    for low frequency is a step of our own; there is no number in it to fit.
    """
    depth = TWO_PI / SPEED_OF_LIGHT * frequency * height * sqrt(eps_r - 1.0)
    depth = min(depth, _DEEPEST)
    return tan(depth) / depth if depth > 1e-4 else 1.0
