"""What a thin dielectric spacer does to charges on and between its faces, as image charges.

Ground plate and top copper lie on the two faces of a stack of layers in air. The charges bound
in the layers act on the copper as images of its own charge: exact at zero frequency for layers
without end [1]_, and sent out with the free-space phase [2]_. Currents on the copper have no
images, because nothing is magnetic; but the spacer's own polarisation current, upright under the
copper, is as long as the spacer is high and as strong as the charge next to it wants it, and
acts on itself (here) and on the probe (`core.fullwave.upright`). Between charges on the faces
every layer counts; to and from the probe, and for upright currents, the stack is one layer. A
coax tail below the plate is as if the ground plate's face reached down: every spectrum seen
there fades further by e^(-k distance), so each image stands above it, as deep as before.

Depths are counted in e^(-k depth), the spectrum of a charge at that distance.

References
----------
.. [1] P. Silvester, "TEM wave properties of microstrip transmission lines", Proc. IEE, vol. 115,
   no. 1, pp. 43-48, Jan. 1968.
.. [2] Y. L. Chow, J. J. Yang, D. G. Fang, G. E. Howard, "A closed-form spatial Green's function
   for the thick microstrip substrate", IEEE Trans. Microw. Theory Tech., vol. 39, no. 3,
   pp. 588-592, 1991 (its quasi-dynamic images; from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.lines.stack import series_permittivity, total_thickness

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

FACES: Final = 4
"""Ground plate, probe, top copper, tail: in the order of `core.fullwave.mesh_model.Sheet`."""

_GROUND, _PROBE, _TOP, _TAIL = range(FACES)
_DEEPEST: Final = 6.0  # heights of the stack
_RATIO: Final = 2.0  # of the depths of neighbouring images
_FAINT: Final = 3e-4  # weight of an image that can be left out
_APART: Final = 0.3  # mean distance of two places in an upright current, in heights
_AIR: Final = 1e-3  # permittivity over 1 up to which a layer is air, like what is all around it
_RCOND: Final = 1e-7  # singular values of a fit of exponentials that still count

_Image = tuple[complex, float, float, float]
"""Weight, turn, shift and square."""
_Lists = dict[tuple[int, int], list[_Image]]


@dataclass(frozen=True, eq=False)
class SpacerImages:
    """Images of a charge on one sheet as another sheet sees them.

    A charge at height z' has an image of its weight at the height turn z' + shift.

    Attributes
    ----------
    direct : (4, 4) ndarray of complex
        Weight of the charge itself, by sheet of the observer and of the charge.
    starts : (4, 4) ndarray of int
        Where the images for each pair of sheets start in the arrays below.
    stops : (4, 4) ndarray of int
        Where they end.
    weights : (i,) ndarray of complex
    turns : (i,) ndarray of float
        1, -1 or 0.
    shifts : (i,) ndarray of float
        m.
    squares : (i,) ndarray of float
        What the weight loses per squared wavenumber, m².
    """

    direct: Complexes
    starts: Ints
    stops: Ints
    weights: Complexes
    turns: Floats
    shifts: Floats
    squares: Floats


def _is_air(layers: tuple[Layer, ...]) -> bool:
    """Whether a spacer is dry air (1.0006) or less, which is all around the copper as well."""
    return all(abs(layer.eps_r - 1.0) < _AIR and layer.loss_tangent == 0.0 for layer in layers)


def upright_arm(layers: tuple[Layer, ...]) -> float:
    """Length of the upright dipole that a charge on a face polarises, over that charge.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up; none for air.

    Returns
    -------
    float
        m; upwards for a charge on the ground plate, downwards for one on the top.

    Notes
    -----
    Seen from far away half of a charge's flux goes through the spacer, whose layers in series
    answer it with the share 1 - 1/eps_r.
    """
    if _is_air(layers):
        return 0.0
    return (1.0 - 1.0 / series_permittivity(layers)) * total_thickness(layers) / 2.0


def spacer_images(layers: tuple[Layer, ...]) -> SpacerImages:
    """Images of a stack of layers between ground plate and top copper.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up; none for air.

    Returns
    -------
    SpacerImages
    """
    if _is_air(layers):
        return _packed(np.ones((FACES, FACES), dtype=np.complex128), {})
    eps = np.array([layer.eps_r * (1.0 - 1j * layer.loss_tangent) for layer in layers])
    thickness = np.array([layer.thickness for layer in layers])
    height = float(thickness.sum())
    up, down = _face_images(eps, thickness), _face_images(eps[::-1], thickness[::-1])
    around = _probe_images(height / complex(np.sum(thickness / eps)), height)
    direct = np.full((FACES, FACES), around[0][0])
    direct[_TOP, _TOP], direct[_GROUND, _GROUND] = up[0][0][0], down[0][0][0]
    direct[_TOP, _GROUND] = direct[_GROUND, _TOP] = up[1][0][0]
    lists: _Lists = {(_PROBE, sheet): around[1:] for sheet in range(FACES)}
    lists |= {(sheet, _PROBE): around[1:] for sheet in range(FACES)}
    square, apart = upright_arm(layers) ** 2, _APART * height
    lists[_TOP, _TOP] = [
        *((weight, 0.0, height - depth, 0.0) for weight, depth in up[0][1:]),
        (0.0, 0.0, height - apart, square),
    ]
    lists[_GROUND, _GROUND] = [
        *((weight, 0.0, -depth, 0.0) for weight, depth in down[0][1:]),
        (0.0, 0.0, -apart, square),
    ]
    lists[_TOP, _GROUND] = [
        *((weight, 0.0, height - depth, 0.0) for weight, depth in up[1][1:]),
        (0.0, 0.0, height - apart, -square),
    ]
    lists[_GROUND, _TOP] = [
        *((weight, 0.0, depth, 0.0) for weight, depth in up[1][1:]),
        (0.0, 0.0, apart, -square),
    ]
    _add_tail(direct, lists, height)
    return _packed(direct, lists)


def _add_tail(direct: Complexes, lists: _Lists, height: float) -> None:
    """Add what a coax tail sees, and is seen with, to what the ground plate's face sees."""
    direct[_TAIL, :_TAIL] = direct[:_TAIL, _TAIL] = direct[_GROUND, :_TAIL]
    direct[_TAIL, _TAIL] = 1.0
    seen = {
        sheet: [_raised(one, height) for one in lists[_GROUND, sheet]] for sheet in range(_TAIL)
    }
    for sheet, images in seen.items():
        lists[_TAIL, sheet] = images
        lists[sheet, _TAIL] = [_seen_back(one, height, sheet) for one in images]
    own = direct[_GROUND, _GROUND] - 1.0
    lists[_TAIL, _TAIL] = [(own, -1.0, 0.0, 0.0), *lists[_GROUND, _TAIL]]


