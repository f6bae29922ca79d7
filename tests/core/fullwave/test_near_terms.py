"""Near terms against closed forms and against point sums of another kind."""

import numpy as np
import pytest

from core.fullwave.compiled_charges import near_charges
from core.fullwave.compiled_near import find_near, near_terms
from core.fullwave.quadrature import COARSE_RULE, triangle_rule

RIGHT = np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0]])
OTHER_HALF = np.array([[1.0, 0, 0], [1, 1, 0], [0, 1, 0]])
THIN = np.array([[0.0, 0, 0], [2, 0, 0], [0, 0.1, 0]])
ACUTE = np.array([[0.0, 0, 0], [1, 0, 0], [0.3, 0.8, 0]])
ABOVE = np.array([[0.2, 0.1, 0.4], [1.3, 0.2, 0.5], [0.4, 0.9, 0.9]])
FOLDED = np.array([[0.0, 0, 0], [1, 0, 0], [0.4, 0.0, 0.9]])


def exact_means(test, source, order, kind=2, lift=0.0):
    """Mean moments of 1/R and R with the fill's own sum put back."""
    corners = np.array([test, source])
    rules = np.concatenate([COARSE_RULE, COARSE_RULE, triangle_rule(order)])
    currents, charges = np.empty((1, 2, 3, 3)), np.empty((1, 2))
    near_terms(
        corners,
        np.array([[0, 1]]),
        np.array([kind]),
        lift,
        (rules, np.array([0, 3, 6, len(rules)])),
        currents,
        charges,
    )
    lifted = np.add(source, [0.0, 0.0, lift])
    own = point_means(test, lifted, COARSE_RULE, COARSE_RULE)
    return currents[0] + own[0], charges[0] + own[1]


def point_means(test, source, test_rule, source_rule):
    """The same by points over both triangles, nothing at R = 0."""
    r, s = test_rule[:, :3] @ test, source_rule[:, :3] @ source
    distance = np.linalg.norm(r[:, None] - s[None], axis=2)
    weights = test_rule[:, 3][:, None] * source_rule[:, 3]
    inverse = np.divide(1.0, distance, out=np.zeros_like(distance), where=distance > 0.0)
    dots = np.einsum("iax,jbx->ijab", r[:, None] - test, s[:, None] - source)
    currents = [np.einsum("ij,ijab->ab", weights * k, dots) for k in (inverse, distance)]
    charges = [np.sum(weights * k) for k in (inverse, distance)]
    return np.array(currents), np.array(charges)


@pytest.mark.parametrize("triangle", [RIGHT, ACUTE, THIN, FOLDED])
def test_self_term_is_the_closed_form(triangle):
    # Arcioni, Bressan and Perregrini, IEEE Trans. MTT 45(3), 1997, 436-439 (from memory): the
    # mean of 1/R over a triangle twice is -4/3 sum of ln(1 - 2 a / perimeter) / a.
    sides = np.linalg.norm(triangle - np.roll(triangle, 1, axis=0), axis=1)
    expected = -4.0 / 3.0 * np.sum(np.log(1.0 - 2.0 * sides / sides.sum()) / sides)
    _, charges = exact_means(triangle, triangle, 12)
    assert charges[0] == pytest.approx(expected, rel=2e-4)
    _, charges = exact_means(triangle, triangle, 6)
    assert charges[0] == pytest.approx(expected, rel=2e-3)


def test_two_halves_of_a_square_make_its_self_term():
    # Mean of 1/R over a unit square twice: 4 asinh(1) - 4/3 (sqrt(2) - 1) = 2.97321 (the
    # potential of a square plate, as in E. Durand, Électrostatique, 1966; from memory).
    _, one = exact_means(RIGHT, RIGHT, 10)
    _, both = exact_means(RIGHT, OTHER_HALF, 10)
    expected = 4.0 * np.arcsinh(1.0) - 4.0 / 3.0 * (2.0**0.5 - 1.0)
    assert (one[0] + both[0]) / 2.0 == pytest.approx(expected, rel=2e-4)


@pytest.mark.parametrize(
    "source", [ABOVE, np.add(FOLDED, [0.0, 0.3, 0.2]), np.add(RIGHT, [1.5, 0.2, 0.0])]
)
def test_apart_is_what_many_points_say(source):
    many = triangle_rule(24)
    currents, charges = point_means(RIGHT, source, many, many)
    exact = exact_means(RIGHT, source, 12)
    np.testing.assert_allclose(exact[0], currents, rtol=2e-6, atol=2e-6)
    np.testing.assert_allclose(exact[1], charges, rtol=1e-7)


