"""``kerfwave export``: files that outside readers open, all of them or none."""

import csv
import json
from pathlib import Path
from xml.etree import ElementTree

import ezdxf.recover
import pypdfium2
import pytest
from sample_designs import tape_design

from app.command import main
from core.design.edit import with_texts
from core.storage import atomic
from core.storage.project import write_project

KINDS = ("template-svg", "template-pdf", "artwork-dxf", "cutlist-csv")


@pytest.fixture(autouse=True)
def project(tmp_path, monkeypatch):
    """The tape design as a.kerf, in the folder that the test runs in."""
    monkeypatch.chdir(tmp_path)
    write_project(Path("a.kerf"), tape_design(), replace=False)


def exported(*words):
    """Files by kind that an export into a new folder leaves there."""
    assert main(["export", "a.kerf", "--to", "out", *words]) == 0
    names = sorted(path.name for path in Path("out").iterdir())
    return {name.rpartition("r1-")[2].replace(".", "-"): Path("out") / name for name in names}


def refusal(capsys, words, status=2):
    assert main(words) == status
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("kerfwave export: ")
    assert err.count("\n") == 1
    return err


def test_every_kind_is_written_once_and_opens(capsys):
    files = exported("--as", *KINDS, "Template SVG")
    assert files.keys() == set(KINDS)
    assert ElementTree.parse(files["template-svg"]).getroot().get("width").endswith("mm")
    assert len(pypdfium2.PdfDocument(files["template-pdf"])) >= 1
    document, audit = ezdxf.recover.readfile(files["artwork-dxf"])
    assert document.header["$INSUNITS"] == 4
    assert not audit.has_issues
    rows = list(csv.reader(files["cutlist-csv"].read_text(encoding="utf-8").splitlines()))
    assert len({len(row) for row in rows}) == 1
    assert len(rows) > 1
    told = capsys.readouterr().out.splitlines()
    assert told[:4] == [f"written to {files[kind]}" for kind in KINDS]
    assert told[4].startswith("NOT FIELD-CHECKED")


@pytest.mark.parametrize(
    "words",
    [
        ["--as", "template-svg", "cutlist-csv"],
        ["--as", "template-svg", "--as", "cutlist-csv"],
        ["--as", "TEMPLATE svg", "--as", "CutList_CSV"],
    ],
)
def test_every_word_and_repetition_counts(words):
    assert exported(*words).keys() == {"template-svg", "cutlist-csv"}


@pytest.mark.parametrize(
    ("paper", "points"),
    [
        ("A4", (595.28, 841.89)),
        ("a3", (841.89, 1190.55)),
        ("letter", (612, 792)),
        ("tabloid", (792, 1224)),
    ],
)
def test_the_paper_is_the_one_asked_for(paper, points):
    """Sizes: ISO 216 and ANSI/ASME Y14.1, from memory."""
    page = pypdfium2.PdfDocument(exported("--as", "template-pdf", "--paper", paper)["template-pdf"])
    assert sorted(page[0].get_size()) == pytest.approx(points, abs=0.01)


def test_a_mirrored_template_has_another_name_and_the_artwork_stays():
    plain = exported("--as", *KINDS)
    before = {kind: path.read_bytes() for kind, path in plain.items()}
    assert main(["export", "a.kerf", "--to", "m", "--mirrored", "--as", *KINDS]) == 0
    names = sorted(path.name for path in Path("m").iterdir())
    assert sum("mirrored" in name for name in names) == 2
    assert (Path("m") / plain["artwork-dxf"].name).read_bytes() == before["artwork-dxf"]


def test_arcs_are_a_choice():
    facets = exported("--as", "artwork-dxf")["artwork-dxf"].stat().st_size
    assert main(["export", "a.kerf", "--to", "t", "--true-arcs", "--as", "artwork-dxf"]) == 0
    (arcs,) = Path("t").iterdir()
    assert arcs.stat().st_size < facets


