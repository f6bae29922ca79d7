"""The command as a whole: what it prints, where, and its exit status."""

import json
import os
import subprocess
import sys
from importlib.metadata import version
from pathlib import Path

import pytest
from sample_designs import tape_design

from app import command
from app.command import VERBS, main
from core.errors import ModelError
from core.storage.project import write_project

ROOT = Path(__file__).resolve().parents[2]
LINE = ["line", "--spacer", "FR-4:1.6mm", "--width", "3mm"]


@pytest.fixture
def project(tmp_path, monkeypatch):
    """A good project by a short name, in the folder that the test runs in."""
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv("KERFWAVE_TRACEBACK", raising=False)
    write_project(Path("a.kerf"), tape_design(), replace=False)
    return Path("a.kerf")


@pytest.fixture
def no_display(monkeypatch):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)


def started(*words, cwd=ROOT, **options):
    """`python -m app` with these words, as a process of its own."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT), **options.pop("env", {})}
    return subprocess.run(
        [sys.executable, "-m", "app", *words],
        cwd=cwd,
        env=environment,
        capture_output=True,
        timeout=60,
        check=False,
        **options,
    )


def test_help_lists_every_verb(capsys):
    assert main(["--help"]) == 0
    text = capsys.readouterr().out
    for verb, summary in VERBS.items():
        assert f"kerfwave {verb} " in text
        assert summary in text


def test_the_version_is_that_of_the_package(capsys):
    assert main(["--version"]) == 0
    assert capsys.readouterr().out == f"kerfwave {version('kerfwave')}\n"


@pytest.mark.parametrize("verb", VERBS)
@pytest.mark.parametrize("word", ["-h", "--help"])
def test_every_verb_tells_what_it_takes(capsys, verb, word):
    assert main([verb, word]) == 0
    text = capsys.readouterr().out
    assert text.startswith(f"usage: kerfwave {verb} ")
    assert VERBS[verb] in text


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["lin"], "kerfwave: 'lin' is no verb (did you mean line?); accepted: "),
        (["SET"], "kerfwave: 'SET' is no verb (did you mean set?)"),
        (["frobnicate"], "kerfwave: 'frobnicate' is no verb; accepted: "),
        (["frob" * 2000], "is no verb; accepted: "),
        (["--versoin"], "kerfwave: '--versoin' is no option (did you mean --version?)"),
        (["-x"], "kerfwave: '-x' is no option; accepted: --help, --version"),
        (["a.kerf", "b.kerf"], "kerfwave: 'b.kerf' is one word too many; accepted: one project"),
        (["none.kerf"], "kerfwave: none.kerf: there is no such file; accepted: "),
        (["."], "kerfwave: .: is a folder; accepted: "),
        (["empty.kerf"], "kerfwave: empty.kerf: is empty; accepted: "),
        (["set"], "kerfwave set: left out: FILE, KEY=VALUE; accepted: kerfwave set "),
        ([*LINE, "--frequncy", "1GHz"], "line: '--frequncy' is no option (did you mean --freq"),
        ([*LINE, "--freq", "1GHz"], "kerfwave line: '--freq' is no option (did you mean --freq"),
        ([*LINE, "--json=yes"], "kerfwave line: --json: ignored explicit argument 'yes'"),
        (["set", "a\nb.kerf", "a=1"], "kerfwave set: a\\nb.kerf: there is no such file"),
        (["set", "\udcff.kerf", "a=1"], "kerfwave set: \\udcff.kerf: there is no such file"),
        (["set", "\x1b[2J.kerf", "a=1"], "kerfwave set: \\x1b[2J.kerf: there is no such file"),
        (["\udcff\udcfe"], "is no verb; accepted: "),
        (["set", "n" * 5000, "a=1"], "cannot be read (File name too long)"),
    ],
)
def test_a_mistake_is_told_in_one_line(project, capsys, words, said):
    Path("empty.kerf").touch()
    assert main(words) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert said in err
    assert "accepted: " in err
    assert err.endswith("\n")
    assert err.count("\n") == 1


def test_without_words_and_without_a_display_it_says_so(capsys, no_display):
    assert main([]) == 1
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("kerfwave: there is no display")
    assert err.count("\n") == 1


def test_a_good_file_without_a_display_is_no_bad_input(project, capsys, no_display):
    assert main(["a.kerf"]) == 1
    assert "there is no display" in capsys.readouterr().err


@pytest.mark.parametrize("words", [[], ["./a.kerf"], ["A.KERF"]])
def test_the_workbench_opens_with_the_file_that_is_named(project, monkeypatch, words):
    opened = []
    monkeypatch.setattr(command, "open_workbench", lambda path: opened.append(path) or 0)
    assert main(words) == 0
    assert opened == [Path(words[0]) if words else None]


def test_an_interrupt_is_quiet(capsys, monkeypatch):
    monkeypatch.setattr(command, "_dispatch", raising(KeyboardInterrupt()))
    assert main(LINE) == 130
    assert capsys.readouterr() == ("", "")


def test_a_model_that_cannot_answer_is_no_bad_input(capsys, monkeypatch):
    monkeypatch.setattr(command, "_dispatch", raising(ModelError("it did not settle")))
    assert main(LINE) == 1
    assert capsys.readouterr().err == "kerfwave line: it did not settle\n"


@pytest.mark.parametrize(("told", "lines"), [("0", 1), ("1", 5)])
def test_a_fault_of_our_own_is_one_line_unless_asked(capsys, monkeypatch, told, lines):
    monkeypatch.setenv("KERFWAVE_TRACEBACK", told)
    monkeypatch.setattr(command, "_dispatch", raising(RuntimeError("first\nsecond")))
    assert main(LINE) == 1
    err = capsys.readouterr().err
    assert "a fault of the program itself (RuntimeError: first\\nsecond); KERFWAVE_TRACE" in err
    assert (err.count("\n") == 1) == (lines == 1)
    assert ("Traceback" in err) == (lines > 1)


def raising(error):
    def call(*arguments):
        raise error

    return call


def test_the_module_and_the_script_are_the_same_command(project):
    script = Path(sys.executable).with_name("kerfwave")
    by_script = subprocess.run([script, *LINE, "--json"], capture_output=True, check=True)
    by_module = started(*LINE, "--json")
    assert by_module.returncode == 0
    assert by_module.stdout == by_script.stdout
    assert json.loads(by_module.stdout)["width_m"] == 0.003


def test_verbs_load_no_qt_when_they_work(project):
    runs = [
        ["size", "--engine", "live", "--feed", "probe", "-o", "p.kerf"],
        ["set", "a.kerf", "element.width=53mm"],
        ["show", "a.kerf"],
        ["readings", "a.kerf"],
        ["export", "a.kerf", "--as", "template-svg", "template-pdf", "artwork-dxf", "cutlist-csv"],
        LINE,
    ]
    assert {words[0] for words in runs} == VERBS.keys()
    code = (
        "import sys\nfrom app.command import main\n"
        f"assert [main(words) for words in {runs}] == [0] * {len(runs)}\n"
        "print('PySide6' in sys.modules or 'pyqtgraph' in sys.modules)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code],
        cwd=project.parent,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.stderr == ""
    assert done.stdout.splitlines()[-1] == "False"


def test_a_process_passes_the_exit_status_on(project):
    done = started("set", "none.kerf", "a=1", cwd=project.parent)
    assert done.returncode == 2
    assert done.stdout == b""
    assert done.stderr.count(b"\n") == 1


def test_a_reader_that_stops_early_is_no_fault(project):
    words = [sys.executable, "-m", "app", "line", "--help"]
    reader, writer = os.pipe()
    os.close(reader)
    done = subprocess.run(words, cwd=ROOT, stdout=writer, stderr=subprocess.PIPE, check=False)
    os.close(writer)
    assert done.stderr == b""
    assert done.returncode == 1


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no device that is always full")
def test_an_answer_that_cannot_be_written_is_told():
    words = [sys.executable, "-m", "app", *LINE]
    with Path("/dev/full").open("wb") as full:
        done = subprocess.run(words, cwd=ROOT, stdout=full, stderr=subprocess.PIPE, check=False)
    assert done.stderr == (
        b"kerfwave: standard output cannot be written (No space left on device)\n"
    )
    assert done.returncode == 1


def test_a_terminal_that_knows_few_letters_gets_them_spelled_out():
    done = started(*LINE, env={"PYTHONIOENCODING": "ascii"})
    assert done.returncode == 0
    assert rb"50.71 \u03a9" in done.stdout


def test_bytes_that_are_no_text_are_taken_as_a_name(project):
    done = started(b"set", b"\xff.kerf", b"a=1", cwd=project.parent)
    assert done.returncode == 2
    assert done.stderr == (
        b"kerfwave set: \\udcff.kerf: there is no such file; "
        b"accepted: a Kerfwave project file (.kerf)\n"
    )