@pytest.mark.parametrize("source", [OTHER_HALF, FOLDED, -RIGHT, RIGHT * [1, -0.4, 1]])
def test_touching_is_what_graded_points_say(source):
    # The source cut into ever smaller triangles towards the test triangle, in both.
    brute = halved_means(RIGHT, source, 6)
    exact = exact_means(RIGHT, source, 10)
    np.testing.assert_allclose(exact[1], brute[1], rtol=5e-4)
    np.testing.assert_allclose(exact[0][0], brute[0][0], rtol=2e-3, atol=5e-4)


def halved_means(test, source, depth):
    """Means by points, both triangles quartered again and again where they are close."""
    # Sums of K, K r, K r' and K r.r' over pairs of small triangles.
    sums = np.zeros((2, 3, 3)), np.zeros(2)
    rule = triangle_rule(3)
    stack = [(test, source, 1.0, depth)]
    while stack:
        one, two, share, left = stack.pop()
        size = max(np.ptp(one, axis=0).max(), np.ptp(two, axis=0).max())
        if left and np.linalg.norm(one.mean(axis=0) - two.mean(axis=0)) < 1.2 * size:
            stack += [(a, b, share / 16.0, left - 1) for a in quarters(one) for b in quarters(two)]
            continue
        r, s = rule[:, :3] @ one, rule[:, :3] @ two
        distance = np.linalg.norm(r[:, None] - s[None], axis=2)
        weights = share * rule[:, 3][:, None] * rule[:, 3]
        dots = np.einsum("iax,jbx->ijab", r[:, None] - test, s[:, None] - source)
        for term, kernel in enumerate((1.0 / np.maximum(distance, 1e-9), distance)):
            sums[0][term] += np.einsum("ij,ijab->ab", weights * kernel, dots)
            sums[1][term] += np.sum(weights * kernel)
    return sums


def quarters(triangle):
    a, b, c = triangle
    d, e, f = (a + b) / 2, (b + c) / 2, (c + a) / 2
    return [np.array(t) for t in ((a, d, f), (d, b, e), (f, e, c), (d, e, f))]


def test_swapped_triangles_give_the_transpose():
    there, back = exact_means(RIGHT, FOLDED, 3), exact_means(FOLDED, RIGHT, 3)
    np.testing.assert_allclose(there[0], back[0].transpose(0, 2, 1), atol=1e-12)
    np.testing.assert_allclose(there[1], back[1], rtol=1e-12)


def test_lift_raises_the_source():
    lifted = exact_means(RIGHT, RIGHT, 8, lift=0.7)
    moved = exact_means(RIGHT, np.add(RIGHT, [0.0, 0.0, 0.7]), 8)
    np.testing.assert_allclose(lifted[0], moved[0], atol=1e-12)
    np.testing.assert_allclose(lifted[1], moved[1], rtol=1e-12)


def test_pairs_are_found_and_told_apart():
    corners = np.array(
        [RIGHT, OTHER_HALF, np.add(RIGHT, [1, 0, 0]), np.add(RIGHT, [1.5, 1.5, 0]), RIGHT + 50.0]
    )
    triangles = np.array([[0, 1, 2], [1, 3, 2], [1, 4, 3], [5, 6, 7], [8, 9, 10]])
    starts, partners, kinds = find_near(corners, triangles)
    found = {
        (t, int(s)): int(kind)
        for t in range(5)
        for s, kind in zip(
            partners[starts[t] : starts[t + 1]], kinds[starts[t] : starts[t + 1]], strict=True
        )
    }
    assert [found[t, t] for t in range(5)] == [4] * 5
    assert found[0, 1] == found[1, 2] == 3
    assert found[0, 2] == 2
    assert found[0, 3] == 1
    assert not any(4 in pair for pair in found if pair != (4, 4))


@pytest.mark.parametrize("kind", [1, 2])
@pytest.mark.parametrize("image", [(1.0, 0.0), (0.0, -0.7), (-1.0, 2.0), (1.0, 0.8)])
def test_charges_alone_are_those_of_the_whole_terms(kind, image):
    corners = np.array([ACUTE, np.add(RIGHT, (0.9, 0.6, 0.3))])
    rules = np.concatenate([COARSE_RULE, triangle_rule(4), triangle_rule(6)])
    starts = np.array([0, 3, 3 + len(triangle_rule(4)), len(rules)])
    pairs, kinds = np.array([[0, 1], [1, 0]]), np.array([kind, kind])
    currents, both, alone = np.empty((2, 2, 3, 3)), np.empty((2, 2)), np.empty(2)
    near_terms(corners, pairs, kinds, image[1], (rules, starts), currents, both, image[0])
    near_charges(corners, pairs, kinds, image, (rules, starts), alone)
    np.testing.assert_allclose(alone, both[:, 0], rtol=1e-9, atol=1e-12)
