"""``kerfwave readings``: the keys of the contract, consistent with each other."""

import json
from pathlib import Path

import numpy as np
import pytest
from sample_designs import tape_design

from app.command import main
from core.design.edit import with_texts
from core.engines import respond_on_mesh
from core.errors import ModelError
from core.storage.project import write_project

ARRAYS = (
    *("frequency_hz", "s11", "z_in_ohm", "axial_ratio_db"),
    *("gain_dbi", "realised_gain_dbi", "efficiency"),
)
SCALARS = (
    *("engine", "sense", "modes", "vswr2_band_hz", "axial_ratio_3db_band_hz"),
    *("directivity_dbi", "beamwidth_deg", "front_to_back_db", "trust"),
)
PROBE = ("brief.polarisation=linear", "feed=probe", "feed.x=0", "feed.y=-9mm")


@pytest.fixture
def readings(tmp_path, monkeypatch, capsys):
    """Readings of the tape design with some changes, as JSON or as text."""
    monkeypatch.chdir(tmp_path)

    def call(*changes, options=(), text=False):
        pairs = [change.split("=", 1) for change in changes]
        write_project(Path("a.kerf"), with_texts(tape_design(), pairs), replace=True)
        form = [] if text else ["--json"]
        assert main(["readings", "a.kerf", *options, *form]) == 0
        out, err = capsys.readouterr()
        assert (err == "") is ("field" not in options)
        return out if text else json.loads(out)

    return call


def complex_array(pairs):
    return np.array([complex(*pair) for pair in pairs])


def test_json_holds_the_keys_of_the_contract(readings):
    told = readings()
    assert {*ARRAYS, *SCALARS} <= told.keys()
    assert {len(told[key]) for key in ARRAYS} == {201}
    assert told["engine"] == "live"
    assert told["front_to_back_db"] is None
    assert {"name", "frequency_hz", "q"} == told["modes"][0].keys()
    assert {one["level"] for one in told["trust"].values()} <= {"good", "rough", "unknown"}
    assert all(one["reason"] for one in told["trust"].values())


def test_the_sweep_reaches_a_tenth_beyond_the_frequency_of_the_brief(readings):
    frequencies = readings()["frequency_hz"]
    assert (frequencies[0], frequencies[-1]) == pytest.approx((2.32e9 * 0.9, 2.32e9 * 1.1))


def test_the_sweep_asked_for_is_the_one_given(readings):
    told = readings(options=["--from", "2,2", "--to", "2500MHz", "--points", "4"])
    assert told["frequency_hz"] == pytest.approx([2.2e9, 2.3e9, 2.4e9, 2.5e9])


def test_impedance_and_reflection_say_the_same(readings):
    told = readings("brief.impedance=75")
    s11, z_in = complex_array(told["s11"]), complex_array(told["z_in_ohm"])
    np.testing.assert_allclose((z_in - 75.0) / (z_in + 75.0), s11, rtol=1e-9)
    assert np.all(np.abs(s11) <= 1.0)


def test_realised_gain_is_less_by_the_mismatch(readings):
    told = readings()
    accepted = 1.0 - np.abs(complex_array(told["s11"])) ** 2
    lost = np.array(told["gain_dbi"]) - np.array(told["realised_gain_dbi"])
    np.testing.assert_allclose(lost, -10.0 * np.log10(accepted), atol=1e-9)


def test_the_match_band_ends_where_a_third_is_reflected(readings):
    """VSWR 2 is a reflection coefficient of 1/3."""
    told = readings(*PROBE, "element.length=55mm", options=["--points", "2001"])
    low, high = told["vswr2_band_hz"]
    size = np.abs(complex_array(told["s11"]))
    assert np.interp([low, high], told["frequency_hz"], size) == pytest.approx(1 / 3, abs=1e-3)
    assert low < 2.32e9 < high


def test_a_band_that_is_nowhere_is_null(readings):
    assert readings("brief.impedance=5")["vswr2_band_hz"] is None


@pytest.mark.parametrize(
    ("changes", "expected"),
    [
        (("feed.delay_length=50mm",), "rhcp"),
        (("feed.delay_length=50mm", "brief.polarisation=lhcp"), "lhcp"),
        (PROBE, "linear"),
    ],
)
def test_the_sense_is_a_word_of_the_contract(readings, changes, expected):
    assert readings(*changes)["sense"] == expected


