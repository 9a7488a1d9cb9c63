"""The waveforms on screen: charts with their limits at any size, how far they are, stopped, and never an old one."""

import asyncio

import pytest
from textual.pilot import Pilot

from tests.app.fake_bench import FakeBench
from tests.app.screens import play, press, settle, text_of, type_in
from triage.app.glyphs import ASCII, BOX, FULL
from triage.app.lines import plain, width_of
from triage.app.text.waveforms import chart_lines, charts_at_once
from triage.job.progress import report
from triage.job.views import ChartView, CurveView, LevelView, StressView

CHART = ChartView(
    "switch", "Q1 main switch: voltage at 253 V, full load", "s", "V",
    (
        CurveView("healthy", ((0.0, 0.0), (1e-5, 470.0), (2e-5, 380.0))),
        CurveView("D2 open", ((0.0, 0.0), (1e-5, 820.0), (2e-5, 380.0))),
    ),
    (LevelView("rating", 700.0), LevelView("derated limit", 595.0)), "drawn before it destroys Q1.ce_short",
)  # fmt: skip


@pytest.mark.parametrize("glyphs", [FULL, BOX, ASCII], ids=lambda one: one.name)
@pytest.mark.parametrize(("width", "rows"), [(80, 20), (100, 26), (160, 16), (60, 10)])
def test_a_chart_has_its_rows_and_names_limits_and_curves(glyphs, width, rows):
    lines = chart_lines(CHART, width, rows, glyphs)
    text = "\n".join(map(plain, lines))
    assert len(lines) == rows and all(width_of(one) <= width for one in lines)
    assert "rating 700 V" in text and "derated limit 595 V" in text
    assert "healthy: 0 V to 470 V" in text
    assert "drawn before it destroys Q1"[: width - 1] in text
    assert glyphs is FULL or all(char.isascii() or char == "─" for char in text.replace("\n", ""))


def test_curve_past_its_rating_is_drawn_above_the_line():
    rows = [plain(one) for one in chart_lines(CHART, 80, 20, ASCII)]
    rating = next(number for number, row in enumerate(rows) if "rating 700 V" in row)
    assert any("x" in row.partition("|")[2] for row in rows[2:rating])


def test_curve_without_points_says_that_nothing_repeats():
    broken = ChartView("switch", "Q1", "s", "V", (CHART.curves[0], CurveView("Q1 ce short", ())))
    assert "Q1 ce short: no steady state" in plain(chart_lines(broken, 100, 12, FULL)[1])


@pytest.mark.parametrize(("rows", "count"), [(20, 1), (26, 1), (36, 2), (46, 2), (60, 3), (4, 1)])
def test_a_tall_screen_shows_more_charts_at_once(rows, count):
    assert charts_at_once(3, rows) == count


def test_charts_come_one_after_the_other_and_name_the_leading_suspect(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "f3", "enter")
        assert "chart 1 of 3" in text_of(pilot.app) and "Q1 ce short: " in text_of(pilot.app)
        await press(pilot, "down")
        assert "C1 bulk capacitor" in text_of(pilot.app)
        await press(pilot, "down")
        assert "window of the output" in text_of(pilot.app)
        await press(pilot, "down")
        assert "chart 1 of 3" in text_of(pilot.app)
        await press(pilot, "escape")
        assert "next" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_another_suspect_is_drawn_anew(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "f3", "enter", "f2")
        await type_in(pilot, "12")
        await type_in(pilot, "*")
        await type_in(pilot, "1M")
        await pilot.app.run_action("go('waveforms')")
        await settle(pilot)
        assert "RF1 open: " in text_of(pilot.app) and "Q1 ce short" not in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def slow(pilot: Pilot[int]) -> FakeBench:
    """The stand-in with charts that take a while."""
    bench: FakeBench = pilot.app.desk.bench  # type: ignore[attr-defined]
    bench.chart_seconds = 0.8
    return bench


async def until(pilot: Pilot[int], words: str) -> str:
    """The screen once it says these words."""
    for _ in range(300):
        await pilot.pause()
        if words in (text := text_of(pilot.app)):
            return text
        await asyncio.sleep(0.01)
    raise AssertionError(f"never said {words!r}:\n{text_of(pilot.app)}")


def test_a_long_calculation_tells_percent_and_leaves_entries_free(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        slow(pilot)
        await press(pilot, "f3")
        await pilot.press("enter")
        text = await until(pilot, "25 %")
        assert "Esc stops" in text and "NOT safe to touch" in text
        await pilot.press("f2")
        await pilot.press("1", "2", "enter")
        await until(pilot, "ok safe to touch")
        assert pilot.app.desk._long.busy, "the entry was taken while the charts were computed"  # type: ignore[attr-defined]

    play(tmp_path, story, at_bench=True)


def test_escape_stops_it_and_stays_the_next_one_goes_back(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        slow(pilot)
        await press(pilot, "f3")
        await pilot.press("enter")
        await until(pilot, "25 %")
        await pilot.press("escape")
        text = await until(pilot, "stopped")
        assert " waveforms " in text and "%; Esc" not in text
        await settle(pilot)
        assert "chart 1 of 3" not in text_of(pilot.app), "what was stopped does not come after all"
        await press(pilot, "escape")
        assert "next" in text_of(pilot.app)
        await pilot.app.run_action("go('waveforms')")
        await until(pilot, "chart 1 of 3")

    play(tmp_path, story, at_bench=True)


def test_progress_of_a_long_look_asks_for_nothing_anew(tmp_path):
    """Each word on how far a calculation is repaints the status line; were the screen written anew, it would ask again."""

    async def story(pilot: Pilot[int]) -> None:
        bench: FakeBench = pilot.app.desk.bench  # type: ignore[attr-defined]
        asked: list[str] = []

        def what_if(ref: str, type: str) -> tuple[StressView, ...]:
            asked.append(type)
            for step in range(4):
                report("the sound board", step, 4)
            return bench.stresses()

        bench.what_if = what_if  # type: ignore[method-assign]
        await press(pilot, "f5")
        for _ in range(5):
            await settle(pilot)
        assert len(asked) == 1 and "with it:" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)
