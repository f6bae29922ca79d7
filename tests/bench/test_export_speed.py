"""Time of exports; run with `pytest tests/bench/test_export_speed.py --benchmark-only`.

The aims: 0.5 s for any one, 1.5 s for all of one design together.
"""

import pytest
from drawn_designs import DRAWN

from core.formats.export import KINDS, ExportOptions, export_files
from core.layout.build import build_layout


@pytest.mark.parametrize("name", ["round", "huge"])
@pytest.mark.parametrize("kind", [*KINDS, "all"])
def test_time_of_an_export(benchmark, kind, name):
    layout = build_layout(DRAWN[name])
    kinds = list(KINDS) if kind == "all" else [kind]
    files = benchmark(export_files, DRAWN[name], layout, kinds, ExportOptions())
    assert all(file.data for file in files)
