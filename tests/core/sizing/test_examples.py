"""Designs that come with the program: buildable, and within their brief as solved."""

from importlib.resources import files
from pathlib import Path

import pytest

from core.design.defaults import default_design
from core.design.model import Design
from core.findings import has_refusal
from core.fullwave.mesh import Level
from core.layout.build import build_layout
from core.sizing.goal import Goal
from core.sizing.solved import FieldSpot
from core.storage.project import read_project

EXAMPLES = sorted(Path(str(files("assets").joinpath("examples"))).glob("*.kerf"))
DESIGNS = [default_design(), *(read_project(path) for path in EXAMPLES)]


def test_there_is_an_example_for_each_kind_of_builder() -> None:
    assert [path.stem for path in EXAMPLES] == ["board", "probe-fed", "tape-build"]


@pytest.mark.parametrize("design", DESIGNS, ids=lambda design: design.name)
def test_it_can_be_built_and_is_within_its_brief_on_the_finest_mesh(design: Design) -> None:
    layout = build_layout(design)
    assert not has_refusal(layout.findings)
    brief = design.brief
    goal = Goal(brief.polarisation, brief.impedance, brief.vswr, brief.axial_ratio_db)
    solved = FieldSpot()(layout, brief.frequency, Level.FINE)
    assert goal.worst(goal.missing(*solved)) <= 1.0
