"""One whole job on the real bench by keyboard in a real pseudo terminal at 80x24: from the start page to the closed
job, its file, and the same belief when it is opened again.

The meter is played by the program's own expectations under a fault (``triage expect``), so that what is tested
is the way of a job through screens, gates and file, not the physics, which the outside checks hold.
"""

import re
import sys
import tomllib
from pathlib import Path

import pytest

from tests.app.terminal import Terminal
from triage.app.text.bench import CONDITION_WORDS, FUNCTION_WORDS
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.job.bench import Bench
from triage.job.wiring import Wiring

pytest.importorskip("pty")
pytestmark = pytest.mark.long

PROFILE = "harbour-handset-charger"
FAULT = "R1.open"
MOST_KEYS = 60
"""Keys besides typed values from the start page to the closed job: the house's own target."""
DOWN, ENTER = "\x1b[B", "\r"
F2, F5, F6, F10 = "\x1bOQ", "\x1b[15~", "\x1b[17~", "\x1b[21~"
NEXT = re.compile(r"^next +(.+?) +red \{\+([\w.]+)\}.* black \{-([\w.]+)\}.* (unplugged|LIVE, \w+ load) +[\d.]+ min", re.M)
FUNCTIONS = {words: key for key, words in FUNCTION_WORDS.items()}
CONDITIONS = {words: key for key, words in CONDITION_WORDS.items()}


class Meter:
    """What each instrument shows on the shipped board with the fault in it."""

    def __init__(self) -> None:
        rows = Wiring().expected(load_profile(PROFILE), (Fault.parse(FAULT),))
        self._shown = {(one.function, one.plus, one.minus, one.condition): one.text for one in rows}

    def reads(self, function: str, plus: str, minus: str, condition: str) -> str:
        """The reading as a person types it."""
        if (function, condition) == ("volts_dc", "cold"):
            return "0.2 V"
        text = self._shown.get((function, plus, minus, condition)) or self._shown[function, minus, plus, condition]
        return "*" if text == "OL" else text


class Technician:
    """Presses keys as a person does, counts them, and looks at every screen."""

    def __init__(self, folder: Path) -> None:
        code = "from pathlib import Path; from triage.app.app import run; raise SystemExit(run(None, None, Path({!r})))"
        environ = {"HOME": str(folder), "XDG_CACHE_HOME": str(folder / "cache")}
        self.term = Terminal([sys.executable, "-c", code.format(str(folder))], environ=environ)
        self.keys = 0
        self.typed: list[str] = []

    def press(self, key: str, then: str) -> str:
        """One key, and wait for what it must lead to."""
        self.term.send(key)
        self.keys += 1
        return self.see(then)

    def value(self, text: str, then: str) -> str:
        """A typed value; of it only Enter counts."""
        self.term.send(text)
        self.typed.append(text)
        return self.press(ENTER, then)

    def see(self, text: str) -> str:
        """Wait for a text and for the screen to come to rest; nothing may lie outside the screen."""
        self.term.wait_for(text, 60.0)
        self.term.read(quiet=0.2)
        shown = self.term.text
        rows = shown.splitlines()
        assert len(rows) == 24 and all(len(row) <= 80 for row in rows)
        assert rows[-1].startswith("F1 ?"), f"the key line is not where it belongs\n{shown}"
        return shown


def to_bench(person: Technician) -> None:
    """From the start page through complaint, cautions and looks to the first reading."""
    person.see("jobs and profiles")
    while "harbour" not in under_cursor(person.term) or "handset" not in under_cursor(person.term):
        person.press(DOWN, "jobs and profiles")
    person.press(ENTER, "What is wrong with it?")
    person.see("dead")
    for _ in range(2):
        person.press(ENTER, "What is wrong with it?")
    shown = person.press(ENTER, "before touching")
    for left in range(int(re.search(r"cautions: (\d+) before", shown)[1]) - 1, 0, -1):  # type: ignore[index]
        person.press(ENTER, f"cautions: {left} before touching")
    shown = person.press(ENTER, "to look at:")
    assert under_cursor(person.term).startswith("!  Mains plug, cord"), "the likeliest place of the fault comes first"
    before = outside_share(person.see("suspects now: no part fault"))
    assert 55 <= before <= 75, "two of three dead adapters have nothing wrong on the board"
    for looked in ("cord", "output lead", "load"):
        after = outside_share(person.press("s", f"sound at {looked}"))
        assert after < before
        before = after
    person.press("a", "next  volts DC")


