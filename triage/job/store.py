"""The job file: one TOML file a job, readable without the program, complete on disk after every entry.

A new state is written to a temporary file beside the job, flushed to the disk, renamed over the old one, and
the folder is flushed: at any moment the name leads to a complete old or a complete new file. The tables read
from a file are kept and only added to, so that keys of a later program survive. Before a write the file is
compared with what was last read or written here: a copy that another bench or a sync program put there is
never overwritten.
"""

import contextlib
import copy
import glob
import os
import tempfile
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import tomli_w

from triage.errors import JobError
from triage.job.entries import Entry, entry_from_dict, entry_to_dict
from triage.toml_guard import LARGEST_FILE, parse_toml, read_regular, read_toml

FORMAT = 1
"""Version of the job file; a file of a higher version is refused rather than misread."""


MOST_ENTRIES = 4000
"""A log of more is no job any more; so many entries keep a file well within what can be opened again."""


@dataclass(slots=True)
class Job:
    """One job as it stands in its file."""

    path: Path
    document: dict[str, Any]
    """The whole file as tables, unknown keys included."""
    content: bytes
    """The file as last read or written here."""
    entries: tuple[Entry, ...] = ()
    conflicts: tuple[Path, ...] = field(default=())
    """Copies beside it that a sync program left after two benches wrote the same job."""
    _ends_with_log: bool = False
    """True once it has been proved that an entry can be put behind the text of the file as it is."""

    @property
    def id(self) -> str:
        """Name of the job: the name of its file without the ending."""
        return self.path.stem

    @property
    def board(self) -> Mapping[str, Any]:
        """The embedded board as tables."""
        board: Mapping[str, Any] = self.document["board"]
        return board

    def append(self, entry: Entry) -> None:
        """Add the entry, on disk before this returns. Raises JobError and leaves job and file as they
        were."""
        if len(self.entries) >= MOST_ENTRIES:
            raise JobError(str(self.path), f"has {MOST_ENTRIES:,} entries", advice="close this job and open a new one")
        document = {**self.document, "entry": [*self.document.get("entry", ()), entry_to_dict(entry)]}
        content = self._with_entry(entry, document)
        write_content(self.path, content, self.content)
        self.content, self.document, self.entries = content, document, (*self.entries, entry)

    def _with_entry(self, entry: Entry, document: dict[str, Any]) -> bytes:
        """The text of the file with the entry behind it, or written anew where its log does not stand last.

        The first entry of a session proves, by reading the text again, which of the two is right; text behind
        that stays right. Comments and layout of a file that somebody wrote by hand are kept that way.
        """
        longer = self.content.rstrip() + b"\n\n" + _entry_text(entry_to_dict(entry))
        if self._ends_with_log:
            return longer
        with contextlib.suppress(JobError):
            self._ends_with_log = parse_toml(longer, str(self.path)) == document
        return longer if self._ends_with_log else _proved(document, self.path)


def create(path: Path, board: Mapping[str, Any], opened: str, profile: str, more: Mapping[str, Any] | None = None) -> Job:
    """A new job file. board: the board as tables. opened: UTC, ISO 8601. profile: where the board came from.

    more: further keys of the table [job].

    Raises JobError when the file exists already or cannot be written.
    """
    if path.exists():
        raise JobError(str(path), "a file of that name is there already", advice="open it, or choose another name")
    head = {"format": FORMAT, "opened": opened, "profile": profile, **(more or {})}
    document: dict[str, Any] = {"job": head, "board": copy.deepcopy(dict(board))}
    content = _proved(document, path)
    write_content(path, content, b"")
    return Job(path, document, content)


def load(path: Path) -> Job:
    """Read a job file. Raises JobError naming file, key, what was found and what was expected."""
    document, content = read_toml(path)
    where = str(path)
    _check_head(document, where)
    if not isinstance(document.get("board"), dict):
        raise JobError(f"{where}, board", "no embedded board", "a table [board]")
    found = document.get("entry", [])
    if not isinstance(found, list):
        raise JobError(f"{where}, entry", f"found {type(found).__name__}", "tables [[entry]]")
    entries = tuple(entry_from_dict(item, f"{where}, entry {n}") for n, item in enumerate(found, 1))
    return Job(path, document, content, entries, conflict_copies(path))


