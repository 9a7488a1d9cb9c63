"""A stand-in for the start page's shelf of jobs, profiles and boards of one's own; see ``fake_bench``."""

import time
from pathlib import Path

from tests.app.fake_bench import BOARD, CAUTIONS, FakeBench
from triage.app.contract import OpenDraft, OpenJob
from triage.app.shelf import Item, items
from triage.job.progress import report
from triage.job.summary import Summary


class FakeShelf:
    """A start page with one job and one profile on it."""

    def __init__(self, folder: Path, prepare_seconds: float = 0.0, at_bench: bool = False) -> None:
        self.folder = folder
        self.at_bench = at_bench
        self.prepare_seconds = prepare_seconds
        self.find_seconds = 0.0
        self.half_typed = ""
        self.bench: FakeBench | None = None

    def items(self) -> tuple[Item, ...]:
        return (
            Item(self.folder / "tide-gauge.toml", "Tide gauge supply, hums", "job"),
            *(one for one in items(self.folder) if one.kind == "own" and self.folder in one.path.parents),
            Item(Path("radio-desk-cube.toml"), BOARD.title, "profile"),
        )

    def find(self, words: str) -> tuple[Summary, ...]:
        for step in range(4):
            report("the index of jobs", step, 4)
            time.sleep(self.find_seconds / 4)
        known = (
            Summary("tide-gauge", "Tide gauge supply", changed="2026-02-03T02:00:00Z", complaint="hums"),
            Summary("fog-horn", "Fog horn adapter", changed="2026-01-05", stage="closed", complaint="dead", verdict="worn"),
        )
        return tuple(one for one in known if words.lower() in f"{one.adapter} {one.complaint} {one.verdict}".lower())

    def path_of(self, job: Summary) -> Path:
        return self.folder / f"{job.id}.toml"

    def keep(self, job: Path, half_typed: str) -> None:
        self.half_typed = half_typed

    def kept(self, job: Path) -> str:
        text, self.half_typed = self.half_typed, ""
        return text

    def draft(self, path: Path | None = None) -> OpenDraft:
        from triage.job.draft import Draft

        return Draft() if path is None else Draft.open(path)

    def opener(self, path: Path):  # type: ignore[no-untyped-def]
        return lambda: self._made(path)

    def beginner(self, profile: str):  # type: ignore[no-untyped-def]
        return lambda: self._made(self.folder / "radio-desk-cube.toml")

    def _made(self, path: Path) -> OpenJob:
        self.bench = FakeBench(path, self.prepare_seconds)
        if self.at_bench:
            self.bench.prepare()
            self.bench.complain("", "dead", "full")
            for key, _ in CAUTIONS:
                self.bench.acknowledge(key)
            self.bench.see("sound", "")
        return self.bench
