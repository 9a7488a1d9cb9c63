"""What there is to open: the shipped profiles and the jobs of the folder, for the start page."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from triage.app.contract import OpenDraft, OpenJob
from triage.data import data_folder
from triage.errors import JobError
from triage.job.folder import PROFILES, data_directory, free_name, jobs_folder, make_folder

if TYPE_CHECKING:
    from triage.job.summary import Summary

MOST_LISTED = 30
"""Jobs on the start page; the others are found by their words."""
_LONGEST_FILE = 4_000_000
"""Files beyond this size [bytes] are listed by name only."""


@dataclass(frozen=True, slots=True)
class Item:
    """One line of the start page."""

    path: Path
    title: str
    kind: str
    """``find``, ``job``, ``profile`` (shipped) or ``own`` (a profile of the shop's own)."""


def _title_of(path: Path) -> str:
    """The title a file gives itself, or its name where it gives none or cannot be read."""
    try:
        if path.stat().st_size > _LONGEST_FILE:
            return path.stem
        found = tomllib.loads(path.read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return path.stem
    for table in (found, found.get("board"), found.get("job")):
        title = table.get("title") if isinstance(table, dict) else None
        if isinstance(title, str) and title:
            return title
    return path.stem


def items(folder: Path | None) -> tuple[Item, ...]:
    """The newest jobs of the folder, then the profiles by name, the shop's own before the shipped ones."""
    jobs_at = jobs_folder(folder)
    jobs = [path for path in jobs_at.glob("*.toml") if path.is_file()] if jobs_at.is_dir() else []
    jobs.sort(key=lambda path: path.stat().st_mtime, reverse=True)
    more = (Item(jobs_at, f"all {len(jobs):,} jobs: find one by a few words", "find"),) if len(jobs) > MOST_LISTED else ()
    profiles = sorted(data_folder("profiles").glob("*.toml"))
    own_at = data_directory() / PROFILES
    own = sorted(path for path in own_at.glob("*.toml") if path.is_file()) if own_at.is_dir() else []
    return (
        *more,
        *(Item(path, _title_of(path), "job") for path in jobs[:MOST_LISTED]),
        *(Item(path, _title_of(path), "own") for path in own),
        *(Item(path, _title_of(path), "profile") for path in profiles),
    )


class Shelf:
    """Opens and begins jobs; the heavy rooms of the program are imported with the first of them."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = folder

    def items(self) -> tuple[Item, ...]:
        """What the start page lists."""
        return items(self.folder)

    def find(self, words: str) -> tuple[Summary, ...]:
        """Jobs that half-remembered words may mean, best first; the latest ones without words. Brings the index up to date,
        which takes a while the first time."""
        from triage.job.index import Index

        with Index.of_folder(jobs_folder(self.folder)) as index:
            index.refresh()
            return index.find(words)

    def path_of(self, job: Summary) -> Path:
        """The file of a job that was found."""
        return jobs_folder(self.folder) / f"{job.id}.toml"

    def opener(self, path: Path) -> Callable[[], OpenJob]:
        """What opens a job file when called."""

        def begin() -> OpenJob:
            from triage.job.bench import Bench

            return Bench.open(path)

        return begin

    def beginner(self, profile: str) -> Callable[[], OpenJob]:
        """What begins a job on a profile (name or path) when called, in a file of its own in the folder."""

        def begin() -> OpenJob:
            from triage.job.bench import Bench

            if not profile:
                raise JobError("profile", "no name given", "a shipped profile or the path of one")
            path = free_name(make_folder(jobs_folder(self.folder)), Path(profile).stem)
            return Bench.create(profile, path)

        return begin

    def keep(self, job: Path, half_typed: str) -> None:
        """Keep what stood in the reading field of a job when the session ended."""
        from triage.job.half_typed import keep_half_typed

        if half_typed:
            keep_half_typed(job, half_typed)

    def kept(self, job: Path) -> str:
        """What was kept of the reading field, once."""
        from triage.job.half_typed import take_half_typed

        return take_half_typed(job)

    def draft(self, path: Path | None = None) -> OpenDraft:
        """A board to be made from its label, or a profile of the shop's own to go on with."""
        from triage.job.draft import Draft

        return Draft() if path is None else Draft.open(path)
