"""Against a general boundary-element library; `pytest tests/bench`, with the extra `validation`."""

import warnings

import pytest

with warnings.catch_warnings():
    warnings.simplefilter("ignore")  # the library imports what scipy calls outdated
    pytest.importorskip("bempp_cl.api")

from bench.validate_elements import PATCHES, PLATES, patch_case, plate_case

pytestmark = pytest.mark.filterwarnings("default")


def test_plate():
    assert plate_case(next(iter(PLATES.values())))["field"] < 0.01


def test_patch_over_a_plate():
    found = patch_case(next(iter(PATCHES.values())))
    ours, theirs = (complex(*one) for one in found["seen"])
    assert found["field"] < 0.01
    assert abs(ours / theirs - 1.0) < 0.03
