"""Open conducting surfaces that a boundary-element library can solve as well: no junctions."""

import numpy as np
from fullwave_shapes import grid, moments_of


def plate(cells: int, side: float = 1.0):
    """Vertices and triangles of a square plate in the plane z = 0."""
    places = np.linspace(-side / 2.0, side / 2.0, cells + 1)
    return grid(places, places)


def patch_over_plate(cell: float = 0.06):
    """A patch over a plate's rim, joined to it by an upright strip; where the strip is fed.

    Lengths in wavelengths: plate 0.6 x 0.6, patch 0.48 wide and 0.42 long, 0.06 high, the strip
    0.12 wide. No edge has more than two triangles: the library knows no junctions.
    """
    count = round(0.06 / cell)
    low = grid(np.linspace(-0.3, 0.3, 10 * count + 1), np.linspace(-0.3, 0.3, 10 * count + 1))
    top = grid(
        np.linspace(-0.24, 0.24, 8 * count + 1), np.linspace(-0.3, 0.12, 7 * count + 1), 0.06
    )
    x_z, strip = grid(np.linspace(-0.06, 0.06, 2 * count + 1), np.linspace(0.0, 0.06, count + 1))
    upright = np.column_stack([x_z[:, 0], np.full(len(x_z), -0.3), x_z[:, 1]])
    # The library wants neighbours to turn the same way round: plate, strip, patch as one sheet.
    faces = [(low[0], low[1][:, ::-1]), (upright, strip), top]
    starts = np.cumsum([0, *(len(points) for points, _ in faces)])
    points = np.concatenate([points for points, _ in faces])
    triangles = np.concatenate([t + s for (_, t), s in zip(faces, starts, strict=False)])
    _, first, number = np.unique(
        np.round(points, 9), axis=0, return_index=True, return_inverse=True
    )
    return points[first], number.reshape(-1)[triangles]


def foot_excitation(vertices, triangles):
    """1 V up the strip, across its foot."""
    basis, _ = moments_of(vertices, triangles)
    ends = vertices[basis.ends]
    foot = (abs(ends[..., 2]) < 1e-9) & (abs(ends[..., 1] + 0.3) < 1e-9)
    excitation = np.zeros(basis.count, dtype=complex)
    for m in np.flatnonzero(foot.all(axis=1)):
        upwards = basis.corners[basis.minus[m] % basis.triangles][:, 2].max() > 1e-9
        excitation[m] = np.linalg.norm(np.diff(ends[m], axis=0)) * (1.0 if upwards else -1.0)
    return excitation


def wave_excitation(vertices, triangles):
    """A wave of 1 V/m along x that falls on a plate at z = 0 from straight ahead."""
    basis, _ = moments_of(vertices, triangles)
    arms = (basis.corners.mean(axis=1)[:, None] - basis.corners)[..., 0].T
    return basis.tested((arms * basis.lengths / 2.0).astype(complex))
