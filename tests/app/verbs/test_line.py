"""``kerfwave line``: through the command, against values from outside."""

import json
import re
from math import log10, pi, sqrt

import pytest
from skrf import Frequency
from skrf.media import MLine

from app.command import main

KEYS = {"z0_ohm", "eps_eff", "guided_wavelength_m", "loss_db_per_m", "width_m"}
SPEED_OF_LIGHT = 299_792_458.0


def told(capsys, *words):
    assert main(["line", *words, "--json"]) == 0
    return json.loads(capsys.readouterr().out)


def refusal(capsys, words):
    assert main(["line", *words]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("\n") == 1
    assert err.startswith("kerfwave line: ")
    return err


def test_json_holds_the_keys_of_the_contract(capsys):
    assert set(told(capsys, "--spacer", "FR-4:1.6mm", "--width", "3mm")) == KEYS


@pytest.mark.parametrize(("eps_r", "width"), [(2.2, 3e-3), (4.3, 3e-3), (10.0, 1e-3)])
def test_the_line_agrees_with_another_implementation_of_the_same_equations(capsys, eps_r, width):
    height, tan, frequency = 1.6e-3, 0.002, 3e9
    line = told(
        capsys,
        *("--spacer", f"er={eps_r},tan={tan}:{height * 1e3}mm"),
        *("--width", f"{width * 1e3} mm", "--frequency", "3 GHz", "--foil-thickness", "35um"),
    )
    media = MLine(
        Frequency.from_f([frequency], unit="Hz"),
        w=width,
        h=height,
        t=35e-6,
        ep_r=eps_r,
        tand=tan,
        rho=1 / 58e6,
        model="hammerstadjensen",
        disp="kirschningjansen",
        diel="frequencyinvariant",
        rough=0.0,
    )
    assert line["z0_ohm"] == pytest.approx(media.z0_characteristic[0].real, rel=5e-3)
    assert line["eps_eff"] == pytest.approx(media.ep_reff_f[0].real, rel=5e-3)
    loss = 20 * log10(2.718281828459045) * media.gamma[0].real
    assert line["loss_db_per_m"] == pytest.approx(loss, rel=0.05)


def test_the_wavelength_follows_from_the_permittivity(capsys):
    line = told(capsys, "--spacer", "foam:6mm", "--width", "1cm", "--frequency", "868MHz")
    expected = SPEED_OF_LIGHT / 868e6 / sqrt(line["eps_eff"])
    assert line["guided_wavelength_m"] == pytest.approx(expected, rel=1e-9)
    assert line["width_m"] == 0.01


def test_a_wide_strip_in_air_nears_a_parallel_plate_line(capsys):
    line = told(
        capsys,
        *("--spacer", "er=1:1mm", "--width", "20cm", "--foil-thickness", "0"),
        *("--frequency", "1MHz"),
    )
    plates = 4e-7 * pi * SPEED_OF_LIGHT * 1e-3 / 0.2
    assert line["z0_ohm"] == pytest.approx(plates, rel=0.04)
    assert line["z0_ohm"] < plates


def test_the_width_for_an_impedance_gives_that_impedance(capsys):
    stack = ["--spacer", "air:2mm", "card:1mm", "--frequency", "2.4 GHz"]
    found = told(capsys, *stack, "--impedance", "100 ohm")
    assert found["z0_ohm"] == pytest.approx(100.0, rel=1e-9)
    again = told(capsys, *stack, "--width", f"{found['width_m']!r} m")
    assert again["z0_ohm"] == pytest.approx(100.0, rel=1e-9)


@pytest.mark.parametrize(
    "spacer",
    [
        ["--spacer", "air:2mm", "card:1mm"],
        ["--spacer", "air:2mm", "--spacer", "card:1mm"],
        ["--spacer", "Air:2mm+CARD : 1mm"],
    ],
)
def test_every_layer_counts_however_it_is_given(capsys, spacer):
    line = told(capsys, *spacer, "--width", "5mm")
    assert line == told(capsys, "--spacer", "air:2mm + card:1mm", "--width", "5mm")
    assert line != told(capsys, "--spacer", "card:1mm", "--width", "5mm")


def test_text_is_aligned_and_has_units(capsys):
    assert main(["line", "--spacer", "FR-4:1.6mm", "--impedance", "50"]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert lines[0] == "Strip of 35 µm foil over FR-4 1.6 mm, at 2.45 GHz"
    assert lines[2] == "  characteristic impedance  50 Ω"
    values = [re.split("  +", line.strip())[1] for line in lines[1:]]
    assert len({line.index(value) for line, value in zip(lines[1:], values, strict=True)}) == 1
    assert [value.split(" ")[1:] for value in values] == [["mm"], ["Ω"], [], ["mm"], ["dB/m"]]


WIDTH = ["--width", "3mm"]
SPACER = ["--spacer", "FR-4:1.6mm"]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (WIDTH, "left out: --spacer; accepted: kerfwave line "),
        (SPACER, "one of the arguments --width --impedance is required; accepted: "),
        ([*SPACER, *WIDTH, "--impedance", "50"], "--impedance: not allowed with argument --width"),
        (["--spacer", *WIDTH], "--spacer: expected at least one argument; accepted: "),
        (["--spacer", "FR-4", *WIDTH], "--spacer: stock.spacer: 'FR-4' is no layer; accepted: "),
        (["--spacer", "cheese:1mm", *WIDTH], "material 'cheese' is not known; known are air"),
        (["--spacer", "FR-4:-1mm", *WIDTH], "'-1mm' is out of range; accepted: 20 µm to 200 mm"),
        (["--spacer", "-1mm", *WIDTH], "'-1mm' is no layer; accepted: "),
        (["--spacer", "er=0.5:1mm", *WIDTH], "er: '0.5' is out of range; accepted: 1 to 40"),
        (["--spacer", "er=nan:1mm", *WIDTH], "er: 'nan' is not a ratio; accepted: "),
        (["--spacer", "er=2,tan=2:1mm", *WIDTH], "tan: '2' is out of range; accepted: 0 to 0.5"),
        ([*SPACER, "--width", "-3mm"], "--width: '-3mm' is out of range; accepted: "),
        ([*SPACER, "--width", "0"], "--width: '0' is out of range; accepted: "),
        ([*SPACER, "--width", "nan"], "--width: 'nan' is not a length; accepted: "),
        ([*SPACER, "--width", "inf"], "--width: 'inf' is not a length; accepted: "),
        ([*SPACER, "--width", "1e300m"], "--width: '1e300m' is out of range; accepted: "),
        ([*SPACER, "--width", "\udcff"], "--width: "),
        ([*SPACER, "--width", ""], "--width: '' is empty; accepted: "),
        ([*SPACER, "--width"], "--width: expected one argument; accepted: "),
        ([*SPACER, "--width", "2 GHz"], "has the unit of a frequency, not of a length"),
        (["--spacer", "air:20cm", "--width", "1um"], "the formulas hold for 0.01 to 1000"),
        ([*SPACER, "--impedance", "-50"], "--impedance: '-50' is out of range; accepted: 1 Ω"),
        ([*SPACER, "--impedance", "500"], "no strip on this stack has 500 ohm: "),
        ([*SPACER, "--impedance", "nan"], "--impedance: 'nan' is not a resistance; accepted: "),
        ([*SPACER, *WIDTH, "--frequency", "0"], "--frequency: '0' is out of range; accepted: "),
        ([*SPACER, *WIDTH, "--frequency", "-1GHz"], "--frequency: '-1GHz' is out of range"),
        ([*SPACER, *WIDTH, "--frequency", "red"], "--frequency: 'red' is not a frequency"),
        ([*SPACER, *WIDTH, "--foil-thickness", "-1um"], "--foil-thickness: '-1um' is out of"),
        ([*SPACER, *WIDTH, "--foil-thickness", "1m"], "--foil-thickness: '1m' is out of range"),
        ([*SPACER, *WIDTH, "extra"], "'extra' is one word too many; accepted: kerfwave line "),
    ],
)
def test_what_cannot_be_taken_is_told_in_one_line(capsys, words, said):
    assert said in refusal(capsys, words)
