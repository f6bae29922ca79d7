"""Against a general boundary-element library; `pytest tests/bench`, with the extra `validation`."""

import pytest

pytest.importorskip("bempp_cl")
pytestmark = pytest.mark.filterwarnings("default")

from bench.validate_elements import PATCHES, PLATES, patch_case, plate_case


@pytest.mark.parametrize("case", [next(iter(PLATES))])
def test_plate(case):
    found = plate_case(PLATES[case])
    assert found["field"] < 0.01


@pytest.mark.parametrize("case", [next(iter(PATCHES))])
def test_patch_over_a_plate(case):
    found = patch_case(PATCHES[case])
    ours, theirs = (complex(*one) for one in found["seen"])
    assert found["field"] < 0.01
    assert abs(ours / theirs - 1.0) < 0.03
