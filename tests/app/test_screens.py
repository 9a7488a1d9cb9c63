"""Screens by what a technician does: each story is keys pressed and what the screen then says."""

import asyncio
from pathlib import Path

import pytest
from textual.pilot import Pilot

from tests.app.screens import BEGIN, CAUTIONS, COMPLAIN, LOOKED, play, press, settle, text_of, type_in
from triage.app.glyphs import ASCII
from triage.app.keys import COMMANDS

PLACES = ("f2", "f3", "f4", "f5", "f6", "f7", "f8")


def field_of(pilot: Pilot[int]) -> str:
    return str(pilot.app.screen.query_one("#field").value)  # type: ignore[attr-defined]


def test_the_start_page_says_what_to_do_first(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        text = text_of(pilot.app)
        assert "pull the plug" in text
        assert "go on" in text and "Tide gauge supply" in text
        assert "begin" in text and "Radio desk cube" in text

    play(tmp_path, story)


def test_a_new_job_asks_for_the_complaint_then_the_cautions_then_reads(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN)
        assert "What is wrong with it?" in text_of(pilot.app)
        await press(pilot, *COMPLAIN)
        assert "cautions: 3 before touching" in text_of(pilot.app)
        await press(pilot, *CAUTIONS[:2])
        assert "cautions: 1 before touching" in text_of(pilot.app)
        await press(pilot, "enter")
        assert "INSPECTION" in text_of(pilot.app)
        await press(pilot, *LOOKED)
        text = text_of(pilot.app)
        assert "COLD READINGS" in text and "next  volts DC" in text

    app = play(tmp_path, story)
    assert app.shelf.bench.said[0].text == "complaint: dead at full"  # type: ignore[attr-defined]


def test_no_reading_is_asked_for_while_a_caution_is_open(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN, *COMPLAIN, *CAUTIONS[:2], "f2")
        assert "next  volts DC" not in text_of(pilot.app)

    play(tmp_path, story)


def test_readings_narrow_the_suspects_to_a_verdict(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "12 V")
        assert "ok safe to touch" in text_of(pilot.app)
        await type_in(pilot, "*")
        await type_in(pilot, "0.8")
        text = text_of(pilot.app)
        assert "found  Q1 ce short + RF1 open" in text
        assert "replace Q1 RF1" in text and "why: collector-emitter" in text

    play(tmp_path, story, at_bench=True)


def test_the_field_is_empty_again_after_an_accepted_reading(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "12")
        assert field_of(pilot) == ""
        assert pilot.app.focused is pilot.app.screen.query_one("#field")

    play(tmp_path, story, at_bench=True)


def test_a_refused_value_stays_in_the_field_and_the_reason_is_beside_it(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "1x2")
        assert field_of(pilot) == "1x2"
        assert "expected a value in V" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_skipping_goes_on_to_another_reading_and_undo_brings_it_back(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "12")
        assert "{+mains_l}" in text_of(pilot.app)
        await type_in(pilot, "can't reach")
        assert "{+coll}" in text_of(pilot.app)
        await press(pilot, "f9")
        assert "{+mains_l}" in text_of(pilot.app)
        await type_in(pilot, "s")
        await type_in(pilot, "u")
        assert "{+mains_l}" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_any_reading_can_be_entered_in_one_line_or_in_the_form(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "ohms coll pgnd 0.6")
        assert "noted: ohms coll pgnd cold: 0.6" in text_of(pilot.app)
        await type_in(pilot, "+")
        assert "A reading of your own choice" in text_of(pilot.app)
        for text in ("oh", "bulk", "base", "", "OL"):
            await type_in(pilot, text) if text != "oh" else await press(pilot, "enter")
        assert "bulk base cold: OL" in text_of(pilot.app)
        assert "next" in text_of(pilot.app) or "found" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_an_unknown_node_is_refused_and_the_form_stays(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "ohms nowhere pgnd 5")
        assert "no node 'nowhere'" in text_of(pilot.app)
        assert field_of(pilot) == "ohms nowhere pgnd 5"

    play(tmp_path, story, at_bench=True)


def test_a_sign_is_entered_with_its_part(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "/")
        await type_in(pilot, "seen")
        await type_in(pilot, "bul")
        await type_in(pilot, "C4")
        text = text_of(pilot.app)
        assert "noted: seen: bulging C4" in text and "next" in text

    play(tmp_path, story, at_bench=True)


def test_stress_page_shows_bars_and_words(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "f3")
        text = text_of(pilot.app)
        assert "!! Q1" in text and "over rating" in text and "253 V, no load" in text
        await press(pilot, "down")
        assert "R1 startup resistor" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_moves_page_shows_what_each_entry_did(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "12")
        await type_in(pilot, "*")
        await press(pilot, "f4")
        text = text_of(pilot.app)
        assert "Q1 ce short" in text and "last +" in text and "ohms mains_l rect cold: OL" in text

    play(tmp_path, story, at_bench=True)


async def found(pilot: Pilot[int]) -> None:
    """Play from the bench to the verdict."""
    for text in ("12", "*", "0.8"):
        await type_in(pilot, text)


def test_a_candidate_is_fitted_and_its_stresses_are_shown(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await found(pilot)
        await press(pilot, "f5")
        text = text_of(pilot.app)
        assert "at least 910 V" in text and "MJE13005" in text and "MJE13003" not in text
        await press(pilot, "enter", "down", "enter")
        assert "Enter again: KSC5027 was fitted at Q1" in text_of(pilot.app)
        await press(pilot, "enter")
        text = text_of(pilot.app)
        assert "noted: fitted KSC5027 at Q1" in text
        assert "104 % -> 66 %" in text

    play(tmp_path, story, at_bench=True)


def test_several_parts_together_are_worked_out_when_asked_and_noted(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "f5")
        await pilot.press("shift+tab")
        pilot.app.screen.query_one("#ref").value = "R1"  # type: ignore[attr-defined]
        pilot.app.screen.query_one("#ref").focus()
        await press(pilot, "enter", "end")
        await settle(pilot)
        assert "several parts together: Enter works them out" in text_of(pilot.app)
        await press(pilot, "enter", "end")
        await settle(pilot)
        text = text_of(pilot.app)
        assert "both in the drawers  2 x metal film 510k" in text and "voltage at most 52.5%" in text
        await press(pilot, "enter", "enter")
        assert "note: fitted at R1: 2 x metal film 510k" in pilot.app.desk.view.entries[-1].text  # type: ignore[attr-defined]

    play(tmp_path, story, at_bench=True)


def test_safety_parts_are_offered_no_combination(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, "f5")
        pilot.app.screen.query_one("#ref").value = "RF1"  # type: ignore[attr-defined]
        pilot.app.screen.query_one("#ref").focus()
        await press(pilot, "enter")
        text = text_of(pilot.app)
        assert "like for like only" in text and "several parts together" not in text

    play(tmp_path, story, at_bench=True)


def test_a_half_read_marking_finds_parts_while_typing_and_shows_why_one_is_refused(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await found(pilot)
        await press(pilot, "f5", "tab")
        for key in "13003":
            await pilot.press(key)
        await settle(pilot)
        text = text_of(pilot.app)
        assert "MJE13003" in text and "1N4007" not in text
        assert "refused: MJE13003: collector-emitter 700 V is below" in text
        await press(pilot, "enter", "enter", "enter")
        assert "is not rated for this place" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_a_repaired_adapter_is_retested_and_the_job_closed(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await found(pilot)
        await press(pilot, "f5", "enter", "enter", "enter", "f6")
        text = text_of(pilot.app)
        assert "RETEST" in text and "insulation between the sides at 500 V: at least 2 Mohm" in text and "LIVE full" in text
        await press(pilot, "enter")
        await type_in(pilot, "50M")
        assert "noted: retest insulation: pass (50M)" in text_of(pilot.app)
        await type_in(pilot, "5.02 V")
        assert "ok unplugged" in text_of(pilot.app) and "ok LIVE full" in text_of(pilot.app)
        await press(pilot, "enter")
        text = text_of(pilot.app)
        assert "CLOSED" in text and "saved after every entry" in text and "complaint: dead at full" in text

    app = play(tmp_path, story, at_bench=True)
    assert app.shelf.bench.closed == "repaired"  # type: ignore[attr-defined]


def test_a_retest_reading_typed_on_the_list_goes_to_its_field(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await found(pilot)
        await press(pilot, "f5", "enter", "enter", "enter", "f6")
        await type_in(pilot, "50M")
        assert "noted: retest insulation: pass (50M)" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_half_a_complaint_that_is_left_is_told(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN, "enter", "f10")
        assert "the complaint is not in the job yet" in text_of(pilot.app)

    play(tmp_path, story)


def test_each_look_is_answered_with_its_part(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN, *COMPLAIN, *CAUTIONS)
        assert "to look at: 2 before the readings" in text_of(pilot.app)
        await press(pilot, "enter", "enter")
        assert "to look at: 1 before the readings" in text_of(pilot.app)
        await press(pilot, "enter", "down", "enter")
        await type_in(pilot, "c4")
        text = text_of(pilot.app)
        assert "noted: looked at capacitors: bulging C4" in text and text.startswith(" bench ")

    play(tmp_path, story)


def test_everything_else_can_be_called_sound_at_once(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN, *COMPLAIN, *CAUTIONS)
        await pilot.press("end")
        await press(pilot, "enter")
        assert text_of(pilot.app).startswith(" bench ")

    play(tmp_path, story)


def test_power_is_told_in_the_reading_field(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "on")
        assert "noted: powered up" in text_of(pilot.app)
        await type_in(pilot, "off")
        assert "noted: unplugged" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


@pytest.mark.parametrize("key", PLACES)
def test_help_stands_behind_every_screen(tmp_path, key):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press(key)
        await settle(pilot)
        before = text_of(pilot.app)
        await pilot.press("f1")
        await settle(pilot)
        assert text_of(pilot.app) != before and " help " in text_of(pilot.app).splitlines()[0]
        await press(pilot, "escape")
        assert text_of(pilot.app) == before

    play(tmp_path, story, at_bench=True)


def test_a_question_mark_asks_for_help_in_an_empty_field_and_is_a_letter_in_words(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press("question_mark")
        await settle(pilot)
        assert "In the reading field:" in text_of(pilot.app)
        await press(pilot, "escape")
        await pilot.press("4", "question_mark")
        assert field_of(pilot) == "4?"

    play(tmp_path, story, at_bench=True)


def test_every_place_is_reached_from_every_place_by_the_same_key(tmp_path):
    names = {
        "f2": " bench ",
        "f3": " stress ",
        "f4": " moves ",
        "f5": " parts ",
        "f6": " retest ",
        "f7": " record ",
    }

    async def story(pilot: Pilot[int]) -> None:
        for start in names:
            for key, name in names.items():
                await press(pilot, start, key)
                assert text_of(pilot.app).startswith(name)
                assert len(pilot.app.screen_stack) == 3

    play(tmp_path, story, at_bench=True)


def test_the_menu_finds_commands_by_name(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await type_in(pilot, "/")
        assert "how hard each part is driven" in text_of(pilot.app)
        await type_in(pilot, "rating and")
        assert text_of(pilot.app).startswith(" stress ")

    play(tmp_path, story, at_bench=True)


def test_every_command_of_the_table_can_be_run(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        for command in COMMANDS:
            if command.action not in ("quit", "suspend_process", "start"):
                await pilot.app.run_action(command.action)
                await settle(pilot)
                await pilot.app.run_action("go('bench')")
                await settle(pilot)

    play(tmp_path, story, at_bench=True)


def test_the_calculation_can_be_stopped_and_gone_on_with(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press("down", "enter")
        for _ in range(300):
            await asyncio.sleep(0.01)
            if "complaint" in text_of(pilot.app):
                break
        await pilot.press("f2", *"stop", "enter")
        await settle(pilot)
        text = text_of(pilot.app)
        assert "stopped: nothing is suggested; type go" in text
        assert not pilot.app.desk.bench.ready and not pilot.app.desk.busy  # type: ignore[attr-defined]
        await type_in(pilot, "go")
        assert pilot.app.desk.bench.ready and "stopped" not in text_of(pilot.app)  # type: ignore[attr-defined]

    play(tmp_path, story, prepare_seconds=2.0)


def test_the_powered_board_is_solved_beside_the_work_and_can_be_stopped(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        desk = pilot.app.desk  # type: ignore[attr-defined]
        desk.bench.unsolved = 200
        desk.compute()
        for _ in range(500):
            await asyncio.sleep(0.01)
            if "computing, " in text_of(pilot.app):
                break
        assert "computing, " in text_of(pilot.app) and "powered board" in desk.progress
        assert "computing what each fault" not in text_of(pilot.app), "the suggestion stays"
        before = len(desk.view.entries)
        await pilot.press(*"10", "enter")
        for _ in range(300):
            await asyncio.sleep(0.01)
            if len(desk.view.entries) > before:
                break
        assert len(desk.view.entries) > before and desk.busy, "the entry did not wait for it"
        await pilot.press(*"stop", "enter")
        await settle(pilot)
        assert desk.bench.unsolved and "type go to go on" in text_of(pilot.app) and not desk.progress
        desk.bench.unsolved = 2
        await type_in(pilot, "go")
        await settle(pilot)
        assert desk.bench.unsolved == 0 and not desk.progress

    play(tmp_path, story, at_bench=True)


def test_going_back_to_the_start_page_puts_the_job_away(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.app.run_action("start")
        await settle(pilot)
        assert "go on" in text_of(pilot.app)
        await press(pilot, "f3")
        assert "go on" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_the_screen_answers_while_the_bench_computes(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press("down", "enter")
        for _ in range(100):
            await asyncio.sleep(0.01)
            if "complaint" in text_of(pilot.app):
                break
        await pilot.press("f2")
        for _ in range(150):
            await asyncio.sleep(0.01)
            text = text_of(pilot.app)
            if " computing, " in text.splitlines()[1]:
                break
        assert " computing, " in text.splitlines()[1] and "computing cold readings" in text
        await pilot.press("1", "2")
        assert field_of(pilot) == "12"
        await settle(pilot)
        assert " computing cold readings" not in text_of(pilot.app)

    play(tmp_path, story, prepare_seconds=2.0)


@pytest.mark.parametrize("size", [(80, 24), (100, 30), (120, 40), (160, 50)])
def test_a_resize_keeps_what_was_typed_and_the_keys_in_sight(tmp_path, size):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press("4", "7")
        await pilot.resize_terminal(*size)
        await settle(pilot)
        text = text_of(pilot.app)
        assert field_of(pilot) == "47"
        assert len(text.splitlines()) == size[1] and "F2 bench" in text.splitlines()[-1]
        assert "next  volts DC" in text and "*Q1" in text

    play(tmp_path, story, at_bench=True)


def test_in_ascii_nothing_else_reaches_the_screen(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        assert text_of(pilot.app).isascii()
        for key in PLACES:
            await pilot.press(key)
            await settle(pilot)
            assert text_of(pilot.app).isascii()

    play(tmp_path, story, at_bench=True, glyphs=ASCII, own_colours=True)


def test_text_from_files_is_never_markup_nor_an_escape(tmp_path: Path):
    async def story(pilot: Pilot[int]) -> None:
        await press(pilot, *BEGIN, "enter", "enter")
        await pilot.press("left_square_bracket", "r", "e", "d", "right_square_bracket", "enter")
        await settle(pilot)
        bench = pilot.app.desk.bench  # type: ignore[attr-defined]
        bench._log("\x1b[31m[bold]x[/bold]\x1b]0;owned\x07")
        pilot.app.desk.enter(lambda one: one.see("smell", ""))  # type: ignore[attr-defined]
        await settle(pilot)
        await press(pilot, "f7")
        text = text_of(pilot.app)
        assert "[red]" in text and "[bold]x[/bold]" in text and "\x1b" not in text and "\x07" not in text

    play(tmp_path, story)


def test_a_click_on_the_key_line_does_what_the_key_does(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        at = text_of(pilot.app).splitlines()[-1].index("F3")
        await pilot.click("#keys", offset=(at, 0))
        await settle(pilot)
        assert text_of(pilot.app).startswith(" stress ")
        await pilot.click("#list", offset=(5, 3))
        await settle(pilot)
        assert "C5 output capacitor" in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_a_drawing_wider_than_the_screen_can_be_moved_sideways(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        bench = pilot.app.desk.bench  # type: ignore[attr-defined]
        bench.drawing = "\n".join(" ".join([*(f"R{at}" for at in range(40)), f"out{row}"]) for row in range(5))
        await type_in(pilot, "12")
        assert "out3" not in text_of(pilot.app)
        await pilot.press(*["greater_than_sign"] * 9)
        await settle(pilot)
        assert "out3" in text_of(pilot.app) and field_of(pilot) == ""
        await pilot.press(*["less_than_sign"] * 9)
        await settle(pilot)
        assert "R2 R3" in text_of(pilot.app) and "out3" not in text_of(pilot.app)

    play(tmp_path, story, at_bench=True)


def test_a_half_typed_value_is_there_again_after_a_look_at_another_screen(tmp_path):
    async def story(pilot: Pilot[int]) -> None:
        await pilot.press("4", "7")
        await press(pilot, "f3", "f2")
        assert field_of(pilot) == "47"

    play(tmp_path, story, at_bench=True)
