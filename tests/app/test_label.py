"""A board whose adapter has no profile: from the label to a job, by keys, on the real estimates."""

import pytest
from textual.pilot import Pilot

from tests.app.screens import play, press, settle, text_of, type_in
from triage.app.lines import plain, width_of
from triage.app.text.draft import draft_rows, seen_line, unread
from triage.board.profile import load_profile
from triage.job.draft import profiles_folder
from triage.job.draft_views import KnownView


@pytest.fixture(autouse=True)
def _own_folder(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))


async def fill_in(pilot: Pilot[int]) -> None:
    """The label of a 5 V 0.6 A cube, one transistor and no optocoupler."""
    await press(pilot, "up", "enter")
    for text in ("radio cube", "", "5", "0.6", ""):
        await type_in(pilot, text)
    await press(pilot, "down", "1", "down", "n")
    await settle(pilot)


async def estimate(pilot: Pilot[int]) -> None:
    """Take the likeliest family."""
    await fill_in(pilot)
    await press(pilot, "enter", "enter")


def row_with(pilot: Pilot[int], word: str) -> str:
    return next(row for row in text_of(pilot.app).splitlines() if word in row)


def test_families_follow_what_is_seen(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "up", "enter")
        before = row_with(pilot, "zener")
        for text in ("", "", "5", "0.6", ""):
            await type_in(pilot, text)
        await press(pilot, "down", "1", "down", "n")
        await settle(pilot)
        after = row_with(pilot, " % self-oscillating flyback, zener")
        assert int(after.split("%")[0].split()[-1]) > int(before.split("%")[0].split()[-1])
        assert "1 transistor: for it" in text_of(pilot.app)

    play(tmp_path, story)


def test_board_is_estimated_with_ranges_and_kept_at_once(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        text = text_of(pilot.app)
        assert "20 of 20 parts not read yet; kept as radio-cube" in text
        assert "9 of 10 boards" in text and "estimated" in text
        assert (profiles_folder() / "radio-cube.toml").is_file()

    play(tmp_path, story)


def test_marking_and_value_are_typed_on_their_rows_and_taken_back(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        await type_in(pilot, "10R")
        assert "19 of 20 parts not read yet" in text_of(pilot.app)
        await press(pilot, "down")
        await type_in(pilot, "m 9.8")
        assert "measured" in row_with(pilot, "resistance") and "9.8 ohm" in row_with(pilot, "resistance")
        await press(pilot, "f9")
        assert "10 ohm" in row_with(pilot, "resistance")

    play(tmp_path, story)
    part = load_profile(str(profiles_folder() / "radio-cube.toml")).part("RF1")
    assert part.value["resistance"] == 10.0


def test_unknown_marking_names_the_nearest_and_stays_in_the_field(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        pilot.app.screen.query_one("#list").go_to("Q1")  # type: ignore[attr-defined]
        await type_in(pilot, "E1300")
        assert "nearest:" in text_of(pilot.app)
        assert pilot.app.screen.query_one("#typed").value == "E1300"  # type: ignore[attr-defined]
        pilot.app.screen.query_one("#typed").value = ""  # type: ignore[attr-defined]
        await type_in(pilot, "MJE13003")
        assert "MJE13003, bipolar transistor of the catalog" in text_of(pilot.app)

    play(tmp_path, story)


def test_turns_are_checked_beside_the_count(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        rows = pilot.app.screen.query_one("#list")
        rows.go_to("T1 primary_turns")  # type: ignore[attr-defined]
        await type_in(pilot, "60")
        assert "checks do not fit" in text_of(pilot.app) and "!! " in text_of(pilot.app)

    play(tmp_path, story)


def test_parts_are_struck_out_by_two_presses_and_added_by_role(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        pilot.app.screen.query_one("#list").go_to("LED1")  # type: ignore[attr-defined]
        await settle(pilot)
        await press(pilot, "minus")
        await settle(pilot)
        assert "- again: the board has no LED1" in text_of(pilot.app)
        await pilot.press("minus")
        await settle(pilot)
        assert "LED1 struck out" in text_of(pilot.app) and "of 19 parts" in text_of(pilot.app)
        await pilot.press("plus")
        await settle(pilot)
        await type_in(pilot, "varis")
        assert "pins in their order: a, b" in text_of(pilot.app)
        await type_in(pilot, "mains_l")
        assert "1 nodes for the pins a, b" in text_of(pilot.app)
        await type_in(pilot, " pgnd")
        assert "RV1 added: varistor" in text_of(pilot.app) and "of 20 parts" in text_of(pilot.app)

    play(tmp_path, story)


def test_job_begins_on_the_estimated_board(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        await press(pilot, "f2")
        assert "What is wrong with it?" in text_of(pilot.app)

    play(tmp_path, story)


def test_what_was_typed_and_ticked_is_there_after_going_back(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await fill_in(pilot)
        await press(pilot, "escape", "escape")
        assert "jobs and profiles" in text_of(pilot.app)
        await press(pilot, "enter")
        text = text_of(pilot.app)
        assert "radio cube" in text and "[1] transistors" in text

    play(tmp_path, story)


def test_missing_amperes_are_asked_for(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "up", "enter")
        for _ in range(5):
            await press(pilot, "enter")
        await press(pilot, "enter", "enter")
        assert "output volts of the label are missing" in text_of(pilot.app)

    play(tmp_path, story)


def test_own_profile_is_listed_and_can_be_changed_later(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await estimate(pilot)
        await press(pilot, "escape", "escape", "escape", "escape")
        assert "own " in row_with(pilot, "radio cube")
        await press(pilot, "up", "up", "e")
        assert "only profiles made here can be changed" in text_of(pilot.app)
        await press(pilot, "down", "down", "e")
        await settle(pilot)
        assert "20 of 20 parts not read yet; kept as radio-cube" in text_of(pilot.app)
        await type_in(pilot, "10R")

    play(tmp_path, story)
    assert load_profile(str(profiles_folder() / "radio-cube.toml")).part("RF1").value["resistance"] == 10.0


def test_rows_fit_the_screen_and_say_how_each_value_is_known(tmp_path):
    from triage.job.draft import Draft

    draft = Draft()
    view = draft.estimate("pwm_flyback_opto", "100-240 V~", "12", "2", "II", ())
    for width in (80, 100, 160):
        assert all(width_of(row) <= width for _, row in draft_rows(view, width))
    texts = [plain(row) for _, row in draft_rows(view, 80)]
    assert sum("estimated" in text for text in texts) > 30
    assert unread(view.parts) == len(view.parts)
    assert not any("saturation" in text for text in texts)
    assert isinstance(view.parts[0].values[0], KnownView)


def test_answers_differ_by_more_than_colour():
    assert [plain(seen_line("fuse", said))[:3] for said in ("+", "-", "", "3")] == ["[+]", "[-]", "[ ]", "[3]"]