def test_a_spoilt_circular_wave_has_no_sense(readings):
    told = readings("element=rect:54mmx40mm")
    assert told["axial_ratio_db"][100] > 15.0
    assert told["sense"] is None


def test_the_other_hand_changes_nothing_else(readings):
    right, left = readings(), readings("brief.polarisation=lhcp")
    for key in ("s11", "axial_ratio_db", "gain_dbi", "efficiency"):
        np.testing.assert_allclose(right[key], left[key], rtol=1e-9)


def test_two_branches_leave_match_and_axial_ratio_unknown(readings):
    told = readings()
    for reading in ("match", "axial_ratio"):
        assert told["trust"][reading]["level"] == "unknown"
    states = {one["reading"]: one["state"] for one in told["verdicts"]}
    assert states["match"] == states["axial_ratio"] == "unknown"
    text = readings(text=True)
    assert "unknown  Match: not known, for the reason below." in text
    assert "match, bands: equations leave the strips uncoupled" in text
    assert "\nmet" not in text


def test_a_thick_spacer_leaves_the_match_of_a_probe_unknown(readings):
    text = readings(*PROBE, "stock.spacer=air:15mm", text=True)
    assert "match, bands: the spacer is 0.116 wavelength thick" in text
    assert "\nmet" not in text


def test_the_field_solver_is_named_as_the_one_who_says_so(readings):
    sweep = ["--from", "2.3 GHz", "--to", "2.34 GHz", "--points", "3", "--engine", "field"]
    text = readings(*PROBE, "name=Mast 9", text=True, options=sweep)
    assert text.startswith("Mast 9, by the field solver, 2.3 GHz to 2.34 GHz\n")


def test_text_says_who_says_so_and_what_was_asked(readings):
    text = readings("name=Mast 9", text=True)
    assert text.startswith("Mast 9, by the live model, 2.088 GHz to 2.552 GHz\n")
    assert (
        "Brief: right-hand circular at 2.32 GHz, VSWR up to 2 on 50 Ω, axial ratio up to 3 dB\n"
        in text
    )
    assert "How far to trust this" in text


def test_a_linear_antenna_is_asked_for_no_axial_ratio(readings):
    assert "axial ratio up to" not in readings(*PROBE, text=True)


