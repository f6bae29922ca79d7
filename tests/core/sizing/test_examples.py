from importlib.resources import files
from pathlib import Path

import numpy as np
import pytest

from core.design.feed import DualEdge
from core.engines import ENGINES
from core.findings import has_refusal
from core.layout.build import build_layout
from core.progress import SILENT
from core.response.judge import State, judge
from core.response.model import Reading
from core.storage.project import read_project

EXAMPLES = sorted(Path(str(files("assets").joinpath("examples"))).glob("*.kerf"))


def test_there_is_an_example_for_each_kind_of_builder() -> None:
    assert [path.stem for path in EXAMPLES] == ["board", "probe-fed", "tape-build"]


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_example_can_be_built_and_leaves_two_branches_to_the_field_check(path: Path) -> None:
    design = read_project(path)
    layout = build_layout(design)
    assert not has_refusal(layout.findings)
    response = ENGINES["live"](layout, np.array([layout.frequency]), SILENT)
    brief = design.brief
    verdicts = judge(response, brief.polarisation, brief.vswr, brief.axial_ratio_db)
    told = {one.state for one in verdicts if one.reading in (Reading.MATCH, Reading.AXIAL_RATIO)}
    assert (told == {State.UNKNOWN}) is isinstance(design.feed, DualEdge)
