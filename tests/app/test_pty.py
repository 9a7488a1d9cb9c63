"""The app in a real pseudo terminal: a whole job by keyboard under the common TERMs, signals, refusals, idle
silence."""

import os
import re
import signal
import subprocess
import sys
from concurrent.futures import Future, ThreadPoolExecutor
from pathlib import Path

import pytest

from tests.app.terminal import ROOT, Terminal, app_on_stand_in

pytest.importorskip("pty")

DOWN, ENTER, ESCAPE = "\x1b[B", "\r", "\x1b"
F = {"f3": "\x1bOR", "f4": "\x1bOS", "f5": "\x1b[15~", "f6": "\x1b[17~", "f7": "\x1b[18~", "f2": "\x1bOQ"}
LINUX_F = {**F, "f2": "\x1b[[B", "f3": "\x1b[[C", "f4": "\x1b[[D", "f5": "\x1b[[E"}

TERMS = {
    "xterm-256color": {"TERM": "xterm-256color"},
    "screen": {"TERM": "screen"},
    "linux": {"TERM": "linux"},
    "vt100": {"TERM": "vt100"},
    "no colour": {"TERM": "xterm-256color", "NO_COLOR": "1"},
    "no UTF-8": {"TERM": "xterm", "LANG": "C", "LC_ALL": "C", "PYTHONUTF8": "0", "PYTHONCOERCECLOCALE": "0"},
}


def say(term: Terminal, keys: str, then: str) -> str:
    """Send keys and wait until the screen shows what follows."""
    term.send(keys)
    return term.wait_for(then)


def press(term: Terminal, *keys: str) -> None:
    """Press keys as a person does, each after the screen has come to rest."""
    for key in keys:
        term.send(key)
        term.read(quiet=0.3)


def to_bench(term: Terminal) -> None:
    """From the start page to the first reading."""
    term.wait_for("Radio desk cube")
    press(term, DOWN)
    say(term, ENTER, "What is wrong with it?")
    press(term, ENTER, ENTER)
    say(term, ENTER, "cautions: 3 before touching")
    for left in ("2 before touching", "1 before touching", "to look at: 2"):
        say(term, ENTER, left)
    press(term, ENTER)
    say(term, ENTER, "to look at: 1")
    press(term, ENTER)
    say(term, ENTER, "next  volts DC")


def whole_job(term: Terminal, keys: dict[str, str]) -> str:
    """From the start page to the closed job; the last screen."""
    to_bench(term)
    say(term, "12 V" + ENTER, "ok safe to touch")
    say(term, "*" + ENTER, "{+coll}")
    say(term, "0.8" + ENTER, "found  Q1 ce short + RF1 open")
    say(term, keys["f3"], "over rating")
    say(term, keys["f4"], "suspects over the entries")
    say(term, keys["f5"], "at least 910 V")
    press(term, ENTER, DOWN, ENTER)
    say(term, ENTER, "noted: fitted KSC5027 at Q1")
    term.wait_for("104 % -> 66 %")
    say(term, keys["f6"], "insulation between the sides")
    press(term, ENTER)
    say(term, "50M" + ENTER, "retest insulation: pass")
    say(term, "5.02" + ENTER, "retest output: pass")
    say(term, ENTER, "saved after every entry")
    return term.wait_for("fitted KSC5027 at Q1")


@pytest.fixture(scope="module")
def whole_jobs(tmp_path_factory) -> dict[str, tuple[Terminal, Path, Future[str]]]:
    """The same job under every TERM, played side by side: name -> terminal, folder, last screen."""
    begun = {}
    for name, environ in TERMS.items():
        folder = tmp_path_factory.mktemp("jobs")
        begun[name] = app_on_stand_in(folder, environ=environ), folder
    with ThreadPoolExecutor(2 * (os.cpu_count() or 1)) as pool:
        return {
            name: (term, folder, pool.submit(whole_job, term, LINUX_F if name == "linux" else F))
            for name, (term, folder) in begun.items()
        }


@pytest.mark.parametrize("name", TERMS)
def test_a_whole_job_by_keyboard_at_80x24(whole_jobs, name):
    term, folder, last = whole_jobs[name]
    text = last.result()
    assert "CLOSED" in text
    assert text.splitlines()[-1].startswith("F1 ?") and len(text.splitlines()) == 24
    if name in ("no UTF-8",):
        assert term.text.isascii()
    if name == "no colour":
        assert not re.search(rb"\x1b\[[0-9;]*[34]8;[25];", term.received)
    term.send("\x11")
    assert term.status() == 0
    assert "closed: repaired" in (folder / "radio-desk-cube.toml").read_text()
    assert b"\x1b[?1049l" in term.received


