"""The moment matrix of a mesh: what stays the same at every frequency, filling and solving.

Electric-field integral equation in mixed potentials, tested with the basis functions
themselves (Galerkin); time factor exp(+j omega t).

Shapes: t triangles, n functions, p near pairs.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.fullwave.basis import Basis
from core.fullwave.quadrature import COARSE_RULE, triangle_rule
from core.fullwave.spacer_images import FACES, spacer_images
from core.fullwave.symmetric import solve_symmetric
from core.fullwave.workers import WORKERS

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from core.fullwave.spacer_images import SpacerImages
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_BATCH = 4000  # pairs to a task
_ALONE = 700  # unknowns up to which threads would wait for each other longer than they work
# By kind of pair: the fill's own, apart, touching or nearly, sharing an edge, the triangle
# itself; and touching where little depends on it.
_APART, _TOUCHING, _FAINTLY = 1, 2, 5
_FAINT = 0.1  # weight of such an image: three points do it to 1e-3 of the reflection coefficient
_NEAR_IMAGE = 1.5  # distance of middles, in sums of radii, up to which an image is near
_FLAT = 0.3  # height of an image, in the same, under which its source is integrated exactly
_NOTHING = 1e-2  # weight of an image whose points will do however near it is
_RULES: Final = (COARSE_RULE, *(triangle_rule(order) for order in (3, 3, 5, 6)), COARSE_RULE)


@dataclass(frozen=True, eq=False)
class Moments:
    """What a mesh in free space needs at every frequency.

    Attributes
    ----------
    basis : Basis
    geometry, near, overlaps, functions
        As `core.fullwave.compiled.add_free_space` takes them.
    runs : (r, 3) ndarray of int
        First and past last triangle and sheet of each run of triangles of one sheet.
    images : SpacerImages
    colours : tuple of (...,) ndarray of int
        All triangles, shared out so that no two of a colour have a function in common.
    """

    basis: Basis
    geometry: tuple[Floats, Floats, Floats]
    near: tuple[Ints, Ints, Floats, Complexes]
    runs: Ints
    images: SpacerImages
    overlaps: Floats
    functions: tuple[Ints, Ints, Floats, Ints, Ints, Ints]
    colours: tuple[Ints, ...]


def build_moments(
    basis: Basis, triangles: Ints, sheets: Ints, layers: tuple[Layer, ...] = ()
) -> Moments:
    """Work out what does not change with frequency.

    Parameters
    ----------
    basis : Basis
    triangles : (t, 3) ndarray of int
        Vertices of the mesh's triangles.
    sheets : (t,) ndarray of int
        `core.fullwave.mesh_model.Sheet` of each.
    layers : tuple of Layer
        Between ground plate and top copper, from the ground up; none for air.

    Returns
    -------
    Moments
    """
    corners = basis.corners
    points = np.einsum("ic,tcx->xit", COARSE_RULE[:, :3], corners)
    geometry = (
        np.ascontiguousarray(points),
        np.ascontiguousarray(corners.transpose(2, 1, 0)),
        basis.lengths / 2.0,
    )
    images = spacer_images(layers)
    return Moments(
        basis,
        geometry,
        _near(basis, triangles, sheets, images),
        _runs(sheets),
        images,
        half_overlaps(basis),
        half_functions(basis),
        triangle_colours(basis),
    )


def impedance_matrix(
    moments: Moments, frequency: float, sheet_impedance: Complexes, lossy: bool = True
) -> Complexes:
    """Moment matrix at one frequency.

    Parameters
    ----------
    moments : Moments
    frequency : float
        Hz, > 0.
    sheet_impedance : (t,) ndarray of complex
        Of the foil at each triangle, ohm.
    lossy : bool
        Whether the spacer loses power.

    Returns
    -------
    (n, n) ndarray of complex
        Symmetric, ohm m²: voltage over current density times edge lengths.
    """
    from core.fullwave.compiled import add_free_space  # noqa: PLC0415 - slow to load

    factor = 1j * TWO_PI * frequency * VACUUM_PERMEABILITY / (4.0 * pi)
    matrix = np.zeros((moments.basis.count, moments.basis.count), dtype=np.complex128)
    k = TWO_PI * frequency / SPEED_OF_LIGHT
    near, images = moments.near, moments.images
    direct, weights = images.direct, images.weights - k**2 * images.squares
    if not lossy:
        near = (*near[:3], near[3].real.astype(np.complex128))
        direct, weights = (one.real.astype(np.complex128) for one in (direct, weights))
    spacer = moments.runs, direct, images.starts, images.stops, weights, images.turns, images.shifts

    def add(triangles: Ints) -> None:
        add_free_space(
            triangles,
            k,
            factor,
            moments.geometry,
            near,
            spacer,
            (sheet_impedance / factor, moments.overlaps),
            moments.functions,
            matrix,
        )

    fill(matrix, moments.colours, add)
    return matrix


def fill(matrix: Complexes, colours: tuple[Ints, ...], add: Callable[[Ints], None]) -> None:
    """Fill a symmetric matrix: half of it by triangles, then its transpose.

    A large one is filled by threads. A small one is not: it is one of many while a hand moves,
    and the window needs a processor for itself.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Written to.
    colours : tuple of (...,) ndarray of int
        Triangles that may be added at a time.
    add : callable
        Adds the part of some triangles to the half-filled matrix.
    """
    from core.fullwave.compiled import add_transpose  # noqa: PLC0415 - slow to load

    if len(matrix) <= _ALONE:
        for colour in colours:
            add(colour)
        add_transpose(matrix, 0, 1)
        return
    with ThreadPoolExecutor(WORKERS) as pool:
        for colour in colours:
            list(pool.map(add, (colour[first::WORKERS] for first in range(WORKERS))))
        list(pool.map(lambda first: add_transpose(matrix, first, WORKERS), range(WORKERS)))


def currents(matrix: Complexes, excitations: Complexes) -> Complexes:
    """Solve for the currents; the matrix may be overwritten.

    Parameters
    ----------
    matrix : (n, n) ndarray of complex
        Symmetric.
    excitations : (n, ...) ndarray of complex

    Returns
    -------
    (n, ...) ndarray of complex
        Current density leaving through each function's edge, A/m.
    """
    sides = excitations.reshape(len(matrix), -1)
    return solve_symmetric(matrix, sides).reshape(excitations.shape)


def _near(
    basis: Basis, triangles: Ints, sheets: Ints, images: SpacerImages
) -> tuple[Ints, Ints, Floats, Complexes]:
    """Near terms of every triangle with itself and the later ones near it."""
    from core.fullwave.compiled_near import find_near  # noqa: PLC0415 - slow to load

    starts, sources, kinds = find_near(basis.corners, triangles)
    pairs = np.column_stack([np.repeat(np.arange(basis.triangles), np.diff(starts)), sources])
    terms, plain = pair_terms(basis, pairs, kinds, (1.0, 0.0))
    here, there = sheets[pairs[:, 0]], sheets[pairs[:, 1]]
    charges, rounds = images.direct[here, there][:, None] * plain, triangle_rounds(basis.corners)
    for own, other in np.ndindex(FACES, FACES):
        chosen = np.flatnonzero((here == own) & (there == other))
        for i in range(images.starts[own, other], images.stops[own, other]):
            if abs(images.weights[i]) > _NOTHING:
                image = images.turns[i], images.shifts[i]
                near, close = near_image(rounds, pairs[chosen], kinds[chosen], image)
                if abs(images.weights[i]) < _FAINT:
                    close = np.where(close == _TOUCHING, _FAINTLY, close)
                more = _image_charges(basis, pairs[chosen[near]], close, image)
                charges[chosen[near], 0] += images.weights[i] * more
    return starts, sources, terms, charges


def triangle_rounds(corners: Floats) -> Floats:
    """Middles of triangles and their radii about them.

    Parameters
    ----------
    corners : (t, 3, 3) ndarray of float
        m.

    Returns
    -------
    (t, 4) ndarray of float
        x, y, z and radius, m.
    """
    middles = corners.mean(axis=1)
    radii = np.linalg.norm(corners - middles[:, None], axis=2).max(axis=1)
    return np.column_stack([middles, radii])


def near_image(
    rounds: Floats, pairs: Ints, kinds: Ints, image: tuple[float, float]
) -> tuple[Ints, Ints]:
    """Pairs whose second triangle has its image near the first one.

    Parameters
    ----------
    rounds : (t, 4) ndarray of float
        From `triangle_rounds`.
    pairs : (p, 2) ndarray of int
        Triangles.
    kinds : (p,) ndarray of int
        How close they are themselves: an image is never closer.
    image : tuple of (float, float)
        Turn and shift: heights of an image are turn z + shift, m.

    Returns
    -------
    near : (q,) ndarray of int
        Which pairs.
    close : (q,) ndarray of int
        How close their images are, as `pair_terms` takes it.
    """
    gaps, other = rounds[pairs[:, 0]], rounds[pairs[:, 1]]
    reach = gaps[:, 3] + other[:, 3]
    gaps[:, :2] -= other[:, :2]
    gaps[:, 2] -= image[0] * other[:, 2] + image[1]
    squared = gaps[:, 0] ** 2 + gaps[:, 1] ** 2 + gaps[:, 2] ** 2
    near = np.flatnonzero(squared < (_NEAR_IMAGE * reach) ** 2)
    # An image is never in the very place of its source: the rule of touching triangles will do.
    flat = np.abs(gaps[near, 2]) < _FLAT * reach[near]
    return near, np.where(flat & (kinds[near] > _APART), _TOUCHING, _APART)


def pair_terms(
    basis: Basis, pairs: Ints, kinds: Ints, image: tuple[float, float]
) -> tuple[Floats, Floats]:
    """Near terms of pairs of triangles, the second at its image.

    Parameters
    ----------
    basis : Basis
    pairs : (p, 2) ndarray of int
    kinds : (p,) ndarray of int
        How close.
    image : tuple of (float, float)
        Turn and shift: heights of an image are turn z + shift, m; (1, 0) for itself.

    Returns
    -------
    currents : (p, 2, 3, 3) ndarray of float
    charges : (p, 2) ndarray of float
        As `core.fullwave.compiled_near.near_terms` writes them.
    """
    from core.fullwave.compiled_near import near_terms  # noqa: PLC0415 - slow to load

    turn, lift = image
    terms, charges = np.empty((len(pairs), 2, 3, 3)), np.empty((len(pairs), 2))

    def work_out(share: slice) -> None:
        out = terms[share], charges[share]
        near_terms(basis.corners, pairs[share], kinds[share], lift, _rules(), *out, turn)

    _by_threads(work_out, len(pairs))
    return terms, charges


def _image_charges(basis: Basis, pairs: Ints, kinds: Ints, image: tuple[float, float]) -> Floats:
    """Near terms (p,) of 1/R alone, for the charges of pairs of triangles."""
    from core.fullwave.compiled_charges import near_charges  # noqa: PLC0415 - slow to load

    charges, place = np.empty(len(pairs)), (float(image[0]), float(image[1]))

    def work_out(share: slice) -> None:
        near_charges(basis.corners, pairs[share], kinds[share], place, _rules(), charges[share])

    _by_threads(work_out, len(pairs))
    return charges


def _rules() -> tuple[Floats, Ints]:
    """Rules for pairs as `core.fullwave.compiled_near.near_terms` takes them."""
    return np.concatenate(_RULES), np.cumsum([0, *(len(rule) for rule in _RULES)])


def _by_threads(work_out: Callable[[slice], None], count: int) -> None:
    shares = [slice(i, i + _BATCH) for i in range(0, count, _BATCH)]
    if len(shares) == 1:
        work_out(shares[0])
        return
    with ThreadPoolExecutor(WORKERS) as pool:
        list(pool.map(work_out, shares))


def _runs(sheets: Ints) -> Ints:
    first = np.flatnonzero(np.diff(sheets, prepend=-1))
    return np.column_stack([first, np.append(first[1:], len(sheets)), sheets[first]])


def half_overlaps(basis: Basis) -> Floats:
    """Integrals of f_a . f_b over each triangle.

    Parameters
    ----------
    basis : Basis

    Returns
    -------
    (t, 3, 3) ndarray of float
        m².
    """
    rule = triangle_rule(2)
    arms = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)[:, :, None] - basis.corners[:, None]
    means = np.einsum("q,tqax,tqbx->tab", rule[:, 3], arms, arms)
    half = basis.lengths.T / 2.0
    return np.asarray(means * half[:, :, None] * half[:, None, :] / basis.areas[:, None, None])


def half_functions(basis: Basis) -> tuple[Ints, Ints, Floats, Ints, Ints, Ints]:
    """Functions by half, with signs.

    Parameters
    ----------
    basis : Basis

    Returns
    -------
    tuple
        As `core.fullwave.compiled.add_free_space` takes it.
    """
    halves = np.concatenate([basis.plus, basis.minus])
    numbers = np.tile(np.arange(basis.count), 2)
    signs = np.repeat([1.0, -1.0], basis.count)
    order = np.argsort(halves, kind="stable")
    starts = np.searchsorted(halves[order], np.arange(3 * basis.triangles + 1))
    last = np.maximum(basis.plus % basis.triangles, basis.minus % basis.triangles)
    firsts = np.full(basis.triangles, basis.count)
    np.minimum.at(firsts, last, np.arange(basis.count))
    firsts = np.minimum.accumulate(firsts[::-1])[::-1].copy()
    return starts, numbers[order], signs[order], basis.plus, basis.minus, firsts


def triangle_colours(basis: Basis) -> tuple[Ints, ...]:
    """Triangles by colour, so that no two of a colour share a function.

    Parameters
    ----------
    basis : Basis

    Returns
    -------
    tuple of (...,) ndarray of int
    """
    neighbours: list[list[int]] = [[] for _ in range(basis.triangles)]
    one, two = basis.plus % basis.triangles, basis.minus % basis.triangles
    # A common triangle of a junction keeps all of its partners apart from itself only; two
    # partners share no function.
    for a, b in zip(one.tolist(), two.tolist(), strict=True):
        neighbours[a].append(b)
        neighbours[b].append(a)
    colour = [-1] * basis.triangles
    for t, others in enumerate(neighbours):
        taken = {colour[s] for s in others}
        colour[t] = next(c for c in range(len(taken) + 1) if c not in taken)
    return tuple(np.flatnonzero(np.asarray(colour) == c) for c in range(max(colour) + 1))