def _check_head(document: Mapping[str, Any], where: str) -> None:
    head = document.get("job")
    if not isinstance(head, dict):
        raise JobError(where, "no table [job]", "a job file", "is this a board profile? use: triage new")
    version = head.get("format")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        raise JobError(f"{where}, job.format", repr(version)[:40], f"a whole number from 1 to {FORMAT}")
    if version > FORMAT:
        raise JobError(
            f"{where}, job.format",
            f"version {version} of the job file",
            f"at most {FORMAT}",
            "install a newer triage to open it",
        )
    for key in ("opened", "profile"):
        if not isinstance(head.get(key, ""), str):
            raise JobError(f"{where}, job.{key}", repr(head[key])[:40], "a text")


def conflict_copies(path: Path) -> tuple[Path, ...]:
    """Copies that file-sync programs leave beside a job when two benches wrote it at the same time.

    They share the stem and carry the word conflict (common practice of such programs, no source).
    """
    try:
        beside = sorted(path.parent.iterdir())
    except OSError:
        return ()
    return tuple(
        other
        for other in beside
        if other != path and other.name.startswith(path.stem) and "conflict" in other.name.lower() and other.suffix == path.suffix
    )


def _as_toml(document: Mapping[str, Any], multiline: bool = True) -> bytes:
    """The document as text, the log last and each entry under a heading of its own, so that the next can be
    put behind."""
    entries = document.get("entry", [])
    if not all(isinstance(entry, dict) and _is_flat(entry) for entry in entries):
        return tomli_w.dumps(document, multiline_strings=multiline).encode()
    head = {key: value for key, value in document.items() if key != "entry"}
    parts = [tomli_w.dumps(head, multiline_strings=multiline).encode()]
    return b"\n".join(parts + [_entry_text(entry, multiline) for entry in entries])


def _entry_text(entry: Mapping[str, Any], multiline: bool = True) -> bytes:
    return b"[[entry]]\n" + tomli_w.dumps(entry, multiline_strings=multiline).encode()


def _is_flat(entry: Mapping[str, Any]) -> bool:
    """True for an entry without tables in it, which would need headings under the entry's own."""
    return not any(isinstance(value, dict | list) for value in entry.values())


def _proved(document: Mapping[str, Any], path: Path) -> bytes:
    """The tables as text that reads back as the same tables within the limits: a file that does not would be
    a loss.

    Texts stand on lines of their own where that keeps them as they are (a carriage return does not).
    """
    content = _as_toml(document)
    if parse_toml(content, str(path)) != document:
        content = _as_toml(document, multiline=False)
        parse_toml(content, str(path))
    return content


def write_content(path: Path, content: bytes, expected: bytes) -> None:
    """Put the content into the file in one step.

    expected: content of the file that may be replaced; empty for a file that must not exist yet. Raises
    JobError when the disk is full, the folder read-only or the file changed by somebody else; the old file is
    then untouched.
    """
    if len(content) > LARGEST_FILE:
        raise JobError(
            str(path),
            "the job has grown past what a job file can hold",
            f"at most {LARGEST_FILE:,} bytes",
            "close this job and open a new one",
        )
    try:
        _check_unchanged(path, expected)
        _replace(path, content)
    except OSError as error:
        reason = error.strerror or type(error).__name__
        raise JobError(
            str(path),
            f"cannot be written: {reason}",
            advice=("nothing already entered is lost; free some space or use another folder, then enter it again"),
        ) from None


def _check_unchanged(path: Path, expected: bytes) -> None:
    try:
        on_disk = read_regular(path, LARGEST_FILE + 1)
    except FileNotFoundError:
        on_disk = b""
    if on_disk == expected:
        return
    if not expected:
        raise JobError(str(path), "a file of that name is there already", advice="open it, or choose another name")
    found = "the file was changed by another program" if on_disk else "the file is gone"
    raise JobError(str(path), found, "the file as this session left it", "open the job again")


def _replace(path: Path, content: bytes) -> None:
    """Put the content under the name, complete or not at all, and on the disk when this returns."""
    descriptor, draft = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".new", dir=path.parent)
    try:
        with os.fdopen(descriptor, "wb") as file:
            os.fchmod(file.fileno(), 0o600)
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        os.replace(draft, path)
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(draft)
        raise
    _flush_folder(path.parent)


def _flush_folder(folder: Path) -> None:
    """Flush the folder, so that the new name survives a power cut; some network file systems do not offer
    it."""
    with contextlib.suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)


def clear_drafts(path: Path) -> int:
    """Remove the unfinished temporary files that killed sessions left beside a job; the caller has its lock.

    Returns how many there were: each is a write that was not finished and not acknowledged.
    """
    cleared = 0
    with contextlib.suppress(OSError):
        for draft in path.parent.glob(f".{glob.escape(path.name)}.*.new"):
            draft.unlink()
            cleared += 1
    return cleared