def test_what_cannot_be_built_is_said_with_the_numbers(readings):
    assert "can't be built: The delay strip is 1 mm wide" in readings(
        "feed.delay_width=1mm", text=True
    )
    codes = [one["code"] for one in readings("feed.delay_width=1mm")["findings"]]
    assert "strip-too-narrow" in codes


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--engine", "guess"], "--engine: 'guess' is no engine; accepted: live, field"),
        (["--engine", ""], "--engine: '' is no engine; accepted: live"),
        (["--points", "1"], "points: 1 is out of range; accepted: 2 to 20001"),
        (["--points", "-5"], "points: -5 is out of range; accepted: 2 to 20001"),
        (["--points", "1000000"], "points: 1000000 is out of range; accepted: 2 to 20001"),
        (["--points", "2.5"], "--points: '2.5' is no whole number; accepted: "),
        (["--points", "nan"], "--points: 'nan' is no whole number; accepted: "),
        (["--points", "9" * 5000], "is no whole number; accepted: "),
        (["--from", "2.5GHz", "--to", "2.4GHz"], "to: 2.4e+09 Hz is not above the start; acc"),
        (["--from", "3GHz"], "is not above the start; accepted: more than 3e+09 Hz"),
        (["--from", "-1GHz"], "--from: '-1GHz' is out of range; accepted: 1 MHz to 300 GHz"),
        (["--to", "1e99"], "--to: '1e99' is out of range; accepted: 1 MHz to 300 GHz"),
        (["--to", "inf"], "--to: 'inf' is not a frequency; accepted: "),
        (["--to", "3mm"], "--to: '3mm' has the unit of a length, not of a frequency; acc"),
        (["--form", "3"], "'--form' is no option (did you mean --from?); accepted: "),
        (["b.kerf"], "'b.kerf' is one word too many; accepted: kerfwave readings "),
    ],
)
def test_a_mistake_is_told_in_one_line(readings, capsys, words, said):
    readings()
    assert main(["readings", "a.kerf", *words]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("kerfwave readings: ")
    assert said in err
    assert err.count("\n") == 1


def test_a_strip_that_no_formula_covers_is_bad_input(readings, capsys):
    readings()
    changes = [("stock.spacer", "air:100mm"), ("feed.first.width", "50um")]
    write_project(Path("b.kerf"), with_texts(tape_design(), changes), replace=True)
    assert main(["readings", "b.kerf"]) == 2
    assert "the formulas hold for 0.01 to 1000" in capsys.readouterr().err


SMALL = ("stock.spacer=air:6mm", "stock.ground=disc:80mm", *PROBE)
"""A probe-fed element over a plate little larger than it, quickly solved."""


@pytest.fixture
def solved(readings, capsys, tmp_path):
    """Readings of the small design by the field solver, on the coarse mesh, as JSON or text."""

    def call(*options, text=False):
        pairs = [change.split("=", 1) for change in SMALL]
        write_project(Path("a.kerf"), with_texts(tape_design(), pairs), replace=True)
        form = [] if text else ["--json"]
        words = ["readings", "a.kerf", "--engine", "field", "--points", "21", *options, *form]
        assert main(words) == 0
        out, _ = capsys.readouterr()
        return out if text else json.loads(out)

    return call


BY_DIRECTION = ("beam_tilt_deg", "beam_azimuth_deg", "beam_gain_dbi")


def test_live_readings_tell_nothing_by_direction(readings):
    told = readings()
    for key in (*BY_DIRECTION, "worst_axial_ratio_30deg_db", "sense_reach_deg"):
        assert told[key] is None
    assert (told["plus_minus"], told["mesh"]) == (None, None)
    assert "Strongest" not in readings(text=True)


def test_solved_readings_by_direction_agree_with_each_other(solved):
    told = solved("--mesh", "coarse", "--cut", "0", "--cut", "37", "--sphere")
    at_brief = told["gain_dbi"][10]
    assert told["beam_gain_dbi"] >= at_brief
    assert 0.0 < told["beam_tilt_deg"] < 45.0
    assert told["worst_axial_ratio_30deg_db"] is None  # a linear antenna
    first, second = told["cuts"]
    assert (first["phi_deg"], second["phi_deg"]) == pytest.approx((0.0, 37.0))
    for cut in (first, second):
        middle = cut["theta_deg"].index(pytest.approx(0.0, abs=1e-9))
        assert cut["gain_dbi"][middle] == pytest.approx(at_brief, abs=1e-6)
    sphere = told["sphere"]
    total = np.array(sphere["total_gain_dbi"])
    assert total.shape == (len(sphere["theta_deg"]), len(sphere["phi_deg"]))
    assert total.max() == pytest.approx(told["beam_gain_dbi"], abs=0.1)
    # All the power that is not lost goes through the sphere: the mean gain is the efficiency.
    rings = (10.0 ** (total / 10.0)).mean(axis=1)
    theta = np.radians(sphere["theta_deg"])
    mean = np.trapezoid(rings * np.sin(theta), theta) / 2.0
    assert mean == pytest.approx(told["efficiency"][10], abs=0.01)
    behind = 10.0 ** ((total[0, 0] - total[-1, 0]) / 10.0)
    assert told["front_to_back_db"] == pytest.approx(10.0 * np.log10(behind), abs=1e-6)


def test_the_mesh_is_reported(solved):
    mesh = solved("--mesh", "coarse")["mesh"]
    assert mesh["level"] == "coarse"
    assert mesh["triangles"] == sum(sheet["triangles"] for sheet in mesh["sheets"])
    assert {sheet["name"] for sheet in mesh["sheets"]} == {"top copper", "probe", "ground plate"}
    text = solved("--mesh", "coarse", "--mesh-report", text=True)
    assert f"The coarse mesh: {mesh['triangles']} triangles, {mesh['unknowns']} unknowns" in text
    assert "The coarse mesh" not in solved("--mesh", "coarse", text=True)


def test_plus_and_minus_come_from_the_next_coarser_mesh(solved):
    coarse, normal = solved("--mesh", "coarse"), solved()
    assert coarse["plus_minus"] is None
    told = normal["plus_minus"]
    assert told["against_mesh"] == "coarse"
    apart = abs(normal["gain_dbi"][10] - coarse["gain_dbi"][10])
    assert apart <= told["gain_db"] < apart + 0.2
    assert all(by is None or by > 0.0 for by in told["modes_hz"])
    assert solved("--single")["plus_minus"] is None


def test_without_a_coarser_solution_the_readings_stand_and_say_so(solved, monkeypatch):
    def only_normal(layout, frequencies, progress, level, tail=None):
        if level != "normal":
            raise ModelError("too coarse")
        return respond_on_mesh(layout, frequencies, progress, "coarse", tail)

    monkeypatch.setattr("app.verbs.solved.respond_on_mesh", only_normal)
    told = solved(text=True)
    assert "± unknown: there is no solution on the coarse mesh." in told
    assert told.count("±") == 1


def test_a_coax_tail_is_solved_beside(solved):
    told = solved("--mesh", "coarse", "--tail-length", "40mm", "--tail-drop", "15mm")
    tail = told["tail"]
    assert (tail["length_m"], tail["diameter_m"], tail["drop_m"]) == (0.04, 0.003, 0.015)
    first, second = (complex(*one["s11"][10]) for one in (told, tail["response"]))
    assert tail["change"]["s11"] == pytest.approx(abs(second - first), abs=1e-3)
    assert tail["response"]["mesh"]["unknowns"] > told["mesh"]["unknowns"]
    text = solved("--mesh", "coarse", "--tail", text=True)
    assert "With a coax tail 64.6 mm long and 3 mm thick, straight back:\n  VSWR " in text


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--tail"], "--tail: the live model cannot tell; accepted: with --engine field"),
        (["--cut", "0"], "--cut: the live model cannot tell; accepted: with --engine field"),
        (["--mesh", "fine"], "--mesh: the live model cannot tell; accepted: with --engine field"),
        (["--engine", "field", "--mesh", "finer"], "'finer' is no mesh (did you mean fine?); acc"),
        (["--engine", "field", "--sphere"], "--sphere: too much to read; accepted: with --json"),
        (
            ["--engine", "field", "--tail-azimuth", "90"],
            "--tail-azimuth: the cable has no bend; accepted: with --tail-drop",
        ),
        (
            ["--engine", "field", "--tail-length", "9m"],
            "coax tail: its length of 9 m is out of range; accepted: 3 mm to 517 mm",
        ),
    ],
)
def test_what_cannot_be_asked_is_told_in_one_line(readings, capsys, words, said):
    readings()
    assert main(["readings", "a.kerf", *words]) == 2
    out, err = capsys.readouterr()
    assert (out, err.count("\n")) == ("", 1)
    assert said in err


