"""Fringing of a wide edge against its published limits and adaptive integrals."""

import numpy as np
import pytest
from scipy.integrate import quad

from core.constants import SPEED_OF_LIGHT
from core.live.edge import edge_pair

FREQUENCY = 1e9
WAVENUMBER = 2.0 * np.pi * FREQUENCY / SPEED_OF_LIGHT


def test_a_dense_slab_ends_like_a_magnetic_wall():
    # ln 4 / pi heights, the corner of a condenser in which all field stays (closed form, from
    # memory); Q0(-1) is half of ln(pi/2), the derivative of Dirichlet's eta function at 0.
    pair = edge_pair(0.1, 0.05, 1e-3, 1e9, 1.0)
    assert pair.extension(FREQUENCY) == pytest.approx(1e-3 * np.log(4.0) / np.pi, rel=1e-6)


def test_a_long_edge_in_air_far_from_the_other_is_an_open_parallel_plate():
    # N. Marcuvitz, Waveguide Handbook, 1951, sec. 4.6 (from memory): first order of k0 h.
    # The mean over widths takes out the waves that the two ends of an edge send along it.
    height, widths = 1e-3, np.linspace(0.4, 0.7, 61)
    expected = height / np.pi * (np.log(2.0 * np.pi / (WAVENUMBER * height)) + 1.0 - np.euler_gamma)
    found = [edge_pair(width, 1e4, height, 1.0, 1.0).extension(FREQUENCY) for width in widths]
    assert np.mean(found) == pytest.approx(expected, rel=0.02)


@pytest.mark.parametrize("eps_r", [1.0, 2.33, 4.3])
@pytest.mark.parametrize("width", [0.03, 0.12])
def test_reaction_by_adaptive_quadrature(eps_r, width):
    height, spacing, line = 2e-3, 0.11, 1.1
    near = height / (np.pi * np.e)

    def reaction(distance):
        def part(along):
            apart = np.hypot(along, distance)
            return (1.0 - along / width) * np.cos(WAVENUMBER * apart) / apart

        return quad(part, 0.0, width, points=[near], limit=200, epsabs=1e-12)[0]

    one = edge_pair(width, spacing, height, eps_r, line)
    still = edge_pair(width, spacing, height, eps_r, line).still
    expected = height / (np.pi * line) * ((reaction(near) + reaction(spacing)) / eps_r + still)
    assert one.extension(FREQUENCY) == pytest.approx(expected, rel=1e-6)


def test_the_still_part_is_a_sum_that_converges():
    # At a permittivity of 3 the terms halve: a plain sum of 200 is exact.
    orders = np.arange(1, 200)
    plain = np.sum((-0.5) ** orders * np.log(orders))
    expected = np.log(2.0 * np.pi) * (1.0 - 1.0 / 3.0) - 2.0 * plain
    assert edge_pair(0.1, 0.1, 1e-3, 3.0, 1.0).still == pytest.approx(expected, rel=1e-12)
