"""Lines made of the bench's records: what is cut, kept and said (reasoned cases)."""

import math

import pytest

from tests.app.fake_bench import BOARD, STRESSES
from triage.app.glyphs import ASCII
from triage.app.lines import plain, width_of
from triage.app.text.bench import (
    fault_words,
    key_for,
    log_lines,
    mode_words,
    percent,
    rooms,
    suggestion_lines,
    suspect_lines,
    verdict_lines,
)
from triage.app.text.frame import status_lines
from triage.app.text.key_line import standard_keys
from triage.app.text.moves import move_lines
from triage.app.text.stress import stress_head, stress_line, with_it, worst_first
from triage.job.views import EntryView, JobView, MoveView, OutcomeView, SuggestionView, SuspectView, VerdictView

SUGGESTION = SuggestionView(
    "ohms",
    "coll",
    "pgnd",
    "cold",
    "ohm",
    0.8,
    "a shorted main switch shows below 5 ohm here, a sound one reads high " * 3,
    (OutcomeView("below 5 ohm", 0, 5, 0.6, "Q1 is shorted"), OutcomeView("OL", 1e6, math.inf, 0.4, "Q1 is not shorted")),
    "C1 may hold 325 V",
)
PINS = {"coll": ("Q1 collector", "D2 anode", "T1 pri_e"), "pgnd": ("C1 minus", "Q1 emitter")}
WIDTHS = (40, 80, 120, 160)


@pytest.mark.parametrize("share", [0.0, 1e-9, 0.004, 0.2, 0.999, 1.0])
def test_only_certainty_is_written_as_nought_or_a_hundred(share):
    assert (percent(share) == "0 %") == (share == 0)
    assert (percent(share) == "100 %") == (share == 1)


def test_modes_are_words():
    assert mode_words("Q1.ce_short") == "Q1 ce short"


@pytest.mark.parametrize("height", range(12, 60))
@pytest.mark.parametrize("board", [5, 14, 30])
@pytest.mark.parametrize("beside", [False, True])
def test_the_rows_of_the_bench_add_up(height, board, beside):
    room = rooms(height, board, beside)
    used = room.board + (0 if beside else room.suspects) + room.next + room.log
    assert used == height or (used > height and room.board == 3)
    assert room.next >= 5 and room.suspects >= 3 and room.board >= 3


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("rows", [4, 5, 8, 12])
def test_the_next_reading_fits_and_names_leads_reason_and_outcomes(width, rows):
    lines = suggestion_lines(SUGGESTION, PINS, width, rows)
    assert len(lines) <= rows and all(width_of(row) <= width for row in lines)
    text = "\n".join(map(plain, lines))
    assert "ohms" in text and "! C1 may hold 325 V" in text and "shorted" in text
    if width >= 80:
        assert "{+coll}" in text and "{-pgnd}" in text and "unplugged" in text and "Q1 collector" in text and "Q1 emitter" in text


def test_a_live_reading_says_so_in_words():
    live = SuggestionView("volts_dc", "out", "sgnd", "full", "V", 2.0, "why")
    assert "LIVE" in plain(suggestion_lines(live, {}, 80, 5)[0])


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("rows", [3, 5, 8])
def test_suspects_fit_and_the_first_is_marked(width, rows):
    suspects = [
        SuspectView("Q1", "ce_short", 0.6, ("RF1.open",), "main switch", "voltage 104 % of rating"),
        SuspectView("RF1", "open", 0.4),
        SuspectView("", "no part fault", 0.0),
    ]
    lines = suspect_lines(suspects, width, rows, ASCII)
    assert len(lines) <= rows and all(width_of(row) <= width for row in lines)
    text = "\n".join(map(plain, lines))
    assert "*Q1 ce short" in text and "60 %" in text and "?RF1 open" in text


@pytest.mark.parametrize(
    ("status", "words"),
    [
        ("found", "replace Q1 RF1"),
        ("no part fault", "cord, plug, joints"),
        ("does not fit", "read the last ones again"),
    ],
)
def test_each_verdict_says_what_to_do(status, words):
    verdict = VerdictView(status, "Q1", "ce_short", ("RF1.open",), ("Q1", "RF1"), 0.97)
    lines = verdict_lines(verdict, 80, 6)
    assert words in "\n".join(map(plain, lines)) and len(lines) <= 6


