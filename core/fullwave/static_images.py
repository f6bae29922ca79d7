"""Images of a charge and of a current on top of a layered stack, at zero frequency.

At zero frequency the kernels of a stack are sums of 1/(4 pi R) over the source and images below
it: exact, for any number of layers. They carry everything that is sharp near the source.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.fullwave.spectral import complex_permittivity
from core.lines.stack import total_thickness

if TYPE_CHECKING:
    from core.lines.stack import Layer

_SMALLEST: Final = 1e-9  # weight of an image that still counts
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
            reflected = _quotient(
                _sum({0: step}, reflected), _scaled(reflected, -step), deepest
            )
        eps, delay = above, round(2.0 * layer.thickness / grid)
        reflected = {at + delay: w for at, w in reflected.items() if at + delay <= deepest}
    seen = _quotient(
        _sum({0: 1.0}, reflected), _scaled(reflected, (eps - 1.0) / (eps + 1.0)), deepest
    )
    return tuple(
        Image(2.0 / (1.0 + eps) * weight, at * grid) for at, weight in sorted(seen.items())
    )


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
