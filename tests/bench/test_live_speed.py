"""Time of one live evaluation over 200 different designs; run with `pytest tests/bench`."""

import numpy as np

from core.design.defaults import default_design
from core.design.edit import with_texts
from core.engines import ENGINES
from core.layout.build import build_layout
from core.live.respond import sample
from core.progress import SILENT
from core.response.bands import frequency_grid

DESIGNS = 200
SPACERS = (
    "air:6mm",
    "foam:5mm",
    "FR-4:1.6mm",
    "polystyrene:6mm",
    "foam:5mm + card:0.4mm",
    "card:0.5mm + foam:6mm + card:0.5mm",
)


def different_designs():
    random = np.random.default_rng(20_240_611)
    for i in range(DESIGNS):
        width, length = random.uniform(48.0, 60.0, 2)
        first, second = random.uniform(8.0, 22.0, 2)
        yield with_texts(
            default_design(),
            [
                ("stock.spacer", SPACERS[i % len(SPACERS)]),
                ("element.width", f"{width:.3f} mm"),
                ("element.length", f"{length:.3f} mm"),
                ("feed.first.landing", f"{first:.3f} mm"),
                ("feed.second.landing", f"{second:.3f} mm"),
                ("feed.first.width", f"{random.uniform(2.0, 4.0):.3f} mm"),
                ("feed.second.width", f"{random.uniform(2.0, 4.0):.3f} mm"),
                ("feed.delay_width", f"{random.uniform(2.0, 5.0):.3f} mm"),
                ("feed.delay_length", f"{random.uniform(45.0, 70.0):.3f} mm"),
                ("feed.lead_in.length", f"{random.uniform(0.0, 25.0):.3f} mm"),
            ],
        )


def test_layout_and_response_of_a_new_design(benchmark):
    designs = iter(list(different_designs()))

    def look(design):
        layout = build_layout(design)
        frequencies = frequency_grid(layout.frequency)
        return ENGINES["live"](layout, frequencies, SILENT)

    benchmark.pedantic(look, setup=lambda: ((next(designs),), {}), rounds=DESIGNS)
    assert benchmark.stats.stats.median < 8e-3


def test_response_alone(benchmark):
    layouts = iter([build_layout(design) for design in different_designs()])

    def look(layout):
        return ENGINES["live"](layout, frequency_grid(layout.frequency), SILENT)

    benchmark.pedantic(look, setup=lambda: ((next(layouts),), {}), rounds=DESIGNS)
    assert benchmark.stats.stats.median < 4e-3


def test_one_frequency_without_patterns(benchmark):
    layouts = iter([build_layout(design) for design in different_designs()])

    def look(layout):
        return sample(layout, np.array([layout.frequency]))

    benchmark.pedantic(look, setup=lambda: ((next(layouts),), {}), rounds=DESIGNS)
    assert benchmark.stats.stats.median < 2e-3
