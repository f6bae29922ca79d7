"""The moment matrix of copper on a layered stack, vertical currents of a probe included.

Every edge round the probe carries vertical currents cos(i pi z/h), each with the half
function that takes its current into the copper: the other half of those functions lives on
a triangle of no size that stands for the probe, so that the sums of the free-space solver
serve unchanged.

Shapes: t triangles, the probe's included as the last; n functions; p near pairs; e edges
round the probe; m vertical profiles. Functions of the probe come last, edge by edge within
profile by profile.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE
from core.fullwave.basis import Basis, build_basis
from core.fullwave.moments import (
    fill,
    half_functions,
    half_overlaps,
    near_image,
    pair_terms,
    triangle_colours,
    triangle_rounds,
)
from core.fullwave.quadrature import COARSE_RULE
from core.fullwave.static_images import image_potential

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.kernel_table import KernelTables, TablePlan
    from core.fullwave.layered_mesh import BoardMesh

    Floats = NDArray[np.float64]
    Ints = NDArray[np.int64]
    Complexes = NDArray[np.complex128]

_ALL: Final = 4.0 * pi  # the compiled sums are of kernels times this


@dataclass(frozen=True, eq=False)
class LayeredMoments:
    """What a mesh on a stack needs at every frequency.

    Attributes
    ----------
    basis : Basis
    geometry, near, overlaps, functions
        As `core.fullwave.compiled_layered.add_layered` takes them.
    colours : tuple of (...,) ndarray of int
        All triangles but the probe's, shared out so that no two of a colour share a function.
    """

    basis: Basis
    geometry: tuple[Floats, Floats, Floats]
    near: tuple[Ints, Ints, Floats, Floats, Floats, Floats]
    overlaps: Floats
    functions: tuple[Ints, Ints, Floats, Ints, Ints, Ints]
    colours: tuple[Ints, ...]


def board_basis(mesh: BoardMesh, profiles: int) -> Basis:
    """Functions on the top copper and on the probe.

    Parameters
    ----------
    mesh : BoardMesh
    profiles : int
        Vertical currents of each edge round the probe.

    Returns
    -------
    Basis
        Functions of the probe last. Each stands for 1 A/m going up through its edge at the
        ground plane.
    """
    flat = build_basis(mesh.vertices, mesh.triangles, np.zeros(len(mesh.triangles), dtype=np.int64))
    count = flat.triangles
    ends = np.sort(mesh.pin, axis=1)
    sides = np.sort(mesh.triangles[:, [[1, 2], [2, 0], [0, 1]]], axis=2)
    found = (sides[None] == ends[:, None, None]).all(axis=3)
    owner, corner = (np.array(at) for at in np.nonzero(found)[1:])
    half, pin = corner * (count + 1) + owner, np.full(len(owner), count)
    # A half leaves through its edge: minus it is the current that comes up and goes in.
    # cos(i pi z/h) of odd i has turned round at the top.
    even = np.arange(profiles)[:, None] % 2 == 0
    plus, minus = np.where(even, pin, half).ravel(), np.where(even, half, pin).ravel()
    middle = mesh.vertices[mesh.pin].mean(axis=(0, 1))

    def moved(halves: Ints) -> Ints:
        return np.asarray(halves // count * (count + 1) + halves % count)

    return Basis(
        corners=np.concatenate([flat.corners, np.tile(middle, (1, 3, 1))]),
        areas=np.append(flat.areas, 1.0),
        lengths=np.hstack([flat.lengths, np.zeros((3, 1))]),
        plus=np.concatenate([moved(flat.plus), plus]),
        minus=np.concatenate([moved(flat.minus), minus]),
        ends=np.concatenate([flat.ends, np.tile(ends, (profiles, 1))]),
    )


def build_layered_moments(basis: Basis, triangles: Ints, plan: TablePlan) -> LayeredMoments:
    """Work out what does not change with frequency.

    Parameters
    ----------
    basis : Basis
        From `board_basis`.
    triangles : (t - 1, 3) ndarray of int
        Vertices of the mesh's triangles.
    plan : TablePlan
        Any of the stack: its listed images are integrated exactly where they are near.

    Returns
    -------
    LayeredMoments
    """
    points = np.einsum("ic,tcx->xit", COARSE_RULE[:, :3], basis.corners)
    geometry = (
        np.ascontiguousarray(points),
        np.ascontiguousarray(basis.corners.transpose(2, 1, 0)),
        basis.lengths / 2.0,
    )
    return LayeredMoments(
        basis,
        geometry,
        _near(basis, triangles, plan),
        half_overlaps(basis),
        half_functions(basis),
        tuple(colour[colour < len(triangles)] for colour in triangle_colours(basis)),
    )


def layered_matrix(
    moments: LayeredMoments, tables: KernelTables, wavenumber: float, sheet_impedance: complex
) -> Complexes:
    """Moment matrix at one frequency, less what vertical currents do.

    Parameters
    ----------
    moments : LayeredMoments
    tables : KernelTables
        Of this one frequency.
    wavenumber : float
        Of free space, 1/m.
    sheet_impedance : complex
        Of the top copper, ohm.

    Returns
    -------
    (n, n) ndarray of complex
        Symmetric, ohm m².
    """
    from core.fullwave.compiled_layered import add_layered  # noqa: PLC0415 - slow to load

    # omega mu0 = k0 eta0
    factor = 1j * wavenumber * FREE_SPACE_IMPEDANCE / _ALL
    kernels = (
        _cubics(tables),
        1.0 / tables.step,
        complex(tables.charge_images[0].weight),
        complex(_ALL * tables.vector_kink[0]),
        complex(_ALL * tables.scalar_kink[0]),
    )
    basis = moments.basis
    sheets = np.full(basis.triangles, sheet_impedance / factor)
    matrix = np.zeros((basis.count, basis.count), dtype=np.complex128)

    def add(triangles: Ints) -> None:
        add_layered(
            triangles,
            wavenumber,
            factor,
            kernels,
            moments.geometry,
            moments.near,
            (sheets, moments.overlaps),
            moments.functions,
            matrix,
        )

    fill(matrix, moments.colours, add)
    return matrix


def _cubics(tables: KernelTables) -> Floats:
    """Coefficients (u, 16) of the cubic through the four entries around each step.

    Images below the source are smooth on the table's step, so they go into it.
    """
    entries = tables.vector.shape[-1]
    distance = np.asarray(tables.step * np.arange(entries), dtype=np.float64)
    vector = tables.vector[0] + image_potential(tables.current_images[1:], distance)
    scalar = tables.scalar[0] + image_potential(tables.charge_images[1:], distance)
    values = _ALL * np.stack([vector.real, vector.imag, scalar.real, scalar.imag])
    first = np.clip(np.arange(entries - 1) - 1, 0, entries - 4)
    origin = np.arange(entries - 1) - first  # of the step among its four entries
    cubic = np.empty((entries - 1, 4, 4))
    for place in (0, 1, 2):
        rows = np.flatnonzero(origin == place)
        powers = (np.arange(4)[:, None] - place) ** np.arange(4)
        four = values[:, first[rows][:, None] + np.arange(4)]
        cubic[rows] = np.einsum("pi,vri->rpv", np.linalg.inv(powers.astype(float)), four)
    return np.ascontiguousarray(cubic.reshape(entries - 1, 16))


def _near(
    basis: Basis, triangles: Ints, plan: TablePlan
) -> tuple[Ints, Ints, Floats, Floats, Floats, Floats]:
    """Near terms of every triangle with itself and later ones, source and images summed."""
    from core.fullwave.compiled_near import find_near  # noqa: PLC0415 - slow to load

    starts, sources, kinds = find_near(np.ascontiguousarray(basis.corners[:-1]), triangles)
    pairs = np.column_stack([np.repeat(np.arange(len(triangles)), np.diff(starts)), sources])
    terms, means = pair_terms(basis, pairs, kinds, (1.0, 0.0))
    weights, rounds = [kind[0].weight for kind in plan.near], triangle_rounds(basis.corners)
    currents = complex(weights[0]).real * terms[:, 0]
    charges = means[:, :1] * _parts(weights[1])
    for depth in sorted({image.depth for kind in plan.near for image in kind[1:]}):
        near, close = near_image(rounds, pairs, kinds, (1.0, depth))
        lifted, lifted_means = pair_terms(basis, pairs[near], close, (1.0, depth))
        current, charge = (
            sum(image.weight for image in kind if image.depth == depth) for kind in plan.near
        )
        currents[near] += complex(current).real * lifted[:, 0]
        charges[near] += lifted_means[:, :1] * _parts(charge)
    current_slopes, charge_slopes = terms[:, 1].copy(), means[:, 1].copy()
    starts = np.append(starts, starts[-1])
    return starts, sources, currents, current_slopes, charges, charge_slopes


def _parts(weight: complex) -> Floats:
    """Real and imaginary part."""
    return np.array([weight.real, weight.imag])
