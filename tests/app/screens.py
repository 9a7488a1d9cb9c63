"""Drives the app without a terminal: start it on the stand-in, press keys, read the screen as text."""

import asyncio
from collections.abc import Awaitable, Callable
from pathlib import Path
from typing import Any

from textual import _wait
from textual.pilot import Pilot
from textual.strip import Strip

from tests.app.fake_shelf import FakeShelf
from triage.app.app import TriageApp
from triage.app.glyphs import FULL, Glyphs
from triage.app.terminal import Terminal

# Textual's pilot sleeps 20 ms at a time, twice a key, until the process is idle; `settle` waits for the bench besides.
_wait.SLEEP_GRANULARITY = 1 / 250
_wait.SLEEP_IDLE = 1 / 2500

Story = Callable[[Pilot[int]], Awaitable[None]]

BEGIN = ("down", "enter")
"""From the start page into a new job."""
COMPLAIN = ("enter", "enter", "enter")
"""The adapter is dead, seen at full load, no words."""
CAUTIONS = ("enter", "enter", "enter")
"""Three cautions, one by one."""
LOOKED = ("enter", "enter", "enter", "enter")
"""Board and capacitors looked at and sound."""
TO_BENCH = (*BEGIN, *COMPLAIN, *CAUTIONS, *LOOKED)


def strips(app: Any) -> list[Strip]:
    """What is on the screen, row by row."""
    found = app.screen._compositor.render_strips()
    return list(found)


def text_of(app: Any) -> str:
    """The screen as plain text."""
    return "\n".join(strip.text.rstrip() for strip in strips(app))


async def settle(pilot: Pilot[int]) -> None:
    """Wait until the bench has answered and the screen is drawn."""
    desk = pilot.app.desk  # type: ignore[attr-defined]
    for _ in range(200):
        await pilot.pause()
        if not desk.busy and not desk.pending:
            break
        await asyncio.sleep(0.01)
    await pilot.pause()


async def press(pilot: Pilot[int], *keys: str) -> None:
    """Press keys one by one, each after the bench has answered the one before."""
    for key in keys:
        await pilot.press(key)
        if key in (
            "enter",
            "f2",
            "f3",
            "f4",
            "f5",
            "f6",
            "f7",
            "f9",
            "escape",
            "ctrl+p",
            "down",
            "up",
            "tab",
        ):
            await settle(pilot)


async def type_in(pilot: Pilot[int], text: str) -> None:
    """Type a text and press Enter."""
    names = {
        " ": "space",
        "*": "asterisk",
        ".": "full_stop",
        "+": "plus",
        "/": "slash",
        "'": "apostrophe",
        "_": "underscore",
        "?": "question_mark",
        "-": "minus",
    }
    await pilot.press(*(names.get(char, char) for char in text), "enter")
    await settle(pilot)


def play(
    folder: Path,
    story: Story,
    size: tuple[int, int] = (80, 24),
    glyphs: Glyphs = FULL,
    own_colours: bool = False,
    prepare_seconds: float = 0.0,
    at_bench: bool = False,
) -> TriageApp:
    """Run a story on a fresh app, from the start page or from the first reading, and return the app when it
    is over."""
    shelf = FakeShelf(folder, prepare_seconds, at_bench)
    job = folder / "radio-desk-cube.toml" if at_bench else None
    app = TriageApp(shelf, Terminal(own_colours, glyphs), job)  # type: ignore[arg-type]

    async def run() -> None:
        async with app.run_test(size=size) as pilot:
            await settle(pilot)
            await story(pilot)

    asyncio.run(run())
    assert app.faults == [], app.faults
    return app
