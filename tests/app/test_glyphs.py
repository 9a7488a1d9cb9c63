"""What reaches the terminal: nothing that moves, colours or hides, and nothing that it cannot show."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from triage.app.glyphs import ASCII, BOX, FULL

LEVELS = (FULL, BOX, ASCII)


@pytest.mark.parametrize("glyphs", LEVELS, ids=lambda glyphs: glyphs.name)
@given(text=st.text())
def test_folded_text_is_printable(glyphs, text):
    assert glyphs.fold(text).isprintable()


@given(text=st.text())
def test_ascii_level_gives_ascii(text):
    assert ASCII.fold(text).isascii()


def test_terminal_escapes_lose_their_teeth():
    assert "\x1b" not in FULL.fold("\x1b[31mred\x1b]0;title\x07")


def test_box_drawing_becomes_plus_and_minus():
    assert ASCII.fold("┌─┐│└┘") == "+-+|++"
    assert BOX.fold("┌─┐") == "┌─┐"


def test_units_stay_readable():
    assert ASCII.fold("10 Ω ±5 % 4.7 µF 105 °C") == "10 ohm +-5 % 4.7 uF 105 degC"


@pytest.mark.parametrize("glyphs", LEVELS, ids=lambda glyphs: glyphs.name)
def test_own_signs_survive_their_own_level(glyphs):
    own = glyphs.up + glyphs.down + glyphs.rule + glyphs.fill + glyphs.rest + glyphs.ramp
    assert glyphs.fold(own) == own
