"""What the screen costs: start, echo, bytes and memory against a bare Textual app measured in the same run.

    python -m tests.bench.bench_screen

Prints ratios, since seconds are the machine's and not the program's; bytes are of an 80x24 terminal with 256
colours.
"""

import statistics
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from tests.app.terminal import Terminal, app_on_stand_in

STARTS = 7
KEYS = 40

DOWN, ENTER = "\x1b[B", "\r"

_BARE = """
from textual.app import App
from textual.widgets import {widget}
class Bare(App):
    ENABLE_COMMAND_PALETTE = False
    def compose(self):
        yield {widget}({argument!r})
Bare().run()
"""


def bare(widget: str, argument: str) -> Terminal:
    """A bare Textual app with one widget."""
    return Terminal([sys.executable, "-c", _BARE.format(widget=widget, argument=argument)])


_APP = "from pathlib import Path; from triage.app.app import run; raise SystemExit(run(None, None, Path({folder!r})))"


def start_page(folder: Path) -> Terminal:
    """The app as it is started, on its start page."""
    return Terminal([sys.executable, "-c", _APP.format(folder=str(folder))])


def first_frame(make: Callable[[], Terminal], text: str) -> float:
    """Seconds from the start of the process until the text is on the screen."""
    begin = time.perf_counter()
    term = make()
    while text not in term.text:
        term.read(quiet=0.005, limit=0.05)
        if time.perf_counter() - begin > 30:
            raise AssertionError(term.text)
    seconds = time.perf_counter() - begin
    term.kill()
    return seconds


def echo(term: Terminal, keys: list[str]) -> list[float]:
    """Seconds from a key to the last byte of the frame it causes, for each key."""
    found = []
    for key in keys:
        term.read(quiet=0.15)
        begin = time.perf_counter()
        term.send(key)
        last, seen = begin, 0
        while time.perf_counter() - last < 0.15 or (seen == 0 and time.perf_counter() - begin < 2.0):
            before = len(term.received)
            term.read(quiet=0.0, limit=0.0)
            term.read(quiet=0.001, limit=0.002)
            if len(term.received) > before:
                last, seen = time.perf_counter(), 1
        found.append(last - begin)
    return found


def bytes_of(term: Terminal, keys: str) -> int:
    """Bytes sent for these keys, pressed at once."""
    term.read(quiet=0.4)
    term.send(keys)
    return term.read(quiet=0.4)


class Player:
    """Plays the stand-in job and counts the keys that are not part of a typed value."""

    def __init__(self, folder: Path) -> None:
        self.term = app_on_stand_in(folder)
        self.keys = 0

    def press(self, *keys: str) -> None:
        """Press keys, each after the screen has come to rest."""
        for key in keys:
            self.term.send(key)
            self.term.read(quiet=0.2)
            self.keys += 1

    def value(self, text: str) -> None:
        """Type a value and Enter; only Enter counts."""
        self.term.send(text)
        self.press(ENTER)

    def to_bench(self) -> None:
        """From the start page to the first reading."""
        self.term.wait_for("Radio desk cube")
        self.press(DOWN, *[ENTER] * 7, "s", "s")
        self.term.wait_for("next  volts DC")

    def to_close(self) -> None:
        """From the first reading to the saved verdict."""
        for text in ("12", "*", "0.8"):
            self.value(text)
        self.term.wait_for("found  Q1")
        self.press("\x1b[15~", ENTER, DOWN, ENTER, ENTER)
        self.press("\x1b[17~", ENTER)
        self.value("50M")
        self.value("5.02")
        self.press(ENTER)
        self.term.wait_for("saved after every entry")


def measured_bytes(folder: Path) -> dict[str, int]:
    """Bytes at 80x24 for what is done most."""
    player = Player(folder)
    player.to_bench()
    term = player.term
    found = {"typed character": max(bytes_of(term, char) for char in "12")}
    found["accepted reading"] = bytes_of(term, ENTER)
    found["second accepted reading"] = bytes_of(term, "*" + ENTER)
    found["page of the board"] = bytes_of(term, "\x1b[5~")
    term.send("\x1bOR")
    term.wait_for("peak voltage")
    found["cursor move in the stress list"] = max(bytes_of(term, DOWN) for _ in range(3))
    found["to another screen"] = bytes_of(term, "\x1bOQ")
    term.read(quiet=0.5)
    found["two idle seconds"] = term.read(quiet=2.0, limit=2.1)
    term.send("\x14")
    term.read(quiet=1.0)
    found["typed character, light"] = max(bytes_of(term, char) for char in "12")
    term.kill()
    return found


def main() -> None:
    """Print the table."""
    folder = Path(tempfile.mkdtemp())
    starts: dict[str, list[float]] = {"static": [], "input": [], "app": []}
    for _ in range(STARTS):
        starts["static"].append(first_frame(lambda: bare("Static", "usable"), "usable"))
        starts["input"].append(first_frame(lambda: bare("Input", "usable"), "usable"))
        starts["app"].append(first_frame(lambda: start_page(folder), "begin  "))
    middle = {name: statistics.median(values) for name, values in starts.items()}
    print(
        f"start to first usable frame, median of {STARTS}: bare {middle['static'] * 1e3:.0f} ms; "
        f"ratio to a bare app "
        f"{middle['app'] / middle['static']:.2f}, to one with a field {middle['app'] / middle['input']:.2f} (target 1.5)"
    )
    plain, player = bare("Input", "usable"), Player(folder)
    player.to_bench()
    plain.read(quiet=0.5)
    for name, keys in (("typed character", ["1", "\x7f"] * (KEYS // 2)),):
        ours, theirs = sorted(echo(player.term, keys)), sorted(echo(plain, keys))
        print(
            f"{name}: key to finished frame, median {statistics.median(theirs) * 1e3:.1f} ms bare; ratio of medians "
            f"{statistics.median(ours) / statistics.median(theirs):.2f}, of 95th percentiles "
            f"{ours[int(0.95 * len(ours))] / theirs[int(0.95 * len(theirs))]:.2f}"
        )
    print(f"memory: {plain.resident_kb() / 1024:.0f} MB bare, ratio {player.term.resident_kb() / plain.resident_kb():.2f}")
    plain.kill()
    player.to_close()
    print(f"keys for the stand-in job from start to saved verdict besides typed values: {player.keys} (target below 60)")
    player.term.kill()
    for name, count in measured_bytes(folder).items():
        print(f"{name}: {count} bytes")


if __name__ == "__main__":
    main()
