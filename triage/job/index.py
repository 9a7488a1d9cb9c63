"""Finds jobs among a hundred thousand: an SQLite index over the jobs folder, derived, deletable, brought up
to date.

The index lies in the cache folder of this bench, never in a shared jobs folder. Only files whose size or time
changed are read again. Search takes the words apart into three-letter pieces (SQLite FTS5, trigram
tokenizer), so that half a word or a slip of the finger still finds the job; the best of them are then ordered
by likeness.
"""

import contextlib
import hashlib
import multiprocessing
import os
import sqlite3
import time
from collections.abc import Iterable, Iterator, Sequence
from concurrent.futures import BrokenExecutor, ProcessPoolExecutor
from dataclasses import astuple, fields
from pathlib import Path
from types import TracebackType

from triage.errors import JobError
from triage.job.cache import cache_folder
from triage.job.display import plain
from triage.job.progress import report
from triage.job.summary import Summary, read_summary

COLUMNS = tuple(field.name for field in fields(Summary))
LAYOUT = 1
"""Raised when the tables change; an index of another layout is built anew."""
SCAN_EVERY = 30.0
"""The folder is looked through again after this, even when its time has not changed [s]: some sync programs
write into a file in place."""
SETTLED = 2.0
"""A folder time younger than this may still hide a second change in the same tick [s]."""
BATCH = 1000
MANY = 4000
"""Files from which on they are read on all processors."""
CONSIDERED = 300
"""Jobs that the likeness is computed for."""


