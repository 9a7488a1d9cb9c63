"""Bars: proportional, never empty for something, never longer than told (reasoned cases)."""

from hypothesis import given
from hypothesis import strategies as st

from triage.app.bars import ramp, share_bar, stress_bar
from triage.app.glyphs import ASCII, FULL
from triage.app.lines import plain


@given(share=st.floats(0, 1), width=st.integers(1, 60))
def test_a_share_bar_has_its_width(share, width):
    bar = share_bar(share, width, ASCII)
    assert len(bar) == width
    assert (bar.count("#") > 0) == (share > 0)


def test_half_is_half():
    assert share_bar(0.5, 10, ASCII) == "#####....."


@given(ratio=st.floats(0, 50), limit=st.none() | st.floats(0.1, 1), width=st.integers(8, 60))
def test_a_stress_bar_has_its_width(ratio, limit, width):
    assert len(plain(stress_bar(ratio, limit, width, FULL, "good"))) == width + 2


def test_a_stress_bar_shows_limit_and_rating_in_order():
    bar = plain(stress_bar(0.5, 0.8, 20, ASCII, "good"))
    assert bar.index("#") < bar.index(":") < bar.index("|")
    assert bar.count("#") == 8


def test_beyond_the_bar_ends_in_an_arrow():
    assert plain(stress_bar(3.0, 0.8, 20, ASCII, "over")).endswith(">]")


def test_a_ramp_rises_with_the_shares():
    signs = ramp([0.0, 0.02, 0.3, 0.6, 1.0], ASCII)
    assert [ASCII.ramp.index(sign) for sign in signs] == sorted(ASCII.ramp.index(sign) for sign in signs)
    assert signs[0] == " " and signs[1] != " " and signs[-1] == ASCII.ramp[-1]