def test_a_tail_over_a_board_is_refused_in_one_line(readings, capsys):
    readings()
    pairs = [("stock.spacer", "FR-4:1.6mm"), *(one.split("=") for one in PROBE)]
    write_project(Path("b.kerf"), with_texts(tape_design(), pairs), replace=True)
    assert main(["readings", "b.kerf", "--engine", "field", "--tail"]) == 2
    out, err = capsys.readouterr()
    assert (out, err.count("\n")) == ("", 1)
    assert "coax tail: a board's ground plane is solved as endless" in err


def test_a_sweep_that_does_not_settle_is_told_and_nothing_is_made_up(readings, capsys):
    readings()
    words = ["--engine", "field", "--mesh", "coarse", "--from", "300MHz", "--to", "12GHz"]
    pairs = [change.split("=", 1) for change in SMALL]
    write_project(Path("b.kerf"), with_texts(tape_design(), pairs), replace=True)
    assert main(["readings", "b.kerf", *words]) == 1
    out, err = capsys.readouterr()
    assert out == ""
    last = err.splitlines()[-1]
    assert "the sweep has not settled after 15 frequencies" in last
    assert "accepted: a narrower band" in last


def test_a_mesh_too_coarse_for_the_band_lowers_the_trust(solved):
    told = solved("--mesh", "coarse", "--to", "3.6GHz", "--from", "2GHz")
    assert told["trust"]["bands"]["level"] == "rough"
    assert "is the most that can be trusted" in told["trust"]["bands"]["reason"]