class Index:
    """The index of one jobs folder."""

    def __init__(self, folder: Path, place: Path) -> None:
        """folder: the jobs. place: the index file, made when it is missing or not one of ours."""
        self.folder = folder
        self.place = place
        self._base = self._opened()
        self._pool: ProcessPoolExecutor | None = None

    @classmethod
    def of_folder(cls, folder: Path) -> "Index":
        """The index of a folder at its place in the cache; one in memory where the cache cannot be
        written."""
        name = hashlib.sha256(os.fsencode(folder.absolute())).hexdigest()[:16]
        place = cache_folder() / f"jobs-{name}.sqlite"
        try:
            place.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
            return cls(folder, place)
        except (OSError, sqlite3.Error):
            return cls(folder, Path(":memory:"))

    def __enter__(self) -> "Index":
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None) -> None:
        self._base.close()

    def _opened(self) -> sqlite3.Connection:
        base = sqlite3.connect(self.place, timeout=20.0)
        try:
            self._prepare(base)
            return base
        except sqlite3.DatabaseError:
            # Not an index, or a damaged one: it is derived, so it is made again.
            base.close()
            if str(self.place) == ":memory:":
                raise
            for ending in ("", "-wal", "-shm"):
                Path(f"{self.place}{ending}").unlink(missing_ok=True)
        base = sqlite3.connect(self.place, timeout=20.0)
        self._prepare(base)
        return base

    def _prepare(self, base: sqlite3.Connection) -> None:
        base.execute("PRAGMA journal_mode=WAL")
        base.execute("PRAGMA synchronous=NORMAL")
        if base.execute("PRAGMA user_version").fetchone()[0] == LAYOUT:
            base.execute("SELECT count(*) FROM state").fetchone()
            return
        base.executescript(
            "DROP TABLE IF EXISTS job; DROP TABLE IF EXISTS words; DROP TABLE IF EXISTS state;"
            "CREATE TABLE job(key INTEGER PRIMARY KEY, file TEXT UNIQUE, size INTEGER, time INTEGER, problem TEXT,"
            + ", ".join(f"{name} BLOB" for name in COLUMNS)
            + ");CREATE INDEX job_changed ON job(changed); CREATE INDEX job_profile ON job(family, profile, cured);"
            "CREATE VIRTUAL TABLE words USING fts5(text, content='', tokenize='trigram');"
            "CREATE TABLE state(name TEXT PRIMARY KEY, value INTEGER);"
            f"PRAGMA user_version={LAYOUT};"
        )

    def refresh(self, force: bool = False) -> int:
        """Bring the index up to date with the folder; returns how many files were read. Stopped in between, it goes on
        there the next time.

        force: look through the folder even when nothing seems to have changed.
        """
        try:
            folder_time = self.folder.stat().st_mtime_ns
        except OSError:
            folder_time = -1
        state = dict(self._base.execute("SELECT name, value FROM state"))
        now = time.time_ns()
        settled = folder_time == state.get("folder_time") and now - state.get("scanned", 0) < SCAN_EVERY * 1e9
        if settled and not force and state.get("scanned", 0) - folder_time > SETTLED * 1e9:
            return 0
        changed = self._changes()
        with _pool_for(len(changed)) as self._pool:
            for number, batch in enumerate(_batches(changed, BATCH)):
                report("the index of jobs", number * BATCH, len(changed))
                with self._base:
                    self._take(batch)
        self._pool = None
        with self._base:
            rows = [("folder_time", folder_time), ("scanned", now)]
            self._base.executemany("INSERT OR REPLACE INTO state VALUES (?, ?)", rows)
        return len(changed)

    def _changes(self) -> list[tuple[str, int, int]]:
        """(file, size, time) of the new and changed files; forgets those that are gone."""
        known = {row[0]: row[1:] for row in self._base.execute("SELECT file, size, time FROM job")}
        changed = []
        for name, size, changed_at in _job_files(self.folder):
            if known.pop(name, None) != (size, changed_at):
                changed.append((name, size, changed_at))
        with self._base:
            self._forget(known)
        return changed

    def _forget(self, files: Iterable[str]) -> None:
        for name in files:
            found = self._base.execute("SELECT key, problem, " + ", ".join(COLUMNS) + " FROM job WHERE file=?", (name,))
            for key, problem, *values in found.fetchall():
                if not problem:
                    text = _searched(Summary(*values))
                    self._base.execute("INSERT INTO words(words, rowid, text) VALUES ('delete', ?, ?)", (key, text))
                self._base.execute("DELETE FROM job WHERE key=?", (key,))

    def _take(self, batch: Sequence[tuple[str, int, int]]) -> None:
        self._forget(name for name, _, _ in batch)
        marks = ", ".join("?" * (4 + len(COLUMNS)))
        names = "file, size, time, problem, " + ", ".join(COLUMNS)
        for (name, size, changed_at), (one, problem) in zip(batch, self._read(batch), strict=True):
            row = self._base.execute(
                f"INSERT INTO job({names}) VALUES ({marks})", (name, size, changed_at, problem, *astuple(one))
            )
            if not problem:
                self._base.execute("INSERT INTO words(rowid, text) VALUES (?, ?)", (row.lastrowid, _searched(one)))

    def _read(self, batch: Sequence[tuple[str, int, int]]) -> list[tuple[Summary, str]]:
        """Summaries of the files of a batch, on all processors when there are many."""
        paths = [self.folder / name for name, _, _ in batch]
        if self._pool is not None:
            try:
                return list(self._pool.map(_summary_or_problem, paths, chunksize=100))
            except BrokenExecutor:
                # A reader was killed (memory, an impatient administrator): go on alone, slower.
                self._pool = None
        return [_summary_or_problem(path) for path in paths]

    def count(self) -> int:
        """Number of jobs, unreadable ones left out."""
        return int(self._base.execute("SELECT count(*) FROM job WHERE problem=''").fetchone()[0])

    def problems(self) -> tuple[str, ...]:
        """Why files of the folder could not be taken, at most a hundred."""
        return tuple(row[0] for row in self._base.execute("SELECT problem FROM job WHERE problem<>'' LIMIT 100"))

    def find(self, words: str = "", stage: str = "", limit: int = 50) -> tuple[Summary, ...]:
        """Jobs that the words may mean, best first; without words the latest changed ones.

        words: half remembered, slips allowed; fewer than three letters look for the start of a name.
        stage: ``open``, ``closed`` or ``returned`` only; empty for all.
        """
        where, values = ("AND stage=?", [stage]) if stage else ("", [])
        pieces = _pieces(words)
        if not words.strip():
            found = self._select(f"WHERE problem='' {where} ORDER BY changed DESC, id LIMIT ?", [*values, limit])
            return tuple(found)
        if not pieces:
            start = words.strip().lower().replace("%", "").replace("_", "") + "%"
            query = f"WHERE problem='' {where} AND (id LIKE ? OR adapter LIKE ?) ORDER BY changed DESC LIMIT ?"
            return tuple(self._select(query, [*values, start, start, limit]))
        asked = " OR ".join(f'"{piece}"' for piece in pieces)
        query = "WHERE problem='' " + where + " AND key IN (SELECT rowid FROM words WHERE words MATCH ? ORDER BY rank LIMIT ?)"
        return _by_likeness(words, list(self._select(query, [*values, asked, CONSIDERED])))[:limit]

    def closed(self, family: str) -> tuple[Summary, ...]:
        """Closed or returned jobs of a family with a fault on record, latest first: what the bench has learnt
        from."""
        return tuple(self._select("WHERE problem='' AND family=? AND fault<>'' ORDER BY changed DESC, id", [family]))

    def _select(self, clause: str, values: Sequence[object]) -> Iterator[Summary]:
        for row in self._base.execute(f"SELECT {', '.join(COLUMNS)} FROM job {clause}", list(values)):
            summary = Summary(*row)
            yield summary


