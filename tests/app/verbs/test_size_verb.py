"""``kerfwave size``: from options to a project whose readings meet its brief."""

import json
from dataclasses import replace
from pathlib import Path

import pytest

from app.command import main
from core.design.polarisation import Polarisation
from core.design.record import from_record
from core.engines import ENGINES
from core.fullwave.mesh import Level
from core.live.respond import respond
from core.response.model import Reading, Trust, TrustLevel
from core.sizing.settle import Settling
from core.storage.project import read_project

LIVE = ("--engine", "live")


@pytest.fixture(autouse=True)
def folder(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def sized(capsys):
    """What `size` tells as JSON."""

    def call(*words):
        assert main(["size", *LIVE, *words, "--json"]) == 0
        out, err = capsys.readouterr()
        assert err == ""
        return json.loads(out)

    return call


@pytest.fixture
def readings(capsys):
    def call(name):
        assert main(["readings", name, "--json"]) == 0
        return json.loads(capsys.readouterr().out)

    return call


def test_without_any_word_a_good_antenna_comes_out(sized, readings):
    told = sized("-o", "first.kerf")
    assert told["met"] is True
    assert told["file"] == "first.kerf"
    assert from_record(told["design"]) == read_project(Path("first.kerf"))
    # What is met is the estimate; with two branches nobody should cut by it.
    states = {one["reading"]: one["state"] for one in readings("first.kerf")["verdicts"]}
    assert states["match"] == states["axial_ratio"] == "unknown"


def test_without_a_file_nothing_is_written(folder, capsys):
    assert main(["size", *LIVE, "--feed", "probe"]) == 0
    assert capsys.readouterr().out.endswith("\nnot written: -o FILE was left out\n")
    assert list(folder.iterdir()) == []


def test_the_brief_is_as_it_was_given(sized, readings):
    words = ["--frequency", "2,45 GHz", "--polarisation", "LHCP", "--impedance", "75 ohm"]
    told = sized(
        *words, "--vswr", "1.8", "--axial-ratio", "2.5 dB", "--name", "Gate", "-o", "g.kerf"
    )
    design = from_record(told["design"])
    brief = design.brief
    assert design.name == "Gate"
    assert (brief.frequency, brief.impedance) == (2.45e9, 75.0)
    assert (brief.vswr, brief.axial_ratio_db) == (1.8, 2.5)
    assert brief.polarisation is Polarisation.LHCP
    assert readings("g.kerf")["sense"] == "lhcp"


@pytest.mark.parametrize(
    ("words", "process", "foil", "material", "targets"),
    [
        ([], "knife", "copper-tape", "polystyrene", (2.0, 3.0)),
        (["--spacer", "FR-4:1.6mm"], "toner-etch", "copper-35", "FR-4", (1.5, 2.0)),
        (["--process", "Photo Etch"], "photo-etch", "copper-35", "FR-4", (1.5, 2.0)),
        (["--process", "scissors"], "scissors", "copper-tape", "polystyrene", (2.0, 3.0)),
        (["--foil", "aluminium"], "knife", "aluminium", "polystyrene", (2.0, 3.0)),
    ],
)
def test_what_is_left_out_goes_with_what_is_given(sized, words, process, foil, material, targets):
    design = from_record(sized(*words, "--feed", "probe")["design"])
    assert design.making.process == process
    assert design.stock.foil.name == foil
    assert design.stock.spacer[-1].material == material
    assert (design.brief.vswr, design.brief.axial_ratio_db) == targets


def test_a_linear_antenna_is_fed_by_a_probe(sized):
    told = sized("--polarisation", "linear")
    assert told["design"]["feed"]["kind"] == "probe"
    assert told["met"] is True


def test_a_given_element_and_ground_plate_are_kept(sized):
    told = sized("--element", "rect:50mmx51mm", "--ground", "rect:22cmx20cm", "--feed", "probe")
    design = from_record(told["design"])
    assert (design.element.width, design.element.length) == (0.050, 0.051)
    assert (design.stock.ground.width, design.stock.ground.length) == (0.22, 0.20)


def test_every_layer_counts_however_it_is_given(sized):
    one = sized("--spacer", "foam:5mm", "card:0.5mm", "--feed", "probe")
    other = sized("--spacer", "foam:5mm", "--spacer", "card:0.5mm", "--feed", "probe")
    assert one == other
    layers = [layer["material"] for layer in one["design"]["stock"]["spacer"]]
    assert layers == ["foam", "card"]


THICK = ("--spacer", "air:15mm", "--feed", "probe")


def test_where_equations_cannot_tell_that_is_said_if_they_are_asked_for(sized, capsys):
    told = sized(*THICK)
    assert told["engine"] == "live"
    assert told["trust"]["match"]["level"] == "unknown"
    assert (told["solves"], told["level"]) == (0, None)
    assert main(["size", *LIVE, *THICK]) == 0
    assert "unknown  match, bands: the spacer is" in capsys.readouterr().out


@pytest.fixture
def settled(monkeypatch):
    """What settling was asked for, answered at once."""
    asked = []

    def settle(design, *, keep_element, progress):
        asked.append((design, keep_element))
        progress.step(7, 200)
        progress.step(7, 200)  # told once
        return Settling(design, True, "Solved.", 1.2, 0.4, 9, 2, Level.FINE)

    monkeypatch.setattr("core.sizing.settle.settle", settle)
    return asked


@pytest.fixture
def trusted(monkeypatch):
    """Sets how far the live model says that its readings can be trusted."""

    def call(**levels):
        def engine(*asked):
            response = respond(*asked)
            told = {Reading(name): Trust(level, "so it is") for name, level in levels.items()}
            return replace(response, trust={**response.trust, **told})

        monkeypatch.setitem(ENGINES, "live", engine)

    return call


@pytest.mark.parametrize("lost", ["match", "axial_ratio"])
def test_where_equations_cannot_tell_the_solver_goes_on(settled, trusted, capsys, lost):
    trusted(
        **{"match": TrustLevel.ROUGH, "axial_ratio": TrustLevel.ROUGH, lost: TrustLevel.UNKNOWN}
    )
    assert main(["size", "--feed", "probe", "--json"]) == 0
    out, err = capsys.readouterr()
    told = json.loads(out)
    assert told["engine"] == "field"
    assert (told["vswr"], told["axial_ratio_db"], told["met"]) == (1.2, 0.4, True)
    assert (told["solves"], told["fine_solves"], told["level"]) == (9, 2, "fine")
    assert told["trust"]["match"]["level"] == told["trust"]["axial_ratio"]["level"] == "good"
    assert told["trust"]["gain"]["level"] == "unknown"
    assert err == "settling: 7 designs solved; it gives up near 200\n"
    ((design, keeps),) = settled
    assert design == from_record(told["design"])
    assert not keeps


def test_where_equations_can_tell_the_solver_is_not_asked(settled, trusted, capsys):
    trusted(match=TrustLevel.ROUGH, axial_ratio=TrustLevel.GOOD, gain=TrustLevel.UNKNOWN)
    assert main(["size", "--feed", "probe", "--json"]) == 0
    out, err = capsys.readouterr()
    assert json.loads(out)["engine"] == "live"
    assert (err, settled) == ("", [])


def test_the_solver_keeps_a_given_element(settled, capsys):
    words = ["--element", "rect:50mmx51mm", "--feed", "probe", "--engine", "field"]
    assert main(["size", *words]) == 0
    assert "\n9 designs solved, 2 of them on the fine mesh.\n" in capsys.readouterr().out
    ((design, keeps),) = settled
    assert (design.element.width, design.element.length, keeps) == (0.050, 0.051, True)


def test_the_solver_sizes_a_board(capsys):
    words = ["--spacer", "FR-4:1.6mm", "--polarisation", "linear", "--frequency", "5.7 GHz"]
    assert main(["size", *words, "--engine", "field", "-o", "b.kerf", "--json"]) == 0
    told = json.loads(capsys.readouterr().out)
    assert told["met"] is True
    assert 1.0 <= told["vswr"] <= 1.5
    assert 1 <= told["fine_solves"] < told["solves"]
    assert from_record(told["design"]) == read_project(Path("b.kerf"))


def test_a_brief_that_cannot_be_met_says_why(sized):
    told = sized("--element", "rect:20mmx70mm", "--feed", "probe")
    assert told["met"] is False
    assert "best found" in told["reason"].casefold()
    assert told["vswr"] > 1.5 or told["axial_ratio_db"] > 1.5


def test_text_shows_the_sizes_and_the_file(capsys):
    assert main(["size", *LIVE, "--feed", "probe", "-o", "p.kerf"]) == 0
    text = capsys.readouterr().out
    assert "  element.width" in text
    assert "How far to trust this" in text
    assert text.endswith("\nwritten to p.kerf\n")


def test_a_very_long_wave_is_sized_on_the_largest_plate(sized):
    told = sized(
        "--frequency", "60MHz", "--spacer", "air:100mm", "--feed", "probe", "--engine", "live"
    )
    assert told["design"]["stock"]["ground"]["diameter"] == 4.0


def test_a_file_is_replaced_only_when_told_to(capsys):
    Path("p.kerf").write_bytes(b"dear diary")
    words = ["size", *LIVE, "--feed", "probe", "-o", "p.kerf"]
    assert main(words) == 2
    assert capsys.readouterr() == (
        "",
        "kerfwave size: p.kerf: is there already; accepted: another name, or --replace\n",
    )
    assert Path("p.kerf").read_bytes() == b"dear diary"
    assert main([*words, "--replace"]) == 0
    assert read_project(Path("p.kerf")).feed


def test_a_failed_write_is_told(capsys):
    assert main(["size", *LIVE, "--feed", "probe", "-o", "none/p.kerf"]) == 1
    assert "none/p.kerf: cannot be written (No such file" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--frequency", "fast"], "--frequency: 'fast' is not a frequency; accepted: "),
        (["--frequency", "-2GHz"], "--frequency: '-2GHz' is out of range; accepted: "),
        (["--frequency", "nan"], "--frequency: 'nan' is not a frequency; accepted: "),
        (["--frequency", "1 MHz"], "frequency: 1 MHz is out of range; accepted: 50 MHz to 60 GHz"),
        (["--polarisation", "up"], "--polarisation: 'up' is no choice; accepted: linear, rhcp"),
        (["--polarization", "rhcp"], "'--polarization' is no option (did you mean --polarisat"),
        (["--impedance", "0"], "impedance: 0 Ω is out of range; accepted: 5 Ω to 500 Ω"),
        (["--impedance", "50mm"], "has the unit of a length, not of a resistance; accepted: "),
        (["--vswr", "1"], "vswr: 1 is out of range; accepted: 1.05 to 10"),
        (["--vswr", "inf"], "--vswr: 'inf' is not a ratio; accepted: "),
        (["--axial-ratio", "99"], "axial_ratio_db: 99 dB is out of range; accepted: 0.1 dB to"),
        (["--axial-ratio", "-3"], "axial_ratio_db: -3 dB is out of range; accepted: "),
        (["--feed", "single-edge"], "feed: 'single-edge' is not taken; accepted: dual-edge, pro"),
        (["--feed", "dual-edge", "--polarisation", "linear"], "make circular polarisation only"),
        (["--spacer", "cheese:3mm"], "material 'cheese' is not known; known are air, "),
        (["--spacer", "foam"], "'foam' is no layer; accepted: MATERIAL:THICKNESS"),
        (["--spacer"], "--spacer: expected at least one argument; accepted: "),
        (["--spacer", *["air:1mm"] * 9], "stock.spacer: 9 layers; accepted: 1 to 8"),
        (["--foil", "gold"], "--foil: foil 'gold' is not known; known are copper-tape"),
        (["--ground", "oval:3cm"], "'oval:3cm' is not taken; accepted: disc:DIAMETER or rect:"),
        (["--ground", "disc:0"], "'0' is out of range; accepted: "),
        (["--ground", "disc:-3cm"], "'-3cm' is out of range; accepted: "),
        (["--element", "disc:3cm"], "'disc:3cm' is not taken; accepted: rect:WIDTHxLENGTH"),
        (["--element", "rect:3"], "'rect:3' is not taken; accepted: rect:WIDTHxLENGTH"),
        (["--process", "magic"], "process 'magic' is not known; known are scissors, knife, "),
        (["--name", "a\nb"], "name: 'a\\nb' is not taken; accepted: up to 60 printable"),
        (["--name", "n" * 61], "is not taken; accepted: up to 60 printable characters"),
        (["--name", "\udcff"], "name: '\\udcff' is not taken; accepted: up to 60 printable"),
        (["--engine", "warp"], "--engine: 'warp' is no engine; accepted: live, field"),
        (["out.kerf"], "'out.kerf' is one word too many; accepted: kerfwave size "),
    ],
)
def test_a_mistake_is_told_in_one_line(folder, capsys, words, said):
    assert main(["size", "-o", "p.kerf", *words]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("kerfwave size: ")
    assert said in err
    assert err.count("\n") == 1
    assert list(folder.iterdir()) == []
