"""The element as a multi-port: a cavity between magnetic walls, summed over its modes.

The walls stand where the fringing field seems to end. Positions run from 0 to 1 between them
and are those of the physical sides, so that a contact on a side lies on a wall. Shapes: p
ports, k modes that are kept apart, n frequencies.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations_with_replacement
from math import ceil, exp, pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import TWO_PI

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.layout.model import Landing
    from core.live.modes import ElementModes

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

STRIP_FOR_ROUND: Final = exp(1.5)
"""Width of a flat strip of even current over the radius of the wire with its inductance."""

X_MODE: Final = 4
"""Place of the mode along x among the modes that are kept apart."""

Y_MODE: Final = 1
"""Place of the mode along y."""

_KEPT: Final = 4  # orders along each side kept apart: 0 to 3
_SUMMED: Final = 16  # orders along each side in the terms that fall fast: 1e-5 is left out
_PERIODS: Final = 10.0  # of a contact's own spectrum in the static sum: 2e-4 is left out
_MOST_TERMS: Final = 2048
_TINY: Final = 1e-9  # stands for 0 in sin(x)/x, where that is 1 to the last digit


@dataclass(frozen=True)
class Contact:
    """Where a port touches the cavity, in parts of its sides.

    Attributes
    ----------
    x, y : float
        Middle, 0 to 1.
    width_x, width_y : float
        Of the even current along x or along y; one of them is 0.
    """

    x: float
    y: float
    width_x: float
    width_y: float


@dataclass(frozen=True, eq=False)
class Cavity:
    """Impedance of the element between its ports, as a sum over modes.

    Attributes
    ----------
    shapes : (k, p) ndarray of float
        Voltage of each mode at each port, 1 in the corner x = y = 0.
    capacitances : (k,) ndarray of float
        Of each mode, seen in that corner, F.
    natural : (k,) ndarray of float
        Angular frequency of each mode, rad/s; 0 for the even charge.
    space_damping : (k,) ndarray of float
        Energy that a mode radiates into space a second over its energy, 1/s.
    other_damping : (k,) ndarray of float
        The same for surface waves and conductors, 1/s.
    loss_tangent : float
        Of the substrate.
    remainder : (3, p, p) ndarray of float
        All other modes together: their impedance over j omega, and what grows with omega
        squared and to the fourth; H, H s², H s⁴.
    """

    shapes: Floats
    capacitances: Floats
    natural: Floats
    space_damping: Floats
    other_damping: Floats
    loss_tangent: float
    remainder: Floats

    def mode_impedances(self, omega: Floats) -> Complexes:
        """Impedance of each mode in the corner.

        Parameters
        ----------
        omega : (n,) ndarray of float
            Angular frequency, rad/s, > 0.

        Returns
        -------
        (k, n) ndarray of complex
            Ohm.
        """
        damping = (self.space_damping + self.other_damping)[:, None]
        stored = self.natural[:, None] ** 2 - omega**2 * (1.0 - 1j * self.loss_tangent)
        detuning = stored + 1j * omega * damping
        return np.asarray(1j * omega / (self.capacitances[:, None] * detuning))

    def impedance(self, omega: Floats) -> Complexes:
        """Impedance matrix at the ports.

        Parameters
        ----------
        omega : (n,) ndarray of float
            Angular frequency, rad/s, > 0.

        Returns
        -------
        (n, p, p) ndarray of complex
            Ohm; symmetric.
        """
        ports = self.shapes.shape[1]
        products = self.shapes[:, :, None] * self.shapes[:, None, :]
        kept = self.mode_impedances(omega).T @ products.reshape(-1, ports * ports)
        powers = 1j * omega[:, None] * omega[:, None] ** (0, 2, 4)
        return np.asarray((kept + powers @ self.remainder.reshape(3, -1)).reshape(-1, ports, ports))

    def mode_voltages(self, omega: Floats, currents: Complexes) -> Complexes:
        """Voltage of each mode in the corner for given port currents.

        Parameters
        ----------
        omega : (n,) ndarray of float
            Angular frequency, rad/s, > 0.
        currents : (n, p) ndarray of complex
            Into the element at each port, A.

        Returns
        -------
        (k, n) ndarray of complex
            V.
        """
        return np.asarray(self.mode_impedances(omega) * (self.shapes @ currents.T))

    def space_powers(self, voltages: Complexes) -> Floats:
        """Power that each mode radiates into space.

        Parameters
        ----------
        voltages : (k, n) ndarray of complex
            Peak values, V.

        Returns
        -------
        (k, n) ndarray of float
            W.
        """
        conductances = self.capacitances * self.space_damping
        return np.asarray(0.5 * conductances[:, None] * np.abs(voltages) ** 2)


def build_cavity(contacts: tuple[Contact, ...], element: ElementModes) -> Cavity:
    """Sum the modes of an element once, for all frequencies.

    Parameters
    ----------
    contacts : tuple of Contact
        One for each of p ports.
    element : ElementModes

    Returns
    -------
    Cavity

    Notes
    -----
    Z_ij is the sum over m and n of chi phi_i phi_j j w / (C (w_mn² - w² + j w w_mn / Q_mn)),
    with C of the effective area and each phi averaged over its contact [1]_, [2]_. The two
    modes along the sides resonate and lose as their closed forms say; w_mn follows from them
    as from two sides of a box. The other low modes lose as the mean of these two: they are
    far from resonance. All higher modes are summed at once, in powers of w²; the slowest part
    of that sum is taken in closed form along one side, so that only the contact's own width
    limits it.

    References
    ----------
    .. [1] Y. T. Lo, D. Solomon and W. F. Richards, "Theory and experiment on microstrip
       antennas", IEEE Trans. Antennas Propag., vol. 27, no. 2, pp. 137-145, Mar. 1979.
    .. [2] T. Okoshi and T. Miyoshi, "The planar circuit: an approach to microwave integrated
       circuitry", IEEE Trans. Microwave Theory Tech., vol. 20, no. 4, pp. 245-252, Apr. 1972.
    """
    steps = TWO_PI * element.x.frequency, TWO_PI * element.y.frequency
    orders = np.arange(float(_SUMMED))
    single = np.where(orders > 0, 2.0, 1.0)
    weights = np.multiply.outer(single, single).ravel()
    natural = np.hypot.outer(orders * steps[0], orders * steps[1]).ravel()
    kept = np.logical_and.outer(orders < _KEPT, orders < _KEPT).ravel()
    shapes = np.array([_shape(contact, orders) for contact in contacts]).T
    space, other = _dampings(natural[kept], element)
    static = np.empty((len(contacts), len(contacts)))
    for i, j in combinations_with_replacement(range(len(contacts)), 2):
        static[i, j] = static[j, i] = _static_sum(contacts[i], contacts[j], *steps)
    return Cavity(
        shapes=shapes[kept],
        capacitances=element.capacitance / weights[kept],
        natural=natural[kept],
        space_damping=space,
        other_damping=other,
        loss_tangent=element.substrate.loss_tangent,
        remainder=_remainder(static, shapes, weights, natural, kept) / element.capacitance,
    )


def contact_of(landing: Landing, element: ElementModes) -> Contact:
    """Place a landing in the cavity.

    Parameters
    ----------
    landing : Landing
    element : ElementModes

    Returns
    -------
    Contact
        A contact that would hang over its side is moved onto it. A probe inside becomes a
        flat strip along x with the same self-inductance [1]_.

    References
    ----------
    .. [1] F. W. Grover, *Inductance Calculations*, Van Nostrand, 1946: geometric mean
       distance of a strip, its width times exp(-3/2).
    """
    width, length = element.x.length, element.y.length
    x, y = landing.x / width + 0.5, landing.y / length + 0.5
    if landing.side == "x":
        part = min(landing.width / length, 1.0)
        return Contact(_clipped(round(x), 0.0), _clipped(y, part), 0.0, part)
    if landing.side == "y":
        part = min(landing.width / width, 1.0)
        return Contact(_clipped(x, part), _clipped(round(y), 0.0), part, 0.0)
    strip = STRIP_FOR_ROUND * landing.width / 2.0
    return Contact(_clipped(x, 0.0), _clipped(y, 0.0), strip / element.x.effective_length, 0.0)


def _clipped(middle: float, width: float) -> float:
    """The middle nearest to a wanted one with which a contact stays on its side."""
    return min(max(middle, width / 2.0), 1.0 - width / 2.0)


def _shape(contact: Contact, orders: Floats) -> Floats:
    """Voltage of every mode, averaged over a contact; the order along y runs fastest."""
    across = _side_shape(contact.x, contact.width_x, orders)
    along = _side_shape(contact.y, contact.width_y, orders)
    return np.multiply.outer(across, along).ravel()


def _side_shape(position: float, width: float, orders: Floats) -> Floats:
    """Cosines along one side, averaged over a width."""
    cosines = np.cos(orders * (pi * position))
    if not width:
        return np.asarray(cosines)
    half = np.maximum(orders * (pi * width / 2.0), _TINY)
    return np.asarray(cosines * (np.sin(half) / half))


def _dampings(natural: Floats, element: ElementModes) -> tuple[Floats, Floats]:
    """Damping of the kept modes by radiation into space, and by all else but the substrate."""
    x, y = element.x.losses, element.y.losses
    space = np.full(natural.size, 0.5 / x.space + 0.5 / y.space)
    total = np.full(natural.size, 0.5 / x.total + 0.5 / y.total)
    for place, losses in ((X_MODE, x), (Y_MODE, y)):
        space[place], total[place] = 1.0 / losses.space, 1.0 / losses.total
    return natural * space, natural * (total - space - element.substrate.loss_tangent)


def _remainder(
    static: Floats, shapes: Floats, weights: Floats, natural: Floats, kept: NDArray[np.bool_]
) -> Floats:
    """All modes but the kept ones, in powers of omega squared, times the capacitance."""
    moving = kept & (natural > 0.0)
    counted = static - _products(shapes[moving], weights[moving] / natural[moving] ** 2)
    rest = ~kept
    growing = [_products(shapes[rest], weights[rest] / natural[rest] ** power) for power in (4, 6)]
    return np.stack([counted, *growing])


def _products(shapes: Floats, factors: Floats) -> Floats:
    return np.asarray(shapes.T @ (factors[:, None] * shapes))


def _static_sum(one: Contact, other: Contact, step_x: float, step_y: float) -> float:
    """Sum of chi phi phi / w_mn² over all modes but the even charge.

    The sum over n of chi cos(n pi y) cos(n pi y') / (a² + n² pi²) is
    cosh(a y<) cosh(a (1 - y>)) / (a sinh a), here written in falling exponentials.
    """
    if not one.width_x and not other.width_x:
        return _static_sum(_turned(one), _turned(other), step_y, step_x)
    narrowest = min(width for width in (one.width_x, other.width_x) if width)
    m = np.arange(1.0, min(_MOST_TERMS, ceil(2.0 * _PERIODS / narrowest)) + 1.0)
    width = max(one.width_y, other.width_y)
    apart, together = abs(one.y - other.y), one.y + other.y
    a = m * (pi * step_x / step_y)
    near = np.array([[apart], [together], [2.0 - together], [2.0 - apart]]) - width / 2.0
    terms = np.sum(np.exp(-a * near), axis=0) / (-a * np.expm1(-2.0 * a))
    if width:  # each exp(-a d) averaged over d in a width around the distance
        terms *= -np.expm1(-a * width) / (a * width)
    for contact in (one, other):
        terms *= _side_shape(contact.x, contact.width_x, m)
    even = 1.0 / 3.0 - (together + apart) / 2.0 + (together**2 + apart**2) / 4.0 + width**2 / 24.0
    return float((pi / step_y) ** 2 * (np.sum(terms) + even))


def _turned(contact: Contact) -> Contact:
    """The same contact with x and y exchanged."""
    return Contact(contact.y, contact.x, contact.width_y, contact.width_x)
