"""A line that drops in the middle of a job: the terminal is closed, the kernel hangs up, and the next start goes on there."""

import os
import sys
import time
import tomllib

import pytest

from tests.app.terminal import Terminal
from triage.job.bench import Bench
from triage.job.half_typed import LONGEST, keep_half_typed, take_half_typed

pytest.importorskip("pty")

DOWN, ENTER = "\x1b[B", "\r"


def begin(folder) -> Terminal:
    environ = {"HOME": str(folder), "XDG_CACHE_HOME": str(folder / "cache"), "XDG_DATA_HOME": str(folder / "data")}
    return Terminal([sys.executable, "-m", "tests.app.run_real", str(folder / "jobs")], environ=environ)


def say(term: Terminal, keys: str, then: str) -> str:
    term.send(keys)
    return term.wait_for(then)


def to_first_reading(term: Terminal) -> None:
    """A job on the handset charger, up to the bulk reading taken and the next one asked for."""
    term.wait_for("charger cube of the harbour")
    for _ in range(3):
        term.send(DOWN)
        term.read(quiet=0.1)
    say(term, ENTER, "What is wrong with it?")
    for _ in range(2):
        term.send(ENTER)
        term.read(quiet=0.2)
    say(term, ENTER, "5 before touching")
    for left in range(4, 0, -1):
        say(term, ENTER, f"{left} before touching")
    say(term, ENTER, "to look at:")
    say(term, "a", "next  volts DC")
    say(term, "0.3" + ENTER, "bulk to pgnd, cold: 300 mV")


def closed(term: Terminal) -> int:
    """Close the master side: the kernel sends SIGHUP to the app; its exit status."""
    os.close(term.fd)
    for _ in range(1500):
        pid, status = os.waitpid(term.pid, os.WNOHANG)
        if pid:
            return os.waitstatus_to_exitcode(status)
        time.sleep(0.01)
    term.kill()
    os.waitpid(term.pid, 0)
    raise AssertionError("the app goes on without a terminal")


def test_closed_terminal_loses_nothing_and_the_next_start_is_at_the_same_step(tmp_path):
    term = begin(tmp_path)
    to_first_reading(term)
    asked = next(row for row in term.text.splitlines() if row.startswith("next"))
    say(term, "4k", "reading 4k")
    assert closed(term) != 0
    path = next((tmp_path / "jobs").glob("*.toml"))
    entries = tomllib.loads(path.read_text(encoding="utf-8"))["entry"]
    assert [entry["kind"] for entry in entries].count("reading") == 1, "what was only half typed is no entry"
    again = begin(tmp_path)
    again.wait_for("go on")
    again.send(ENTER)
    again.wait_for("reading 4k")
    text = again.wait_for(asked)
    assert "reading 4k" in text and "look at the meter again" in text
    say(again, "\x7f\x7f0.55" + ENTER, "rect to bulk, cold: 550 mV")
    with Bench.open(path, write=False) as bench:
        assert bench.job.entries[-1].said["typed"] == "0.55"
    again.send("\x11")
    assert again.status() == 0
    assert not path.with_name(path.name + ".lock").exists()


def test_half_typed_field_is_given_back_once_and_harmlessly(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    job, other = tmp_path / "a.toml", tmp_path / "b.toml"
    keep_half_typed(job, "4k\x1b[2J" + "9" * 1000)
    assert take_half_typed(other) == ""
    text = take_half_typed(job)
    assert text.startswith("4k") and "\x1b" not in text and len(text) <= LONGEST
    assert take_half_typed(job) == ""


def test_cache_that_cannot_be_written_is_no_reason_to_stay(tmp_path, monkeypatch):
    (tmp_path / "triage").write_text("a file where the folder should be", encoding="utf-8")
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    keep_half_typed(tmp_path / "a.toml", "4k7")
    assert take_half_typed(tmp_path / "a.toml") == ""
