"""The table of exports: names, refusals, and libraries that load when they are needed."""

import dataclasses
import re
import subprocess
import sys
from pathlib import Path

import pytest
from drawn_designs import DRAWN, changed
from hypothesis import given
from hypothesis import strategies as st

from core.design.edit import with_texts
from core.errors import ExportError, InputError
from core.findings import Finding, Severity
from core.formats.export import KINDS, ExportOptions, export_files, file_name, paper_named
from core.layout.build import build_layout

ROOT = Path(__file__).resolve().parents[3]
STARTS = {
    "template-svg": b"<?xml",
    "template-pdf": b"%PDF-1.6",
    "artwork-dxf": b"  0\nSECTION",
    "cutlist-csv": b"piece,",
}


def exported(design, kinds, **options):
    return export_files(design, build_layout(design), kinds, ExportOptions(**options))


@pytest.mark.parametrize("name", DRAWN)
def test_every_kind_of_every_design_is_written(name):
    files = exported(DRAWN[name], KINDS)
    assert len({file.name for file in files}) == len(KINDS)
    for kind, file in zip(KINDS, files, strict=True):
        assert file.data.startswith(STARTS[kind])
        assert file.name.endswith(KINDS[kind].suffix)


def test_kinds_are_found_as_people_type_them_and_made_once():
    names = [
        file.name
        for file in exported(DRAWN["tiny"], ["Template SVG", "template-svg", "cutlist_csv"])
    ]
    assert [name.rsplit("-", 1)[1] for name in names] == ["template.svg", "cutlist.csv"]


@pytest.mark.parametrize(
    ("kinds", "options", "message"),
    [
        (
            ["template-png"],
            {},
            "template-png.*template-svg, template-pdf, artwork-dxf, cutlist-csv",
        ),
        (["template-svg"], {"paper": "b5"}, "b5.*a4, a3, letter, tabloid"),
        (["cutlist-csv"], {"paper": "b5"}, "b5"),
    ],
)
def test_unknown_words_are_refused_with_those_that_are_known(kinds, options, message):
    with pytest.raises(InputError, match=message):
        exported(DRAWN["tiny"], kinds, **options)


def test_a_design_that_cannot_be_built_is_refused_in_its_own_words():
    design = changed(("feed.first.width", "0.2mm"))  # a knife does not cut that
    layout = build_layout(design)
    refusals = [one.message for one in layout.findings if one.severity is Severity.REFUSAL]
    assert refusals
    for kind in KINDS:
        with pytest.raises(ExportError, match=re.escape(refusals[0])) as caught:
            export_files(design, layout, [kind], ExportOptions())
        assert "\n" not in str(caught.value)


def test_warnings_do_not_stop_an_export():
    layout = build_layout(DRAWN["tiny"])
    warned = dataclasses.replace(
        layout, findings=(Finding("x", Severity.WARNING, "Mind the gap."),)
    )
    assert export_files(DRAWN["tiny"], warned, ["template-svg"], ExportOptions())


def test_an_allowance_that_closes_a_gap_is_refused_in_one_line():
    design = with_texts(DRAWN["tiny"], [("making.undercut", "0.65mm")])
    with pytest.raises(ExportError, match="closes the gap at") as caught:
        exported(design, ["artwork-dxf"])
    assert "\n" not in str(caught.value)
    assert exported(design, ["template-pdf"])  # a template is not grown


def test_mirroring_names_and_turns_templates_only():
    plain, turned = (
        dict(zip(KINDS, exported(DRAWN["left"], KINDS, mirrored=m), strict=True))
        for m in (False, True)
    )
    for kind in KINDS:
        changes = kind.startswith("template")
        assert (plain[kind].data != turned[kind].data) is changes
        assert ("mirrored" in turned[kind].name) is changes


def test_options_reach_their_writers():
    def data(kind, **options):
        return exported(DRAWN["round"], [kind], **options)[0].data

    assert b"NOT FIELD-CHECKED" in data("template-svg")
    assert b"NOT FIELD-CHECKED" not in data("template-svg", field_check="Field-checked")
    assert b"NOT FIELD-CHECKED" not in data("artwork-dxf", field_check="Field-checked")
    assert data("template-pdf", paper="letter") != data("template-pdf")
    assert len(data("artwork-dxf", true_arcs=True)) < len(data("artwork-dxf"))


@pytest.mark.parametrize("kind", KINDS)
def test_the_same_design_gives_the_same_bytes_in_another_process(kind):
    code = (
        "import hashlib, sys; sys.path[:0] = ['.', 'tests']\n"
        "from drawn_designs import DRAWN\n"
        "from core.formats.export import ExportOptions, export_files\n"
        "from core.layout.build import build_layout\n"
        "layout = build_layout(DRAWN['round'])\n"
        f"f, = export_files(DRAWN['round'], layout, ['{kind}'], ExportOptions())\n"
        "print(hashlib.sha256(f.data).hexdigest())"
    )
    run = [sys.executable, "-c", code]
    out = [
        subprocess.run(
            run, cwd=ROOT, capture_output=True, text=True, check=True, env={"PYTHONHASHSEED": s}
        )
        for s in ("1", "2")
    ]
    assert out[0].stdout == out[1].stdout


@pytest.mark.parametrize(
    ("name", "revision", "expected"),
    [
        ("Glider field telemetry", "1", "glider-field-telemetry-r1-template.svg"),
        ("Café Ωmega / λ", "2b", "cafe-mega-r2b-template.svg"),
        ("../../etc/passwd", "1", "etc-passwd-r1-template.svg"),
        ("", "", "antenna-r0-template.svg"),
        ("地面", "*", "antenna-r0-template.svg"),
        ("con", "1", "con-r1-template.svg"),
    ],
)
def test_file_names_are_plain(name, revision, expected):
    design = dataclasses.replace(DRAWN["tiny"], name=name, revision=revision)
    assert file_name(design, KINDS["template-svg"], ExportOptions()) == expected


@given(st.text(max_size=60).filter(str.isprintable), st.text(max_size=12).filter(str.isprintable))
def test_no_name_leads_out_of_its_folder(name, revision):
    design = dataclasses.replace(DRAWN["tiny"], name=name, revision=revision)
    for kind in KINDS.values():
        given_name = file_name(design, kind, ExportOptions(mirrored=True))
        assert re.fullmatch(r"[a-z0-9][a-z0-9-]*\.[a-z]{3}", given_name)
        assert len(given_name) <= 100


def test_papers_are_found_as_people_type_them():
    assert paper_named("A 4") is paper_named("a4")


def test_the_table_loads_no_library_before_it_writes():
    code = "import sys, core.formats.export; print(*sys.modules)"
    run = [sys.executable, "-c", code]
    loaded = subprocess.run(run, cwd=ROOT, capture_output=True, text=True, check=True).stdout
    roots = {name.split(".")[0] for name in loaded.split()}
    assert not roots & {"reportlab", "ezdxf", "svgwrite", "fontTools"}
