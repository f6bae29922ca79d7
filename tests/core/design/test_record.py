import json
from typing import Any

import pytest

from core.design.defaults import default_design
from core.design.edit import with_text, with_texts
from core.design.record import from_record, short_code, to_record
from core.errors import InputError

DESIGNS = [
    default_design(),
    with_texts(default_design(), [("brief.polarisation", "linear"), ("feed", "probe")]),
    with_texts(
        default_design(),
        [
            ("stock.ground", "rect:80x90"),
            ("stock.spacer", "air:10mm+card:1mm"),
            ("feed.lead_in.length", "30mm"),
            ("feed.lead_in.bends", "12mm left, 20mm right"),
            ("materials.mdf", "er=2.6,tan=0.12"),
        ],
    ),
]


@pytest.mark.parametrize("design", DESIGNS, ids=["default", "probe", "lead-in"])
def test_record_survives_json(design: Any) -> None:
    assert from_record(json.loads(json.dumps(to_record(design)))) == design


def _changed(path: str, value: Any) -> dict[str, Any]:
    record = to_record(default_design())
    part: Any = record
    *heads, last = path.split(".")
    for head in heads:
        part = part[int(head)] if isinstance(part, list) else part[head]
    if value is KeyError:
        del part[last]
    else:
        part[last] = value
    return record


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("element.width", "54 mm"),
        ("element.width", True),
        ("element.width", None),
        ("element.width", float("nan")),
        ("element.width", -1.0),
        ("element.width", KeyError),
        ("element.depth", 1.0),
        ("stock.ground.shape", "triangle"),
        ("stock.spacer", {}),
        ("stock.spacer", []),
        ("stock.spacer.0.eps_r", 0.2),
        ("feed.kind", "both"),
        ("feed.corners", "round"),
        ("brief", None),
        ("name", 3),
    ],
)
def test_a_damaged_record_is_refused_with_its_place(path: str, value: Any) -> None:
    with pytest.raises(InputError) as refusal:
        from_record(_changed(path, value))
    assert path.split(".", maxsplit=1)[0] in str(refusal.value)
    assert "\n" not in str(refusal.value)


@pytest.mark.parametrize("record", [None, [], "design", 3])
def test_what_is_no_record_is_refused(record: object) -> None:
    with pytest.raises(InputError, match="an object"):
        from_record(record)


def test_short_code_follows_every_change() -> None:
    design = default_design()
    assert short_code(design) == short_code(default_design())
    assert short_code(with_text(design, "feed.tee", "0.01 mm")) != short_code(design)
    assert len(short_code(design)) == 6
