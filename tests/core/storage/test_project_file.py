"""Project files: the same design comes back, and what is no good file is refused in a line."""

import dataclasses
import json
import os

import pytest
from design_strategies import designs
from hypothesis import HealthCheck, given, settings
from sample_designs import tape_design

from core.design.edit import with_text
from core.design.record import to_record
from core.errors import CoreError, ExistingFileError, FileError, ProjectFormatError
from core.storage.project import read_project, write_project

DESIGN = tape_design()
GOOD = json.dumps({"kerfwave": 1, "design": to_record(DESIGN)}).encode()
LARGEST = 5_000_000


@pytest.fixture
def path(tmp_path):
    return tmp_path / "antenna.kerf"


def record():
    return json.loads(GOOD)


def changed(key, value):
    """Bytes of the default project with the value at a dotted key replaced."""
    whole = record()
    part = whole
    *heads, last = key.split(".")
    for head in heads:
        part = part[head]
    part[last] = value
    return json.dumps(whole).encode()


def without(key):
    whole = record()
    del whole[key]
    return json.dumps(whole).encode()


@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None)
@given(design=designs())
def test_any_design_comes_back_as_it_was(path, design):
    write_project(path, design, replace=True)
    assert read_project(path) == design


def test_the_file_is_indented_json_with_the_form_first(path):
    write_project(path, DESIGN, replace=False)
    text = path.read_text(encoding="utf-8")
    assert text.startswith('{\n  "kerfwave": 1,\n  "design": {\n')
    assert json.loads(text)["design"]["element"] == {"width": 0.054, "length": 0.054}


def test_text_beyond_ascii_is_kept_readable(path):
    write_project(path, with_text(DESIGN, "name", "Dächer 2,4 GHz µ"), replace=False)
    assert "Dächer 2,4 GHz µ" in path.read_text(encoding="utf-8")


def test_a_byte_order_mark_does_no_harm(path):
    path.write_bytes(b"\xef\xbb\xbf" + GOOD)
    assert read_project(path) == DESIGN


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"", "is empty; accepted: a Kerfwave project"),
        (b" \n\t ", "is empty"),
        (b'{"kerfwave": 1,\n "design": {]}', "is damaged at line 2, column 13"),
        (GOOD[:200], "is damaged at line"),
        (GOOD + b"{}", "is damaged at line"),
        (b"\x89PNG\r\n\x1a\n", "is not UTF-8 text (byte 1)"),
        (GOOD.replace(b"Mast", b"M\xffst"), "is not UTF-8 text (byte"),
        (b"[]", "is not a Kerfwave project; accepted"),
        (b"17", "is not a Kerfwave project"),
        (b'{"design": {}}', "is not a Kerfwave project"),
        (without("design"), "holds no design"),
        (changed("kerfwave", 2), "was written by a newer Kerfwave (form 2); accepted: form 1"),
        (changed("kerfwave", 0), 'is damaged: "kerfwave" must be the version, 1'),
        (changed("kerfwave", True), 'is damaged: "kerfwave" must be the version, 1'),
        (changed("kerfwave", "1"), 'is damaged: "kerfwave" must be the version, 1'),
        (changed("kerfwave", 1.5), 'is damaged: "kerfwave" must be the version, 1'),
        (changed("later", 1), "'later' is not known"),
        (changed("design.later", 1), "later: "),
        (changed("design.element", {"width": 0.05}), "element.length: "),
        (changed("design.element", [1, 2]), "element: "),
        (changed("design.element.width", "5 cm"), "element.width: '5 cm' is not taken"),
        (changed("design.element.width", -0.05), "width: -50 mm is out of range; accepted: 0.5 mm"),
        (changed("design.element.width", float("nan")), "is damaged: NaN is no number"),
        (changed("design.element.width", float("-inf")), "is damaged: -Infinity is no number"),
        (GOOD.replace(b"0.054", b"1e999"), "is damaged: 1e999 is too large a number"),
        (GOOD.replace(b"0.054", b"9" * 5000), "is too large a number"),
        (GOOD.replace(b"0.054", b"9" * 300), "width: "),
        (changed("design.name", "two\nlines"), "name: "),
        (GOOD.replace(b"Mast", b"\\ud800"), "name: "),
        (GOOD.replace(b'"length"', b'"width"'), "is damaged: 'width' stands there twice"),
        (changed("design.brief.polarisation", "linear"), "make circular polarisation only"),
        (changed("design.brief.polarisation", []), "brief.polarisation: '[]' is not taken"),
        (b"[" * 200_000, "is damaged: nested too deeply"),
        (b" " * (LARGEST + 1), "is larger than 5 MB"),
        (changed("x" * 100_000, 1), "is not known"),
        (changed("design." + "x" * 100_000, 1), "accepted: only name"),
    ],
)
def test_a_bad_file_is_refused_in_one_line(path, data, said):
    path.write_bytes(data)
    with pytest.raises(ProjectFormatError) as refusal:
        read_project(path)
    message = str(refusal.value)
    assert message.startswith(f"{path}: ")
    assert said in message
    assert "accepted: " in message
    assert "\n" not in message
    assert len(message) < 600
    assert refusal.value.path == path


def test_a_large_file_is_read_up_to_the_limit_only(path):
    padded = GOOD + b" " * (LARGEST - len(GOOD))
    path.write_bytes(padded)
    assert read_project(path) == DESIGN


def test_a_missing_file_is_told(path):
    with pytest.raises(FileError, match=r"antenna\.kerf: there is no such file; accepted: "):
        read_project(path)


def test_a_folder_is_no_project(tmp_path):
    with pytest.raises(FileError, match="is a folder; accepted: "):
        read_project(tmp_path)


def test_a_pipe_is_not_waited_for(path):
    os.mkfifo(path)
    with pytest.raises(FileError, match="is a device or pipe; accepted: "):
        read_project(path)


def test_a_file_below_another_file_cannot_be_read(path):
    path.write_bytes(GOOD)
    with pytest.raises(FileError, match=r"cannot be read .*; accepted: "):
        read_project(path / "inner.kerf")


def test_a_design_that_would_not_read_back_leaves_the_file_alone(path):
    path.write_bytes(GOOD)
    broken = dataclasses.replace(DESIGN.element)
    object.__setattr__(broken, "width", float("nan"))
    with pytest.raises(CoreError, match="nothing was written"):
        write_project(path, dataclasses.replace(DESIGN, element=broken), replace=True)
    assert path.read_bytes() == GOOD


def test_saving_over_another_file_needs_leave(path):
    path.write_bytes(b"dear diary")
    with pytest.raises(ExistingFileError, match="is there already; accepted: "):
        write_project(path, DESIGN, replace=False)
    assert path.read_bytes() == b"dear diary"
