"""Finding a job among many, on screen: as one types, with progress, never a late answer."""

import asyncio
from pathlib import Path

from textual.pilot import Pilot

from tests.app.screens import play, press, settle, text_of
from tests.job.stand_in import PROFILE, Clock, StandIn
from triage.app.shelf import MOST_LISTED, Shelf, items
from triage.job.bench import Bench


async def to_jobs(pilot: Pilot[int]) -> None:
    await pilot.app.run_action("form('jobs')")
    await settle(pilot)


def test_latest_jobs_are_listed_and_narrowed_as_one_types(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await to_jobs(pilot)
        text = text_of(pilot.app)
        assert text.index("Tide gauge supply") < text.index("Fog horn adapter") and "dead, worn" in text
        await press(pilot, *"fog")
        await settle(pilot)
        assert "Fog horn" in text_of(pilot.app) and "Tide gauge" not in text_of(pilot.app)
        await press(pilot, *"zz")
        await settle(pilot)
        assert "no job fits these words" in text_of(pilot.app)

    play(tmp_path, story)


def test_enter_opens_the_job_under_the_cursor_in_place_of_the_one_before(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        before = pilot.app.desk.bench  # type: ignore[attr-defined]
        await to_jobs(pilot)
        await press(pilot, "down", "enter")
        opened = pilot.app.desk.bench  # type: ignore[attr-defined]
        assert opened is not before and before.released and opened.path.stem == "fog-horn"
        assert "next" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_a_long_search_tells_how_far_it_is_and_escape_ends_it(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        pilot.app.shelf.find_seconds = 0.8  # type: ignore[attr-defined]
        await pilot.app.run_action("form('jobs')")
        for _ in range(200):
            await asyncio.sleep(0.01)
            if "25 %" in (text := text_of(pilot.app)):
                break
        assert "computing the index of jobs, 25 %; Esc stops" in text
        await pilot.press("escape")
        await settle(pilot)
        assert "Tide gauge" not in text_of(pilot.app) and "%" not in text_of(pilot.app).splitlines()[0]
        pilot.app.shelf.find_seconds = 0.0  # type: ignore[attr-defined]
        await press(pilot, "f")
        await settle(pilot)
        assert "Fog horn" in text_of(pilot.app)

    play(tmp_path, story)


def test_start_page_lists_the_newest_and_leaves_the_others_to_the_search(tmp_path):
    for number in range(MOST_LISTED + 2):
        (tmp_path / f"job-{number}.toml").write_text(f'title = "adapter {number}"', encoding="utf-8")
    found = items(tmp_path)
    assert found[0].kind == "find" and f"all {MOST_LISTED + 2} jobs" in found[0].title
    assert sum(one.kind == "job" for one in found) == MOST_LISTED


def test_the_shelf_finds_by_a_few_words_and_knows_the_file(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))
    folder = tmp_path / "jobs"
    folder.mkdir()
    for name in ("one", "two"):
        with Bench.create(PROFILE, Path(folder / f"{name}.toml"), StandIn(), Clock()) as bench:
            bench.complain("smells of fish" if name == "two" else "", "dead", "full")
    shelf = Shelf(folder)
    assert {one.id for one in shelf.find("")} == {"one", "two"}
    assert all(shelf.path_of(one).is_file() for one in shelf.find("charger"))
