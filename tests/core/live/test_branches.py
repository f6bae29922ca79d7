"""What a strip is where it lands on the element."""

import numpy as np
import pytest

from core.lines.microstrip import line_properties
from core.live.branches import build_branches

FREQUENCIES = np.linspace(2.3e9, 2.6e9, 4)


def arms(layout, extensions):
    return build_branches(layout.feed, layout.stack, layout.foil, FREQUENCIES, extensions).arms


def test_a_landing_takes_off_what_the_strip_holds_over_the_fringing(dual_edge):
    layout = dual_edge()
    extensions = (3e-3, 4e-3)
    for open_end, covered, landing, extension in zip(
        arms(layout, (0.0, 0.0)),
        arms(layout, extensions),
        layout.feed.landings,
        extensions,
        strict=True,
    ):
        line = line_properties(
            landing.width, layout.stack, FREQUENCIES, conductor_thickness=layout.foil.thickness
        )
        # Capacitance per length from the phase constant: beta = omega Z C'.
        beta = line.propagation_constant.imag
        taken = -1j * beta / line.characteristic_impedance * extension
        assert covered.b == pytest.approx(open_end.b, rel=1e-12)
        assert covered.a == pytest.approx(open_end.a + open_end.b * taken, rel=1e-9)
        assert covered.c == pytest.approx(open_end.c + open_end.d * taken, rel=1e-9)


def test_a_landing_changes_no_power(dual_edge):
    layout = dual_edge()
    for open_end, covered in zip(arms(layout, (0.0, 0.0)), arms(layout, (3e-3, 3e-3)), strict=True):
        # Reciprocity: the determinant stays 1.
        for arm in (open_end, covered):
            assert arm.a * arm.d - arm.b * arm.c == pytest.approx(np.ones(4), rel=1e-9)