def test_an_open_verdict_takes_no_room():
    assert verdict_lines(VerdictView("open"), 80, 6) == ()


@pytest.mark.parametrize("width", WIDTHS)
def test_the_status_says_job_stage_and_touch(width):
    view = JobView("x", "Radio desk cube", "cold", "NOT safe to touch: unplug and read the bulk voltage", computing=True)
    first, second = status_lines(view, "bench", width)
    assert width_of(first) <= width and width_of(second) <= width
    assert "COLD READINGS" in plain(first) and "computing" in plain(second)
    if width >= 80:
        assert "NOT safe to touch" in plain(second)


def test_the_key_line_never_overflows():
    assert all(width_of(standard_keys(width)) <= width for width in range(20, 200))


@pytest.mark.parametrize("width", [80, 100, 160])
@pytest.mark.parametrize("stress", STRESSES, ids=lambda one: one.ref)
def test_stress_rows_line_up_with_their_head(width, stress):
    row = plain(stress_line(stress, width, ASCII))
    assert len(row) == len(plain(stress_head(width)).rstrip()) and len(row) <= width


def test_stresses_with_a_part_fitted_are_told_as_shares():
    after = (STRESSES[0].__class__("Q1", "main switch", "peak_voltage", 728.0, "V", 1100.0, 880.0, 0.66, "ok"),)
    assert plain(with_it(STRESSES, after, "Q1", 80)[0]) == "with it: peak voltage 104 % -> 66 %"


def test_moves_show_rise_and_fall():
    before = (SuspectView("Q1", "ce_short", 0.3), SuspectView("R1", "open", 0.7))
    after = (SuspectView("Q1", "ce_short", 0.9), SuspectView("R1", "open", 0.1))
    lines = move_lines([MoveView("start", before), MoveView("ohms: 0.8", after)], 80, 6, ASCII)
    assert "last +60" in plain(lines[1]) and "last -60" in plain(lines[2])


def test_taken_back_entries_say_so():
    lines = log_lines([EntryView(1, "", "ohms 5", undone=True), EntryView(2, "", "ohms 6")], 60, 5)
    assert "(taken back)" in plain(lines[1]) and "(taken back)" not in plain(lines[2])


def test_the_stand_in_board_names_nodes_that_the_drawing_has():
    assert all(node in BOARD.drawing for node in ("bulk", "pgnd", "coll", "base"))


def test_the_worst_stress_stands_first():
    assert [one.ref for one in worst_first(STRESSES[::-1])][:2] == ["Q1", "R1"]
    assert worst_first(STRESSES)[-1].ref == "LED1"


def test_a_reading_at_the_plug_has_no_leads_to_place():
    lines = suggestion_lines(SuggestionView("watts", "mains_l", "pgnd", "noload", "W", 6.0, "why", ()), PINS, 80, 5)
    text = plain(lines[0])
    assert "watts at the plug" in text and "LIVE, no load" in text and "red" not in text and "mains_l" not in text


def test_two_faults_at_once_are_named_each_with_its_part():
    assert fault_words(SuspectView("C5+R1", "high_esr+open", 0.1)) == "C5 high esr + R1 open"
    assert fault_words(SuspectView("", "no part fault", 0.1)) == "no part fault"


def test_with_little_room_the_likeliest_outcomes_are_shown_in_the_order_of_the_scale():
    outcomes = tuple(OutcomeView(f"band {at}", at, at + 1, chance, "x") for at, chance in enumerate((0.02, 0.9, 0.01, 0.07)))
    lines = suggestion_lines(SuggestionView("ohms", "a", "b", "cold", "ohm", 1.0, "why", outcomes), {}, 80, 4)
    assert [plain(row).split()[3] for row in lines[-2:]] == ["1", "3"]


@pytest.mark.parametrize(
    ("refusal", "key"),
    [
        ("power up: not open yet: first acknowledge scope", "F10"),
        ("retest cold: not open yet: first unplug and read the bulk voltage", "F2"),
        ("repair: not open yet: first look at cord", "F8"),
        ("reading: 'x'; expected ohm", ""),
    ],
)
def test_a_refusal_names_the_key_where_it_is_put_right(refusal, key):
    assert key_for(refusal) == key
