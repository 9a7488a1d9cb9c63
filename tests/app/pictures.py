"""Draws the pictures of README from the stand-in job: ``python -m tests.app.pictures``.

Each is an SVG kept beside the help pages. Textual's own export names web fonts by their address; those lines are taken out, so
that a picture asks nothing of the net.
"""

import re
import tempfile
from pathlib import Path

from textual.pilot import Pilot

from tests.app.screens import Story, play, settle
from tests.app.test_snapshots import bench, stress, waveforms

FOLDER = Path(__file__).resolve().parents[2] / "triage" / "app" / "help"
PICTURES: dict[str, Story] = {"bench": bench, "stress": stress, "waveforms": waveforms}
SIZE = (100, 30)
_FONT = re.compile(r"@font-face\s*\{.*?\}\s*", re.DOTALL)


def picture(story: Story) -> str:
    """The screen at the end of a story as SVG."""
    drawn: list[str] = []

    async def run(pilot: Pilot[int]) -> None:
        await story(pilot)
        await settle(pilot)
        drawn.append(pilot.app.export_screenshot(title="triage"))

    with tempfile.TemporaryDirectory() as folder:
        play(Path(folder), run, size=SIZE, at_bench=True)
    return _FONT.sub("", drawn[0])


def main() -> None:
    """Write all pictures."""
    for name, story in PICTURES.items():
        (FOLDER / f"{name}.svg").write_text(picture(story), encoding="utf-8")


if __name__ == "__main__":
    main()
