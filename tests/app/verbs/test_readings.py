"""``kerfwave readings``: the keys of the contract, consistent with each other."""

import json
from pathlib import Path

import numpy as np
import pytest
from sample_designs import tape_design

from app.command import main
from core.design.edit import with_texts
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
