"""``kerfwave set``: edits by dotted name, checked like those in the window."""

import json
from pathlib import Path

import pytest
from sample_designs import tape_design

from app.command import main
from core.design.edit import value_at, with_texts
from core.design.record import from_record
from core.storage.project import read_project, write_project

DESIGN = tape_design()


@pytest.fixture
def project(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    path = Path("a.kerf")
    write_project(path, DESIGN, replace=False)
    return path


def refusal(capsys, words, status=2):
    """The one line on standard error of a call that must fail."""
    assert main(words) == status
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("\n") == 1
    return err


def test_a_length_is_changed_in_place(project, capsys):
    assert main(["set", "a.kerf", "element.length=41.5mm"]) == 0
    assert read_project(project) == with_texts(DESIGN, [("element.length", "41.5 mm")])
    assert capsys.readouterr().out == ("element.length  54 mm -> 41.5 mm\nwritten to a.kerf\n")


def test_the_words_come_in_any_order(project, capsys):
    words = ["--replace", "a.kerf", "element.width=50", "-o", "b.kerf", "element.length=2 1/8 in"]
    assert main(["set", *words]) == 0
    changed = read_project(Path("b.kerf"))
    assert (changed.element.width, changed.element.length) == (0.05, 0.053975)
    assert read_project(project) == DESIGN


def test_changes_that_need_each_other_are_taken_in_any_order(project):
    assert main(["set", "a.kerf", "brief.polarisation=Linear", "feed=probe"]) == 0
    assert value_at(read_project(project), "brief.polarisation").value == "linear"


@pytest.mark.parametrize("key", ["Element.Length", "ELEMENT.length", " element.length "])
def test_names_fold_case(project, key):
    assert main(["set", "a.kerf", f"{key}=41.5mm"]) == 0
    assert read_project(project).element.length == 0.0415


@pytest.mark.parametrize(
    "change", ["feed.delay-length=60mm", "Feed.Delay Length=60mm", "feed.delaylength=6cm"]
)
def test_names_fold_hyphens_and_spaces(project, change):
    assert main(["set", "a.kerf", change]) == 0
    assert read_project(project).feed.delay_length == 0.06


def test_whole_parts_fold_too(project):
    assert main(["set", "a.kerf", "Stock.Spacer.1=Card:1mm", "STOCK.ground=Disc:30cm"]) == 0
    stock = read_project(project).stock
    assert (stock.spacer[0].material, stock.ground.diameter) == ("card", 0.3)


def test_parts_that_go_and_come_are_shown(project, capsys):
    assert main(["set", "a.kerf", "feed=probe"]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert any(line.split() == ["feed.x", "(none)", "->", "10.8", "mm"] for line in lines)
    assert any(line.split() == ["feed.tee", "0", "mm", "->", "(none)"] for line in lines)


def test_what_can_no_longer_be_built_is_said_at_once(project, capsys):
    assert main(["set", "a.kerf", "feed.first.width=0.5mm"]) == 0
    out = capsys.readouterr().out
    assert "can't be built: The first branch is 0.5 mm wide; knife cuts nothing narrower" in out
    assert main(["set", "a.kerf", "feed.first.width=0.6mm", "--json"]) == 0
    codes = [one["code"] for one in json.loads(capsys.readouterr().out)["findings"]]
    assert "strip-too-narrow" in codes


def test_values_that_were_so_already_are_said_to_be(project, capsys):
    assert main(["set", "a.kerf", "element.length=5.4cm"]) == 0
    assert "nothing changed" in capsys.readouterr().out


def test_json_tells_what_changed_and_the_whole_design(project, capsys):
    assert main(["set", "a.kerf", "element.length=41.5mm", "name=Mast 2", "--json"]) == 0
    told = json.loads(capsys.readouterr().out)
    assert told["file"] == "a.kerf"
    assert told["changed"] == ["name", "element.length"]
    assert from_record(told["design"]) == read_project(project)


def test_another_name_for_the_same_file_needs_no_leave(project):
    Path("link.kerf").symlink_to("a.kerf")
    assert main(["set", "a.kerf", "element.length=41mm", "-o", "link.kerf"]) == 0
    assert read_project(project).element.length == 0.041
    assert Path("link.kerf").is_symlink()


def test_another_file_needs_leave(project, capsys):
    Path("b.kerf").write_bytes(b"dear diary")
    words = ["set", "a.kerf", "element.length=41mm", "-o", "b.kerf"]
    assert refusal(capsys, words) == (
        "kerfwave set: b.kerf: is there already; accepted: another name, or --replace\n"
    )
    assert Path("b.kerf").read_bytes() == b"dear diary"
    assert main([*words, "--replace"]) == 0
    assert read_project(Path("b.kerf")).element.length == 0.041


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        (["element.length"], "'element.length' is no change; accepted: KEY=VALUE, such as"),
        (["=41mm"], "'=41mm' is no change; accepted: KEY=VALUE"),
        (["element.length="], "element.length: '' is empty; accepted: a number in mm"),
        (["element.length=banana"], "element.length: 'banana' is not a length; accepted: "),
        (["element.length=nan"], "element.length: 'nan' is not a length; accepted: "),
        (["element.length=inf"], "element.length: 'inf' is not a length; accepted: "),
        (["element.length=-3mm"], "element.length: '-3mm' is out of range; accepted: 0.5 mm to"),
        (["element.length=0"], "element.length: '0' is out of range; accepted: 0.5 mm to 3 m"),
        (["element.length=1e9 m"], "element.length: '1e9 m' is out of range; accepted: "),
        (["element.length=2.4GHz"], "'2.4GHz' has the unit of a frequency, not of a length"),
        (["element.length=\udcff"], "element.length: "),
        (["element.lenght=3"], "'element.lenght' is no parameter of this design; accepted: "),
        (["nonsense=3"], "'nonsense' is no parameter of this design; accepted: "),
        (["element=disc:4cm"], "element: 'disc:4cm' is not taken; accepted: rect:WIDTHxLENGTH"),
        (["stock.spacer=cheese:3mm"], "material 'cheese' is not known; known are air, "),
        (["stock.spacer.9.thickness=1mm"], "stock.spacer.9.thickness"),
        (["brief.polarisation=diagonal"], "'diagonal' is not taken; accepted: linear, rhcp, lhcp"),
        (["brief.polarisation=linear"], "dual-edge branches make circular polarisation only"),
        (["name=a\nb"], "name: 'a\\nb' is not taken; accepted: up to 60 printable"),
        (["element.length=3", "Element.Length=4"], "'Element.Length' is given twice; accepted: "),
        (["element.length=3", "element.length=4"], "'element.length' is given twice; accepted: "),
        (["element.length=41mm", "element.width=x"], "element.width: 'x' is not a length"),
    ],
)
def test_a_change_that_is_not_taken_changes_nothing(project, capsys, changes, said):
    before = project.read_bytes()
    err = refusal(capsys, ["set", "a.kerf", *changes])
    assert err.startswith("kerfwave set: ")
    assert said in err
    assert "accepted: " in err or "known are " in err
    assert project.read_bytes() == before


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"", "a.kerf: is empty"),
        (b'{"kerfwave": 2}', "a.kerf: was written by a newer Kerfwave (form 2)"),
        (b'{"kerfwave": 1', "a.kerf: is damaged at line 1, column 15"),
        (b"\xff\xfe", "a.kerf: is not UTF-8 text (byte 1)"),
    ],
)
def test_a_project_that_cannot_be_read_is_left_alone(project, capsys, data, said):
    project.write_bytes(data)
    assert said in refusal(capsys, ["set", "a.kerf", "element.length=41mm"])
    assert project.read_bytes() == data


@pytest.mark.parametrize(
    ("goal", "said"),
    [
        ("none/b.kerf", "none/b.kerf: cannot be written (No such file or directory)"),
        (".", ".: is a folder; accepted: the name of a file"),
    ],
)
def test_a_failed_write_is_told(project, capsys, goal, said):
    words = ["set", "a.kerf", "element.length=41mm", "-o", goal, "--replace"]
    assert said in refusal(capsys, words, status=1)
    assert read_project(project) == DESIGN
