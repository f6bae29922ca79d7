"""Widths of text against the font itself, and breaking lines."""

from importlib.resources import files

import pytest
from fontTools.ttLib import TTFont
from hypothesis import given
from hypothesis import strategies as st

from core.drawing.lettering import CAP_HEIGHT, fitting_height, text_width, wrapped

FONT = TTFont(str(files("assets").joinpath("fonts", "DejaVuSans.ttf")))
EM = FONT["head"].unitsPerEm


def width_in_font(text):
    names, widths = FONT.getBestCmap(), FONT["hmtx"]
    return sum(widths[names[ord(letter)]][0] for letter in text) / EM


@pytest.mark.parametrize("letter", [chr(code) for code in range(32, 127)])
def test_every_ascii_letter_is_as_wide_as_in_the_font(letter):
    assert text_width(letter, 1.0) == pytest.approx(width_in_font(letter), abs=6e-4)


@pytest.mark.parametrize("text", ["Ω λ/4 45° µm εr ½ × – … √", "Éçñ Åå ñ", "Жизнь я", "\u00a0"])
def test_no_text_is_wider_than_the_room_made_for_it(text):
    assert text_width(text, 2.0) >= 2.0 * width_in_font(text) - 1e-3


def test_capitals_are_as_high_as_in_the_font():
    top = FONT["glyf"][FONT.getBestCmap()[ord("H")]].yMax / EM
    assert top == pytest.approx(CAP_HEIGHT, abs=2e-3)


@given(st.text(st.characters(codec="ascii", min_codepoint=33), max_size=80), st.floats(10.0, 60.0))
def test_broken_lines_fit_and_lose_nothing(text, width):
    lines = wrapped(text, 2.0, width)
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")
    assert all(text_width(line, 2.0) <= width for line in lines)


def test_lines_break_at_spaces_but_not_between_number_and_unit():
    assert wrapped("one two", 1.0, text_width("one tw", 1.0)) == ["one", "two"]
    assert wrapped("by 54\u00a0mm", 1.0, text_width("54\u00a0mm", 1.0)) == ["by", "54\u00a0mm"]


def test_letters_shrink_only_where_they_must():
    room = text_width("Glider", 3.0)
    assert fitting_height("Glider", 3.0, room) == 3.0
    assert fitting_height("Glider", 3.0, room / 2) == pytest.approx(1.5)
