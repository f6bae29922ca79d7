"""What a small ground plate takes from the directivity."""

import numpy as np
import pytest

from core.constants import SPEED_OF_LIGHT
from core.lines.stack import Layer
from core.live.pattern import plate_share

ONE = np.array([SPEED_OF_LIGHT])  # a wavelength of 1 m


@pytest.mark.parametrize(
    ("reach", "solved_db"),
    # The field solver's differences from an endless plate, docs/live-errors.md: within 0.6 dB.
    [(0.033, 1.24), (0.081, 1.20), (0.123, 0.96), (0.167, 0.82), (0.256, 0.22), (0.326, -0.12)],
)
def test_small_plates_take_as_much_as_was_solved(reach, solved_db):
    found = -10.0 * np.log10(plate_share(reach, Layer(5e-3, 1.07), ONE))
    assert found == pytest.approx([solved_db], abs=0.3)


def test_a_board_and_a_wide_plate_are_left_alone():
    assert plate_share(0.01, Layer(1.6e-3, 4.3), ONE) == [1.0]
    assert plate_share(0.5, Layer(5e-3), ONE) == [1.0]
