"""Every screen as plain text at 80x24 and 120x40, compared with the kept one.

Recorded: the files beside this test, written by ``python -m tests.app.test_snapshots`` after a look at each.
Beside the comparison, what must hold on any screen: nothing clipped that is a key, no line beyond the width.
"""

import tempfile
from pathlib import Path

import pytest
from textual.pilot import Pilot

from tests.app.screens import BEGIN, CAUTIONS, COMPLAIN, play, press, settle, text_of, type_in

KEPT = Path(__file__).parent / "kept_screens"
SIZES = ((80, 24), (120, 40))


async def found(pilot: Pilot[int]) -> None:
    """To the verdict."""
    for text in ("12", "*", "0.8"):
        await type_in(pilot, text)


async def keys(pilot: Pilot[int], *names: str) -> None:
    """Press keys and wait."""
    for name in names:
        await pilot.press(name)
        await settle(pilot)


async def start(pilot: Pilot[int]) -> None:
    """The start page."""


async def jobs(pilot: Pilot[int]) -> None:
    """All jobs."""
    await pilot.app.run_action("form('jobs')")


async def label(pilot: Pilot[int]) -> None:
    """The label typed, one transistor counted."""
    await press(pilot, "up", "enter")
    for text in ("radio cube", "", "5", "0.6", ""):
        await type_in(pilot, text)
    await keys(pilot, "down", "1")


async def draft(pilot: Pilot[int]) -> None:
    """The estimates, one marking read."""
    await label(pilot)
    await keys(pilot, "enter", "enter")
    await type_in(pilot, "10R")


async def role(pilot: Pilot[int]) -> None:
    """A part more."""
    await draft(pilot)
    await keys(pilot, "plus", *"vari", "enter")


async def intake(pilot: Pilot[int]) -> None:
    """The complaint."""
    await press(pilot, *BEGIN)


async def cautions(pilot: Pilot[int]) -> None:
    """One caution acknowledged."""
    await press(pilot, *BEGIN, *COMPLAIN, CAUTIONS[0])


async def looks(pilot: Pilot[int]) -> None:
    """One question answered."""
    await press(pilot, *BEGIN, *COMPLAIN, *CAUTIONS, "s")


async def bench(pilot: Pilot[int]) -> None:
    """The first reading done."""
    await type_in(pilot, "12")


async def refused(pilot: Pilot[int]) -> None:
    """A value that cannot be read."""
    await type_in(pilot, "1x2")


async def verdict(pilot: Pilot[int]) -> None:
    """Found."""
    await found(pilot)


async def stress(pilot: Pilot[int]) -> None:
    """Bars."""
    await keys(pilot, "f3")


async def waveforms(pilot: Pilot[int]) -> None:
    """Switch, sound and under the suspect."""
    await keys(pilot, "f3", "enter")


async def load_line(pilot: Pilot[int]) -> None:
    """The last chart."""
    await keys(pilot, "f3", "enter", "up")


async def moves(pilot: Pilot[int]) -> None:
    """After three readings."""
    await found(pilot)
    await keys(pilot, "f4")


async def parts(pilot: Pilot[int]) -> None:
    """Candidates of the verdict's part."""
    await found(pilot)
    await keys(pilot, "f5")


async def marking(pilot: Pilot[int]) -> None:
    """A half-read marking."""
    await found(pilot)
    await keys(pilot, "f5", "tab", *"13003")


async def retest(pilot: Pilot[int]) -> None:
    """After the fit."""
    await found(pilot)
    await keys(pilot, "f5", "enter", "enter", "enter", "f6")


async def record(pilot: Pilot[int]) -> None:
    """The report."""
    await keys(pilot, "f7")


async def reading(pilot: Pilot[int]) -> None:
    """The form for any reading."""
    await type_in(pilot, "+")


async def sign(pilot: Pilot[int]) -> None:
    """The form for a sign."""
    await pilot.app.run_action("form('sign')")
    await settle(pilot)
    await keys(pilot, "b")


async def menu(pilot: Pilot[int]) -> None:
    """All commands."""
    await keys(pilot, "ctrl+p")


async def help_bench(pilot: Pilot[int]) -> None:
    """Help on the bench."""
    await keys(pilot, "f1")


FROM_START = (start, jobs, label, draft, role, intake, cautions, looks)
FROM_BENCH = (
    bench, refused, verdict, stress, waveforms, load_line, moves, parts, marking, retest, record, reading, sign, menu, help_bench,
)  # fmt: skip


def drawn(story, folder: Path) -> dict[tuple[int, int], str]:
    """The screen at the end of a story in each size, the terminal being resized in between; paths left out."""
    shown: dict[tuple[int, int], str] = {}

    async def run(pilot: Pilot[int]) -> None:
        await story(pilot)
        await settle(pilot)
        for size in SIZES:
            await pilot.resize_terminal(*size)
            await settle(pilot)
            shown[size] = text_of(pilot.app).replace(str(folder), "JOBS") + "\n"

    with pytest.MonkeyPatch.context() as patched:
        patched.setenv("XDG_DATA_HOME", str(folder / "data"))
        play(folder, run, size=SIZES[0], at_bench=story in FROM_BENCH)
    return shown


def kept(story, size: tuple[int, int]) -> Path:
    """The file of a screen."""
    return KEPT / f"{story.__name__}-{size[0]}x{size[1]}.txt"


@pytest.mark.parametrize("story", FROM_START + FROM_BENCH, ids=lambda story: story.__name__)
def test_the_screen_is_as_kept(story):
    with tempfile.TemporaryDirectory(prefix="jobs") as folder:
        shown = drawn(story, Path(folder))
    for size, text in shown.items():
        rows = text.splitlines()
        assert len(rows) == size[1]
        assert rows[-1].startswith("F1 ?")
        assert text == kept(story, size).read_text(encoding="utf-8")


def main() -> None:
    """Write every screen anew."""
    KEPT.mkdir(exist_ok=True)
    for story in FROM_START + FROM_BENCH:
        with tempfile.TemporaryDirectory(prefix="jobs") as folder:
            for size, text in drawn(story, Path(folder)).items():
                kept(story, size).write_text(text, encoding="utf-8")


if __name__ == "__main__":
    main()
