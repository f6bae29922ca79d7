"""The moment matrix: against series, published dipoles and plain sums."""

from math import pi

import numpy as np
import pytest
from fullwave_shapes import current_power, gap_excitation, grid, moments_of, sphere
from scipy.special import spherical_jn, spherical_yn

from core.constants import SPEED_OF_LIGHT
from core.fullwave.basis import build_basis
from core.fullwave.far_field import far_field
from core.fullwave.moments import build_moments, currents, impedance_matrix
from core.fullwave.quadrature import COARSE_RULE, triangle_rule

SIZES = [0.5, 1.0, 2.0]  # circumference of a sphere in wavelengths


def lossless(basis):
    return np.zeros(basis.triangles, dtype=complex)


def plane_wave(basis, k):
    """Reactions with a wave along -z, its field 1 V/m along x."""
    rule = triangle_rule(4)
    points = np.einsum("qc,tcx->tqx", rule[:, :3], basis.corners)
    field = np.exp(1j * k * points[..., 2])
    arms = points[:, :, None, 0] - basis.corners[:, None, :, 0]
    return basis.tested(np.einsum("q,tq,tqa->at", rule[:, 3], field, arms) * basis.lengths / 2.0)


def mie(size):
    """Scattering cross-sections of a conducting sphere over pi a²: back, ahead.

    J. A. Stratton, *Electromagnetic Theory*, McGraw-Hill, 1941, sec. 9.25 (from memory).
    """
    n = np.arange(1, int(size) + 15)
    j, y = spherical_jn(n, size), spherical_yn(n, size)
    dj, dy = spherical_jn(n, size, True), spherical_yn(n, size, True)
    electric = (size * dj + j) / (size * (dj - 1j * dy) + j - 1j * y)
    magnetic = j / (j - 1j * y)
    back = np.sum((-1.0) ** n * (2 * n + 1) * (magnetic - electric))
    ahead = np.sum((2 * n + 1) * (magnetic + electric))
    return np.abs(back) ** 2 / size**2, np.abs(ahead) ** 2 / size**2


@pytest.fixture(scope="module")
def balls():
    return {n: moments_of(*sphere(n)) for n in (1, 2)}


def scattered(basis, moments, size):
    frequency = size * SPEED_OF_LIGHT / (2 * pi)
    excitation = plane_wave(basis, size)
    matrix = impedance_matrix(moments, frequency, lossless(basis))
    return frequency, excitation, currents(matrix, excitation)


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize(("divisions", "tolerance"), [(1, 0.016), (2, 0.002)])
def test_sphere_scatters_as_its_series(balls, size, divisions, tolerance):
    basis, moments = balls[divisions]
    frequency, _, solved = scattered(basis, moments, size)
    field = far_field(basis, solved, frequency, np.array([[0, 0, 1.0], [0, 0, -1.0]]))
    found = 4.0 * np.sum(np.abs(field) ** 2, axis=1)
    np.testing.assert_allclose(found, mie(size), rtol=tolerance)


@pytest.mark.parametrize("size", SIZES)
def test_scattered_power_is_the_power_taken(balls, size):
    basis, moments = balls[2]
    frequency, excitation, solved = scattered(basis, moments, size)
    taken = 0.5 * np.real(np.sum(solved.conj() * excitation))
    assert current_power(basis, solved, frequency) == pytest.approx(taken, rel=1e-4)


def strip_dipole(width_ratio, cells, rows=1):
    """Resonant length in wavelengths and resistance there of a flat dipole."""
    nominal = SPEED_OF_LIGHT / 1e9
    length = 0.48 * nominal
    xs = np.linspace(-length / 2, length / 2, cells + 1)
    ys = np.linspace(-length * width_ratio / 2, length * width_ratio / 2, rows + 1)
    vertices, triangles = grid(xs, ys)
    basis, moments = moments_of(vertices, triangles)
    excitation = gap_excitation(basis, vertices, 0.0)
    frequencies = np.linspace(0.96e9, 1.04e9, 5)
    impedance = []
    for frequency in frequencies:
        matrix = impedance_matrix(moments, frequency, lossless(basis))
        impedance.append(1.0 / (excitation @ currents(matrix, excitation)))
    impedance = np.array(impedance)
    resonance = np.polyval(np.polyfit(impedance.imag, frequencies, 3), 0.0)
    resistance = np.interp(resonance, frequencies, impedance.real)
    return length * resonance / SPEED_OF_LIGHT, resistance


@pytest.mark.parametrize("width_ratio", [0.001, 0.002, 0.008])
def test_half_wave_dipole(width_ratio):
    # A thin dipole at resonance has about 72 ohm and is a little under half a wavelength long,
    # the less the thicker: C. A. Balanis, *Antenna Theory*, 4th ed., Wiley, 2016, sec. 8.3
    # (from memory). A strip of width w carries current as a wire of radius w / 4.
    length, resistance = strip_dipole(width_ratio, 40)
    assert resistance == pytest.approx(72.0, abs=1.0)
    assert 0.474 < length < 0.485


def test_wider_dipole_is_shorter():
    lengths = [strip_dipole(ratio, 40)[0] for ratio in (0.001, 0.002, 0.008)]
    assert lengths == sorted(lengths, reverse=True)


def test_dipole_settles_as_the_mesh_is_refined():
    lengths = [strip_dipole(0.008, cells, rows)[0] for cells, rows in ((20, 1), (40, 2), (80, 2))]
    assert abs(lengths[2] - lengths[1]) < 1e-3
    assert abs(lengths[2] - lengths[1]) < abs(lengths[1] - lengths[0])