def _raised(image: _Image, height: float) -> _Image:
    """The same seen from below the plate: above it, as far as it was from the plate's face."""
    weight, turn, shift, square = image
    side = 1.0 if turn * height / 2.0 + shift >= 0.0 else -1.0
    return weight, side * turn, side * shift, square


def _seen_back(image: _Image, height: float, sheet: int) -> _Image:
    """The way back of an image that a tail sees: of the tail's charge, seen from a sheet.

    Both ways are as long: depth -z below the plate plus turn z' + shift above it.
    """
    weight, turn, shift, square = image
    if sheet == _GROUND:
        return weight, -1.0, shift, square
    if sheet == _TOP:
        return weight, 1.0, height - shift, square
    return weight, turn, -shift if turn > 0.0 else shift, square


def _packed(direct: Complexes, lists: _Lists) -> SpacerImages:
    starts, stops = np.zeros((2, FACES, FACES), dtype=np.int64)
    flat: list[_Image] = []
    for pair, images in lists.items():
        starts[pair] = len(flat)
        flat += images
        stops[pair] = len(flat)
    weights, turns, shifts, squares = np.array(flat, dtype=np.complex128).reshape(-1, 4).T
    heights = (np.ascontiguousarray(one.real) for one in (turns, shifts, squares))
    return SpacerImages(direct, starts, stops, np.ascontiguousarray(weights), *heights)


def _probe_images(eps: complex, height: float) -> list[_Image]:
    """Images in one layer that stands for them all, the charge itself first.

    To the second order in the reflection by a face; the rest is lumped at the next distance.
    """
    g = (eps - 1.0) / (eps + 1.0)
    images: list[_Image] = [
        (1.0 / eps, 1.0, 0.0, 0.0),
        (g / eps, -1.0, 0.0, 0.0),
        (g / eps, -1.0, 2.0 * height, 0.0),
        (g**2 / eps, 1.0, 2.0 * height, 0.0),
        (g**2 / eps, 1.0, -2.0 * height, 0.0),
    ]
    rest = (1.0 - sum(image[0] for image in images)) / 2.0
    if abs(rest) < _FAINT:
        return images
    return [*images, (rest, -1.0, 4.0 * height, 0.0), (rest, -1.0, -2.0 * height, 0.0)]


def _face_images(
    eps: Complexes, thickness: Floats
) -> tuple[list[tuple[complex, float]], list[tuple[complex, float]]]:
    """Weights and depths of a charge on the upper face, seen from there and from the lower.

    The spectra of the potential at zero frequency, that of the charge in air taken out, are
    sums of exponentials with depths from twice the thinnest layer up: weights at fixed depths
    are fitted to them. The first is exact, and all together are 1, as far away.
    """
    height, thinnest = float(thickness.sum()), float(thickness.min())
    count = int(np.ceil(np.log(_DEEPEST * height / thinnest) / np.log(_RATIO)))
    depths = 2.0 * thinnest * _RATIO ** np.arange(max(count, 2))
    k = np.append(0.0, np.geomspace(0.02 / height, 10.0 / thinnest, 80))
    spread = np.exp(-k[:, None] * depths)
    importance = np.append(100.0, np.ones(80))
    images = []
    for spectrum, nearest in zip(_face_spectra(eps, thickness, k), (0.0, height), strict=True):
        own, rest = spectrum[-1], spectrum[:-1] - spectrum[-1]
        weights = np.linalg.lstsq(importance[:, None] * spread, importance * rest, rcond=_RCOND)[0]
        listed = zip(weights.tolist(), (nearest + depths).tolist(), strict=True)
        kept = [(complex(own), nearest), *(one for one in listed if abs(one[0]) > _FAINT)]
        lost = 1.0 - sum(weight for weight, _ in kept)
        images.append([*kept[:-1], (kept[-1][0] + lost, kept[-1][1])])
    return images[0], images[1]


def _face_spectra(eps: Complexes, thickness: Floats, k: Floats) -> tuple[Complexes, Complexes]:
    """Potential at the upper and at the lower face over that in air, the last entry at k -> oo.

    Admittances and voltages of static lines; the way through the stack's height is left out.
    """
    decay = [np.append(np.exp(-2.0 * k * one), 0.0) for one in thickness]
    below = np.ones(len(k) + 1, dtype=np.complex128)
    passed = np.ones_like(below)
    for one, faded in zip(eps, decay, strict=True):
        reflected = (one - below) / (one + below)
        passed *= (1.0 + reflected) / (1.0 + reflected * faded)
        below = one * (1.0 - reflected * faded) / (1.0 + reflected * faded)
    upper = 2.0 / (1.0 + below)
    return upper, upper * passed
