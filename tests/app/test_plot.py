"""Plots: dots where the points are, round figures on the axes, limits in sight (reasoned cases)."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from triage.app.glyphs import ASCII, FULL
from triage.app.lines import plain
from triage.app.plot import Level, Series, chart, dots, grid_text, round_ticks


@pytest.mark.parametrize(
    ("low", "high", "count", "ticks"),
    [
        (0, 10, 5, (0, 2, 4, 6, 8, 10)),
        (0, 1, 2, (0, 0.5, 1)),
        (-3, 3, 3, (-2, 0, 2)),
        (0, 727, 4, (0, 200, 400, 600)),
    ],
)
def test_ticks_are_round(low, high, count, ticks):
    assert round_ticks(low, high, count) == pytest.approx(ticks)


@given(low=st.floats(-1e6, 1e6), span=st.floats(1e-3, 1e6), count=st.integers(1, 12))
def test_ticks_stay_in_range_and_number(low, span, count):
    ticks = round_ticks(low, low + span, count)
    assert len(ticks) <= count + 1
    assert all(low - span * 1e-6 <= tick <= low + span * (1 + 1e-6) for tick in ticks)


def test_corners_are_where_they_belong():
    grid = dots([(0, 0)], 2, 2, (0, 1), (0, 1))
    assert grid == [[0, 0], [0x40, 0]]
    grid = dots([(1, 1)], 2, 2, (0, 1), (0, 1))
    assert grid == [[0, 0x08], [0, 0]]


def test_a_horizontal_line_fills_its_row():
    assert grid_text(dots([(0, 1), (1, 1)], 4, 1, (0, 1), (0, 1)), braille=True) == ("⠉⠉⠉⠉",)


def test_a_gap_is_not_bridged():
    points = [(0, 0), (0.2, 0), (0.5, math.nan), (0.8, 0), (1, 0)]
    text = grid_text(dots(points, 10, 1, (0, 1), (0, 1)), braille=True)[0]
    assert " " in text.strip()


def test_ascii_shows_height_within_a_cell():
    top = grid_text(dots([(0, 1), (1, 1)], 3, 1, (0, 1), (0, 1)), braille=False)
    bottom = grid_text(dots([(0, 0), (1, 0)], 3, 1, (0, 1), (0, 1)), braille=False)
    assert top == ("'''",) and bottom == (",,,",)


@pytest.mark.parametrize("glyphs", [FULL, ASCII], ids=["braille", "ascii"])
@pytest.mark.parametrize(("width", "height"), [(60, 12), (24, 4), (100, 30)])
def test_a_chart_has_its_size_and_names_its_limit(glyphs, width, height):
    curve = Series("healthy", tuple((t / 50, 300 + 200 * math.sin(t / 4)) for t in range(50)))
    rows = chart([curve], [Level("rating 700 V", 700.0)], width, height, glyphs, "s", "V")
    assert len(rows) == height
    assert all(len(plain(row)) <= width for row in rows)
    assert sum("rating" in plain(row) for row in rows) == 1
    assert glyphs is FULL or all(plain(row).isascii() for row in rows)


def test_nothing_to_draw_says_so():
    assert plain(chart([Series("x", ())], [], 60, 10, FULL)[0]) == "nothing to draw"
