"""Images of a charge and of a current on top of a layered stack, at zero frequency.

At zero frequency the kernels of a stack are sums of 1/(4 pi R) over the source and images below
it: exact, for any number of layers. They carry everything that is sharp near the source.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import TWO_PI
from core.fullwave.spectral import complex_permittivity
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_SMALLEST: Final = 1e-4  # weight of an image that still counts
_GRID: Final = 1e-12  # of the stack's thickness: depths are counted in it, so that equal ones meet

_Series = dict[int, complex]
"""Weight of exp(-k_rho depth) by depth, in grid steps."""


@dataclass(frozen=True)
class Image:
    """One term weight/(4 pi R), R² = distance² + depth².

    Attributes
    ----------
    weight : complex
        Share of the source.
    depth : float
        Below the source, m; 0 for the source itself.
    """

    weight: complex
    depth: float


def current_images(layers: tuple[Layer, ...]) -> tuple[Image, ...]:
    """Images of a horizontal current on top of a stack.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.

    Returns
    -------
    tuple of Image
        The current and its one image in the ground: dielectrics do not matter.
    """
    return (Image(1.0, 0.0), Image(-1.0, 2.0 * total_thickness(layers)))


def charge_images(layers: tuple[Layer, ...], depth: float) -> tuple[Image, ...]:
    """Images of a charge on top of a stack.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    depth : float
        Of the deepest image wanted, m, >= 0.

    Returns
    -------
    tuple of Image
        By rising depth, the charge itself first.

    Notes
    -----
    At zero frequency every interface reflects alike at all wavenumbers, and a layer of
    thickness d delays by exp(-2 k_rho d): the kernel is a power series of such delays, found
    by composing the reflections from the ground up. One layer gives the series of
    Silvester [1]_.

    References
    ----------
    .. [1] P. Silvester, "TEM wave properties of microstrip transmission lines", Proc. IEE,
       vol. 115, no. 1, pp. 43-48, Jan. 1968.
    """
    grid = _GRID * total_thickness(layers)
    deepest = round(depth / grid)
    reflected: _Series = {0: -1.0}  # by the ground plane
    eps = complex_permittivity(layers[0])
    for layer in layers:
        above = complex_permittivity(layer)
        step = (above - eps) / (above + eps)
        if step != 0.0:
            reflected = _quotient(_sum({0: step}, reflected), _scaled(reflected, -step), deepest)
        eps, delay = above, round(2.0 * layer.thickness / grid)
        reflected = {at + delay: w for at, w in reflected.items() if at + delay <= deepest}
    seen = _quotient(
        _sum({0: 1.0}, reflected), _scaled(reflected, (eps - 1.0) / (eps + 1.0)), deepest
    )
    return tuple(
        Image(2.0 / (1.0 + eps) * weight, at * grid) for at, weight in sorted(seen.items())
    )


def image_spectrum(images: Iterable[Image], k_rho: Complexes) -> Complexes:
    """Spectrum of a sum of images.

    Parameters
    ----------
    images : iterable of Image
    k_rho : (n,) ndarray of complex
        Horizontal wavenumber, 1/m, not 0.

    Returns
    -------
    (n,) ndarray of complex
        Sum of weight exp(-k_rho depth)/(2 k_rho), m.
    """
    total = np.zeros_like(k_rho)
    for image in images:
        total += image.weight * np.exp(-k_rho * image.depth)
    return total / (2.0 * k_rho)


def image_potential(images: Iterable[Image], distance: Floats) -> Complexes:
    """Sum of weight/(4 pi R) over images.

    Parameters
    ----------
    images : iterable of Image
        None at depth 0 where a distance is 0.
    distance : (d,) ndarray of float
        m.

    Returns
    -------
    (d,) ndarray of complex
        1/m.
    """
    total = np.zeros(len(distance), dtype=complex)
    for image in images:
        total += image.weight / (2.0 * TWO_PI * np.hypot(distance, image.depth))
    return total


def _quotient(numerator: _Series, feedback: _Series, deepest: int) -> _Series:
    """numerator/(1 - feedback); no term of `feedback` has depth 0."""
    total, term = numerator, numerator
    while term:
        term = _product(term, feedback, deepest)
        total = _sum(total, term)
    return total


def _product(one: _Series, other: _Series, deepest: int) -> _Series:
    product: _Series = {}
    for at, weight in one.items():
        for further, factor in other.items():
            if at + further <= deepest:
                product[at + further] = product.get(at + further, 0.0) + weight * factor
    return {at: weight for at, weight in product.items() if abs(weight) > _SMALLEST}


def _sum(one: _Series, other: _Series) -> _Series:
    return {at: one.get(at, 0.0) + other.get(at, 0.0) for at in one.keys() | other.keys()}


def _scaled(series: _Series, factor: complex) -> _Series:
    return {at: factor * weight for at, weight in series.items()}