def _pool_for(files: int) -> "contextlib.AbstractContextManager[ProcessPoolExecutor | None]":
    """Processes to read many files with, or none where starting them would cost more than it saves."""
    if files < MANY:
        return contextlib.nullcontext()
    return ProcessPoolExecutor(mp_context=multiprocessing.get_context("spawn"))


def _summary_or_problem(path: Path) -> tuple[Summary, str]:
    """What a file tells, or why it tells nothing."""
    try:
        return read_summary(path), ""
    except JobError as error:
        return Summary(plain(path.stem, 100)), plain(str(error))


def _job_files(folder: Path) -> Iterator[tuple[str, int, int]]:
    """(name, size, time) of the job files of a folder; nothing for a folder that is not there."""
    with contextlib.suppress(OSError), os.scandir(folder) as found:
        for one in found:
            if one.name.endswith(".toml") and not one.name.startswith("."):
                with contextlib.suppress(OSError):
                    stat = one.stat()
                    yield one.name, stat.st_size, stat.st_mtime_ns


def _batches(rows: Sequence[tuple[str, int, int]], size: int) -> Iterator[Sequence[tuple[str, int, int]]]:
    for start in range(0, len(rows), size):
        yield rows[start : start + size]


def _searched(one: Summary) -> str:
    """What a job is found by."""
    return " ".join((one.id, one.adapter, one.profile, one.complaint, one.verdict, one.fault, one.role)).lower()


def _pieces(words: str) -> tuple[str, ...]:
    """Three-letter pieces of the words, without marks that the query language could take for its own."""
    found: dict[str, None] = {}
    for word in words.lower().split()[:12]:
        letters = "".join(letter for letter in word if letter.isalnum() or letter in "-._")[:40]
        for place in range(len(letters) - 2):
            found[letters[place : place + 3]] = None
    return tuple(found)


def _by_likeness(words: str, found: list[Summary]) -> tuple[Summary, ...]:
    from rapidfuzz import fuzz

    asked = words.lower()
    scored = [(fuzz.token_set_ratio(asked, _searched(one)), one) for one in found]
    return tuple(one for _, one in sorted(scored, key=lambda pair: (-pair[0], pair[1].id)))