def crossed_strips():
    """Three strips that meet along one edge, at right angles and askew."""
    along = np.linspace(0.0, 0.05, 6)
    vertices, triangles = grid(along, np.array([0.0, 0.01]))
    parts = [(vertices, triangles)]
    for turn in (2.0, 4.2):
        turned = vertices.copy()
        turned[:, 0] = vertices[:, 0] * np.cos(turn)
        turned[:, 2] = vertices[:, 0] * np.sin(turn)
        parts.append((turned, triangles))
    points = np.concatenate([p for p, _ in parts])
    faces = np.concatenate([t + i * len(vertices) for i, (_, t) in enumerate(parts)])
    _, first, number = np.unique(
        np.round(points, 9), axis=0, return_index=True, return_inverse=True
    )
    return points[first], number.reshape(-1)[faces]


def test_matrix_is_symmetric_and_passive():
    basis, moments = moments_of(*crossed_strips())
    matrix = impedance_matrix(moments, 2e9, lossless(basis))
    np.testing.assert_allclose(matrix, matrix.T, rtol=1e-12)
    assert np.linalg.eigvalsh(matrix.real).min() > -1e-7 * np.abs(matrix).max()


def test_junction_obeys_kirchhoff_whichever_sheet_is_common():
    # The far field cannot depend on which of the three strips the functions are hung on.
    vertices, triangles = crossed_strips()
    rng = np.random.default_rng(2)
    answers = []
    for common in range(3):
        rank = (np.arange(len(triangles)) // 10 == common).astype(int)
        basis = build_basis(vertices, triangles, rank)
        moments = build_moments(basis, triangles, np.zeros(len(triangles), dtype=int))
        matrix = impedance_matrix(moments, 2e9, lossless(basis))
        solved = currents(matrix, plane_wave(basis, 2 * pi * 2e9 / SPEED_OF_LIGHT))
        answers.append(far_field(basis, solved, 2e9, rng_directions(rng)))
        rng = np.random.default_rng(2)
    np.testing.assert_allclose(answers[1], answers[0], rtol=1e-8, atol=1e-12)
    np.testing.assert_allclose(answers[2], answers[0], rtol=1e-8, atol=1e-12)


def rng_directions(rng):
    ways = rng.normal(size=(5, 3))
    return ways / np.linalg.norm(ways, axis=1)[:, None]


def test_fill_is_a_plain_sum_between_far_triangles():
    # Two functions far apart: nine points a triangle pair, written out.
    k, frequency = 40.0, 40.0 * SPEED_OF_LIGHT / (2 * pi)
    vertices = 0.01 * np.array(
        [
            [0, 0, 0],
            [1, 0, 0],
            [0, 1, 0],
            [1, 1, 0.2],
            [9, 5, 6],
            [10, 5, 6],
            [9, 6, 7],
            [10, 6, 6.0],
        ]
    )
    triangles = np.array([[0, 1, 2], [1, 3, 2], [4, 5, 6], [5, 7, 6]])
    basis, moments = moments_of(vertices, triangles)
    matrix = impedance_matrix(moments, frequency, lossless(basis))
    rule = COARSE_RULE
    total = 0.0
    for one, first in ((basis.plus[0], 1), (basis.minus[0], -1)):
        for two, second in ((basis.plus[1], 1), (basis.minus[1], -1)):
            (a, t), (b, s) = divmod(one, 4), divmod(two, 4)
            r, q = rule[:, :3] @ basis.corners[t], rule[:, :3] @ basis.corners[s]
            distance = np.linalg.norm(r[:, None] - q, axis=2)
            green = np.exp(-1j * k * distance) / (4 * pi * distance)
            weights = rule[:, 3][:, None] * rule[:, 3] * basis.lengths[a, t] * basis.lengths[b, s]
            flow = (r - basis.corners[t, a]) @ (q - basis.corners[s, b]).T / 4.0
            total += first * second * np.sum(weights * green * (flow - 1.0 / k**2))
    impedance = 376.730313668 * k * 1j
    assert matrix[0, 1] == pytest.approx(impedance * total, rel=1e-8)


def test_foil_adds_its_own_resistance():
    # A strip one cell wide, its current the same all along: R = sheet resistance x squares.
    vertices, triangles = grid(np.linspace(0, 1e-3, 11), np.array([0.0, 1e-4]))
    basis, moments = moments_of(vertices, triangles)
    flowing = gap_all(basis)
    bare = impedance_matrix(moments, 1e6, lossless(basis))
    coated = impedance_matrix(moments, 1e6, np.full(basis.triangles, 0.5 + 0.1j))
    drop = flowing @ (coated - bare) @ flowing
    # 1 A/m x 0.1 mm crosses 8 whole cells of 1 square each and fades over the two at the ends.
    square = 1e-4 * 1e-4 * (0.5 + 0.1j)
    assert 8.0 < (drop / square).real < 10.0
    assert abs((drop / square).imag) < 1e-4


def gap_all(basis):
    """Current of 1 A/m along x in every function of a grid one cell wide."""
    middles = basis.corners.mean(axis=1)
    here, there = basis.plus % basis.triangles, basis.minus % basis.triangles
    way = middles[there] - middles[here]
    return np.sign(way[:, 0]) * np.abs(edge_normals(basis)[:, 0])


def edge_normals(basis):
    corner, t = np.divmod(basis.plus, basis.triangles)
    side = basis.corners[t, (corner + 2) % 3] - basis.corners[t, (corner + 1) % 3]
    return np.column_stack([-side[:, 1], side[:, 0]]) / np.linalg.norm(side, axis=1)[:, None]
