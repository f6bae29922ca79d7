"""Images of a charge on a stack, against Silvester's series and the static field of layers."""

import numpy as np
import pytest
from layered_reference import scalar_spectrum
from numpy.testing import assert_allclose

from core.fullwave.static_images import (
    charge_images,
    current_images,
    image_potential,
    image_spectrum,
)
from core.lines.stack import Layer


def test_one_layer_gives_silvesters_series():
    """P. Silvester, Proc. IEE 115 (1), 1968: weights (1 - n)(-n)^i; from memory."""
    h, eps = 1.6e-3, 4.4
    images = charge_images((Layer(h, eps),), 9.0 * h)
    n = (eps - 1.0) / (eps + 1.0)
    source = 2.0 / (1.0 + eps)
    expected = [source, *(-source * (1.0 + n) * (-n) ** i for i in range(4))]
    assert_allclose([image.depth for image in images], 2.0 * h * np.arange(5), rtol=1e-9)
    assert_allclose([image.weight for image in images], expected, rtol=1e-12)


@pytest.mark.parametrize(
    "layers",
    [
        (Layer(6e-3, 1.05), Layer(0.3e-3, 2.5, 0.05)),
        (Layer(2e-3, 2.0), Layer(0.5e-3, 4.0), Layer(1e-3, 10.0, 0.02)),
    ],
    ids=["card on foam", "three"],
)
def test_layers_at_zero_frequency(layers):
    height = sum(layer.thickness for layer in layers)
    k_rho = np.array([2.5, 4.0, 12.0]) / height
    exact = scalar_spectrum(layers, 1e-5 / height, k_rho)
    found = image_spectrum(charge_images(layers, 6.0 * height), k_rho.astype(complex))
    # images under 1e-4 of the source are left out, and those deeper than six heights
    assert_allclose(found, exact, rtol=5e-4)


def test_a_current_has_one_image_whatever_the_dielectric():
    images = current_images((Layer(1e-3, 2.2), Layer(2e-3, 10.0)))
    assert [(image.weight, image.depth) for image in images] == [(1.0, 0.0), (-1.0, 6e-3)]


def test_air_mirrors_a_charge():
    images = charge_images((Layer(2e-3, 1.0), Layer(1e-3, 1.0)), 1.0)
    assert [image.weight for image in images] == [1.0, -1.0]
    potential = image_potential(images, np.array([4e-3]))
    assert_allclose(potential * 4.0 * np.pi, 1.0 / 4e-3 - 1.0 / np.hypot(4e-3, 6e-3), rtol=1e-9)