@pytest.mark.parametrize("name", ["linux", "vt100", "no UTF-8"])
def test_a_board_from_its_label_in_a_real_terminal(tmp_path, name):
    """Label, one transistor counted, the family, one marking, and the job on it: nothing clipped on the way."""
    keys = LINUX_F if name == "linux" else F
    term = app_on_stand_in(tmp_path, environ={**TERMS[name], "XDG_DATA_HOME": str(tmp_path / "data")})
    term.wait_for("Radio desk cube")
    say(term, "\x1b[A" + ENTER, "then it is: Enter takes one")
    term.wait_for("12 % ")
    term.send("cube" + ENTER + ENTER + "5" + ENTER + "0.6" + ENTER)
    term.read(quiet=0.3)
    press(term, ENTER, DOWN)
    say(term, "1", "1 transistor: for it")
    press(term, ENTER)
    shown = say(term, ENTER, "20 of 20 parts not read yet; kept as cube")
    assert all(len(row) <= 80 for row in shown.splitlines()) and "estimated" in shown
    say(term, "10R" + ENTER, "19 of 20 parts not read yet")
    shown = say(term, keys["f2"], "What is wrong with it?")
    assert shown.splitlines()[-1].startswith("F1 ?")
    assert name != "no UTF-8" or term.text.isascii()
    assert (tmp_path / "data" / "triage" / "profiles" / "cube.toml").is_file()
    term.send("\x11")
    assert term.status() == 0


@pytest.mark.parametrize(("number", "code"), [(signal.SIGTERM, 143), (signal.SIGHUP, 129)])
def test_a_signal_saves_restores_the_screen_and_tells_by_its_status(tmp_path, number, code):
    term = app_on_stand_in(tmp_path)
    to_bench(term)
    term.send("12" + ENTER + "4")
    term.kill(number)
    assert term.status() == code
    assert term.received.rstrip().endswith(b"\x1b[?1049l") or b"\x1b[?1049l" in term.received
    saved = (tmp_path / "radio-desk-cube.toml").read_text()
    assert "complaint: dead at full" in saved


def test_an_entry_on_its_way_is_saved_before_leaving(tmp_path):
    term = app_on_stand_in(tmp_path)
    to_bench(term)
    term.send("12" + ENTER)
    term.wait_for("noted: volts_dc bulk pgnd cold: 12")
    term.kill(signal.SIGHUP)
    assert term.status() == 129
    assert "volts_dc bulk pgnd cold: 12" in (tmp_path / "radio-desk-cube.toml").read_text()


def test_keys_that_come_all_at_once_act_in_their_order(tmp_path):
    """A slow link holds keys back and brings them together: corrections stand where they were typed, and what follows an
    Enter belongs to the next reading."""
    term = app_on_stand_in(tmp_path)
    to_bench(term)
    say(term, "9x\x7f\x7f14\x1b[D\x7f\x1b[C" + ENTER + "47", "pgnd cold: 4")
    text = term.wait_for("reading 47")
    assert "reading 447" not in text
    say(term, "\x7f\x7f*" + ENTER, "{+coll}")


def test_nothing_is_sent_while_nothing_happens(tmp_path):
    term = app_on_stand_in(tmp_path)
    to_bench(term)
    term.read(quiet=0.5)
    assert term.read(quiet=2.0, limit=2.5) == 0


def test_resizes_at_any_time_keep_the_work_in_sight(tmp_path):
    term = app_on_stand_in(tmp_path)
    to_bench(term)
    term.send("4")
    for columns, rows in ((120, 40), (80, 24), (60, 15), (160, 50), (80, 24)):
        term.resize(columns, rows)
        term.read(quiet=0.3)
    text = term.wait_for("next  volts DC")
    assert "reading 4" in text and "F1 ?" in text.splitlines()[-1]


@pytest.mark.parametrize(("environ", "word"), [({"TERM": "dumb"}, "dumb"), ({"TERM": ""}, "TERM")])
def test_a_terminal_that_cannot_place_text_is_refused_in_one_line(environ, word):
    code = "from triage.app.app import run; raise SystemExit(run(None, None, None))"
    term = Terminal([sys.executable, "-c", code], environ=environ)
    assert term.status() == 2
    lines = [row for row in term.text.splitlines() if row]
    assert word in term.text and b"\x1b" not in term.received and len(lines) <= 2


def test_no_terminal_is_refused_in_one_line():
    code = "from triage.app.app import run; raise SystemExit(run(None, None, None))"
    done = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        cwd=ROOT,
        stdin=subprocess.DEVNULL,
        env={"PATH": "/usr/bin", "TERM": "xterm"},
    )
    assert done.returncode == 2
    assert done.stderr.count("\n") == 1 and "is not a terminal" in done.stderr and done.stdout == ""