def under_cursor(term: Terminal) -> str:
    """The first row that is painted in colours of its own from end to end: the one under the list's cursor."""
    cells = term.screen.buffer
    usual = (cells[0][1].bg, cells[22][79].bg)
    """Backgrounds of the head lines and of the paper."""
    rows = (row for row in range(2, 22) if cells[row][70].bg not in usual and cells[row][70].bg == cells[row][2].bg)
    return next((term.screen.display[row] for row in rows), "")


def outside_share(shown: str) -> int:
    """Percent of no part fault in the line of leading suspects."""
    return int(re.search(r"no part fault (\d+) %", shown)[1])  # type: ignore[index]


def to_verdict(person: Technician, meter: Meter) -> int:
    """Readings as suggested, until the verdict; how many."""
    for count in range(20):
        shown = person.term.text
        if "found  R1 open" in shown:
            return count
        asked = NEXT.search(shown)
        assert asked is not None, shown
        probe = FUNCTIONS[asked[1]], asked[2], asked[3], CONDITIONS[asked[4]]
        assert probe[3] == "cold", "no reading with mains before the gates are open"
        text = meter.reads(*probe)
        person.value(text, f"{asked[2]} to {asked[3]}, cold:")
    raise AssertionError(person.term.text)


def to_close(person: Technician) -> None:
    """Part, fit, checks, closing."""
    person.press(F5, "R1 startup resistor must withstand")
    shown = person.see("rated for R1, best first")
    assert "voltage limit" in shown and "at least" in shown
    person.see("with it:")
    person.press(ENTER, "rated for R1")
    person.see("with it: peak voltage")
    person.press(ENTER, "Enter again:")
    person.press(ENTER, "fitted at R1:")
    assert "72 % ->" in person.see("stresses of R1: before -> now")
    person.press(F6, "Visual: parts as recorded")
    person.press(ENTER, "yes or no")
    person.value("yes", "retest visual: pass")
    person.value("50M", "retest insulation: pass")
    person.value("yes", "F10: power up: not open yet")
    shown = person.press(F10, "cautions: 7 before power")
    for left in range(6, 0, -1):
        person.press(ENTER, f"cautions: {left} before power")
    person.press(ENTER, "reading yes")
    person.press(ENTER, "retest polarity: pass")
    person.value("5.02", "retest output no load: pass")
    person.value("4.96", "retest output full load: pass")
    person.value("yes", "retest soak: pass")
    person.value("yes", "F2: retest cold: not open yet")
    person.press(F2, "Unplug; before you touch")
    person.value("0.3", "bulk to pgnd, cold: 300 mV")
    person.press(F6, "reading yes")
    person.press(ENTER, "retest cord pull: pass")
    person.press(ENTER, "saved after every entry")
    assert "CLOSED" in person.term.text


def test_a_whole_real_job_by_keyboard_is_kept_and_opens_with_the_same_belief(tmp_path):
    person, meter = Technician(tmp_path), Meter()
    to_bench(person)
    readings = to_verdict(person, meter)
    suspects = re.findall(r"^ *(\S+ %) ", person.term.text, re.M)
    to_close(person)
    keys = person.keys
    path = tmp_path / f"{PROFILE}.toml"
    entries = tomllib.loads(path.read_text(encoding="utf-8"))["entry"]
    kinds = [entry["kind"] for entry in entries]
    assert kinds.count("complaint") == 1 and kinds.count("acknowledge") == 12 and kinds.count("look") == 3
    assert kinds.count("reading") == readings + 1 and kinds.count("fitted") == 1 and kinds.count("retest") == 7
    written = [entry["typed"] for entry in entries if "typed" in entry and entry["kind"] != "complaint"]
    assert sorted(written) == sorted("OL" if text == "*" else text for text in person.typed)
    assert entries[-1]["kind"] == "closed" and entries[-1]["verdict"] == "repaired" and entries[-1]["fault"] == FAULT
    assert entries[-1]["cured"] is True
    person.term.send("\x11")
    assert person.term.status(30.0) == 0
    with Bench.open(path, write=False) as bench:
        bench.prepare()
        view = bench.view()
        assert view.stage == "closed" and view.verdict.ref == "R1"
        now = [f"{one.probability * 100:.0f} %" for one in view.suspects]
    assert suspects[0] == now[0]
    again = Technician(tmp_path)
    again.see("go on")
    again.press(ENTER, "CLOSED")
    assert f" {suspects[0]} " in again.press(F2, "R1 open             startup resistor")
    again.term.send("\x11")
    assert again.term.status(30.0) == 0
    print(
        f"\nreal job {FAULT}: {readings} readings to the verdict, {keys} keys besides typed values from the start page to "
        f"the closed job (target below {MOST_KEYS}), {len(entries)} entries in {path.stat().st_size} bytes"
    )
    assert keys < MOST_KEYS
