"""Far field over the sphere, worked out in no more directions than an antenna's size asks for."""

from __future__ import annotations

from math import ceil, pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.response.model import FarSphere

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]
    Field = Callable[[Floats, Floats], tuple[Complexes, Complexes]]

_MORE: Final = 9  # orders beyond the size in radians, after which nothing is left to see
_STEPS: Final = 90  # from boresight to straight behind, in what is handed out


def full_sphere(field: Field, frequency: float, reach: float) -> FarSphere:
    """Far field all round.

    Parameters
    ----------
    field : callable
        Components along theta and phi (d,) in directions theta (d,) and phi (d,).
    frequency : float
        Hz.
    reach : float
        Largest distance of the antenna from the origin, m.

    Returns
    -------
    FarSphere
        Every two degrees from boresight, or closer where the antenna is very large.

    Notes
    -----
    Along each great circle through boresight the components are Fourier series whose orders
    end a little beyond the antenna's size in radians: they are solved for at that many angles
    and summed at the others.
    """
    order = _order(frequency, reach)
    theta, phi = np.linspace(0.0, pi, order + 1), _azimuths(order)
    steps = max(_STEPS, order)
    parts = [
        _closed(part.reshape(order + 1, -1), order, steps)
        for part in field(np.repeat(theta, len(phi)), np.tile(phi, order + 1))
    ]
    return FarSphere(np.linspace(0.0, pi, steps + 1), phi, *parts)


def half_sphere(field: Field, frequency: float, reach: float, theta: Floats) -> FarSphere:
    """Far field above an endless ground.

    Parameters
    ----------
    field : callable
        As `full_sphere` takes it.
    frequency : float
        Hz.
    reach : float
        Largest horizontal distance of the antenna from the origin, m.
    theta : (a,) ndarray of float
        Angles from boresight, rad.

    Returns
    -------
    FarSphere
    """
    phi = _azimuths(_order(frequency, reach))
    e_theta, e_phi = field(np.repeat(theta, len(phi)), np.tile(phi, len(theta)))
    shape = len(theta), len(phi)
    return FarSphere(theta, phi, e_theta.reshape(shape), e_phi.reshape(shape))


def _order(frequency: float, reach: float) -> int:
    return ceil(TWO_PI * frequency / SPEED_OF_LIGHT * reach) + _MORE


def _azimuths(order: int) -> Floats:
    return np.asarray(TWO_PI * np.arange(2 * order) / (2 * order))


def _closed(part: Complexes, order: int, steps: int) -> Complexes:
    """A component at (order + 1, 2 order) directions, in so many steps to straight behind."""
    # Back up on the other side, where both unit vectors are turned round.
    up = -np.roll(part, order, axis=1)[-2:0:-1]
    waves = np.fft.fft(np.concatenate([part, up]), axis=0)
    wider = np.zeros((2 * steps, part.shape[1]), dtype=np.complex128)
    wider[:order], wider[-order:] = waves[:order], waves[-order:]
    return np.asarray(np.fft.ifft(wider, axis=0)[: steps + 1] * (steps / order))