def test_json_lists_the_files(capsys):
    assert main(["export", "a.kerf", "--as", "cutlist-csv", "--to", "x/y", "--json"]) == 0
    told = json.loads(capsys.readouterr().out)
    (name,) = told["files"]
    assert Path(name).is_file()
    assert Path(name).parent == Path("x/y")
    assert told["field_checked"] is False


def test_without_a_folder_the_files_come_here():
    assert main(["export", "a.kerf", "--as", "cutlist-csv"]) == 0
    assert Path("mast-7-r1-cutlist.csv").is_file()


def test_one_file_that_is_there_keeps_all_from_being_written(capsys):
    there = exported("--as", "artwork-dxf")["artwork-dxf"]
    there.write_bytes(b"dear diary")
    capsys.readouterr()
    words = ["export", "a.kerf", "--to", "out", "--as", *KINDS]
    assert "is there already; accepted: another name, or --replace" in refusal(capsys, words)
    assert [path.read_bytes() for path in Path("out").iterdir()] == [b"dear diary"]
    assert main([*words, "--replace"]) == 0
    assert len(list(Path("out").iterdir())) == 4
    assert there.read_bytes() != b"dear diary"


def test_a_failed_write_leaves_nothing_behind(capsys, monkeypatch):
    place = atomic._place

    def full_at_the_second(temporary, target, replace):
        if target.suffix == ".csv":
            raise OSError(28, "No space left on device")
        place(temporary, target, replace)

    monkeypatch.setattr(atomic, "_place", full_at_the_second)
    words = ["export", "a.kerf", "--to", "out", "--as", "template-svg", "cutlist-csv"]
    assert "cannot be written (No space left on device)" in refusal(capsys, words, status=1)
    assert list(Path("out").iterdir()) == []


def test_what_cannot_be_built_is_not_exported(capsys):
    write_project(
        Path("a.kerf"), with_texts(tape_design(), [("feed.delay_width", "1mm")]), replace=True
    )
    err = refusal(capsys, ["export", "a.kerf", "--to", "out", "--as", *KINDS])
    assert "a.kerf: this design cannot be built: The delay strip is 1 mm wide; knife cuts" in err
    assert not Path("out").exists()


def test_a_folder_that_cannot_be_made_is_told(capsys):
    err = refusal(capsys, ["export", "a.kerf", "--to", "a.kerf/x", "--as", *KINDS], status=1)
    assert "a.kerf/x: cannot be made (Not a directory); accepted: a folder" in err


AS = ["--as", "cutlist-csv"]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (AS, "left out: FILE; accepted: kerfwave export FILE --as WHAT"),
        (["a.kerf"], "left out: --as; accepted: kerfwave export FILE --as WHAT"),
        (["a.kerf", "--as"], "--as: expected at least one argument; accepted: kerfwave export F"),
        ([*AS, "a.kerf"], "left out: FILE; accepted: kerfwave export FILE --as WHAT"),
        (["a.kerf", "--as", "gerber"], "kind of export 'gerber' is not known; known are templ"),
        (["a.kerf", *AS, "--as", ""], "kind of export '' is not known; known are template-svg"),
        (["a.kerf", *AS, "--paper", "a5"], "paper 'a5' is not known; known are a4, a3, letter"),
        (["a.kerf", *AS, "--paper"], "--paper: expected one argument; accepted: kerfwave export"),
        (["a.kerf", *AS, "--to", "a.kerf"], "--to: a.kerf is a file; accepted: a folder"),
        (["a.kerf", *AS, "--mirror"], "'--mirror' is no option (did you mean --mirrored?)"),
        (["none.kerf", *AS], "none.kerf: there is no such file; accepted: a Kerfwave project"),
        ([".", *AS], ".: is a folder; accepted: a Kerfwave project file"),
        (["b.kerf", *AS], "b.kerf: is empty; accepted: a Kerfwave project file"),
    ],
)
def test_a_mistake_is_told_in_one_line(capsys, words, said):
    Path("b.kerf").touch()
    assert said in refusal(capsys, ["export", *words])
    assert sorted(path.name for path in Path().iterdir()) == ["a.kerf", "b.kerf"]
