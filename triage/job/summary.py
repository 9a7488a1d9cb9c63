"""A job in one line: what a list of jobs shows and what is searched for, taken from the file alone.

A list of 100,000 jobs cannot validate 100,000 boards, so this reads the tables as they are, takes what has
the right type and leaves out the rest. The parts of the embedded board, three quarters of a file, are cut out
before it is parsed.
"""

import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from triage.errors import JobError
from triage.job.display import plain
from triage.toml_guard import LARGEST_FILE, parse_toml, read_regular

_PARTS = re.compile(rb"^\[\[board\.part\]\].*?(?=^\[\[entry\]\]|\Z)", re.MULTILINE | re.DOTALL)
_MEASURED = re.compile(
    rb'(^\[\[entry\]\]\ntime = "[^"\n]*"\n)kind = "(?:reading|skip|acknowledge|look)"\n(?:\w+ = [^\n]*\n)*', re.MULTILINE
)
"""Entries that no list of jobs shows, all but their time."""


@dataclass(frozen=True, slots=True)
class Summary:
    """One job of a list."""

    id: str
    """Name of the file without its ending."""
    adapter: str = ""
    profile: str = ""
    """Id of the board."""
    family: str = ""
    opened: str = ""
    """UTC, ISO 8601."""
    changed: str = ""
    """Time of the last entry."""
    stage: str = "open"
    """``open``, ``closed``, or ``returned`` when the adapter came back after it was closed."""
    complaint: str = ""
    verdict: str = ""
    """What it was closed with."""
    fault: str = ""
    """Root fault confirmed at the close: ``R1.open``."""
    role: str = ""
    """Role of its part."""
    cured: bool = False
    """True when the repair of that fault made the adapter work, and it has not come back."""
    entries: int = 0


def read_summary(path: Path) -> Summary:
    """The summary of a job file. Raises JobError when it is none."""
    try:
        content = read_regular(path, LARGEST_FILE + 1)
    except OSError as error:
        raise JobError(path.name, f"cannot be read: {error.strerror or type(error).__name__}") from None
    try:
        document = parse_toml(_MEASURED.sub(rb"\1", _PARTS.sub(b"", content)), path.name)
    except JobError:
        # The cut may have gone through a text that only looks like a part; the whole file decides.
        document = parse_toml(content, path.name)
    if not isinstance(document.get("job"), dict):
        raise JobError(path.name, "no table [job]", "a job file")
    return summary_of(path.stem, document)


def summary_of(name: str, document: dict[str, Any]) -> Summary:
    """The summary of the tables of a job file."""
    head, board = document["job"], _table(document.get("board"))
    entries = [entry for entry in _list(document.get("entry")) if isinstance(entry, dict)]
    taken_back = [entry.get("entry") for entry in entries if entry.get("kind") == "undo"]
    undone = {number for number in taken_back if isinstance(number, int)}
    standing = [entry for number, entry in enumerate(entries, 1) if number not in undone]
    closed = _last(standing, "closed")
    back = _place(standing, "returned") > _place(standing, "closed")
    return Summary(
        id=plain(name, 100),
        adapter=_text(board, "title"),
        profile=_text(board, "id"),
        family=_text(board, "family"),
        opened=_text(head, "opened")[:25],
        changed=_text(entries[-1] if entries else head, "time" if entries else "opened")[:25],
        stage="returned" if back else "closed" if closed else "open",
        complaint="; ".join(_complaint(entry) for entry in standing if entry.get("kind") == "complaint")[:200],
        verdict=_text(closed, "verdict"),
        fault=_text(closed, "fault")[:60],
        role=_text(closed, "role"),
        cured=closed.get("cured") is True and not back,
        entries=len(entries),
    )


def _complaint(entry: dict[str, Any]) -> str:
    words, state = _text(entry, "typed"), _text(entry, "state")
    return f"{words} ({state})" if words and words != state else state


def _last(entries: list[dict[str, Any]], kind: str) -> dict[str, Any]:
    return next((entry for entry in reversed(entries) if entry.get("kind") == kind), {})


def _place(entries: list[dict[str, Any]], kind: str) -> int:
    return max((place for place, entry in enumerate(entries) if entry.get("kind") == kind), default=-1)


def _text(table: dict[str, Any], key: str) -> str:
    value = table.get(key)
    return plain(value, 200) if isinstance(value, str) else ""


def _table(value: object) -> dict[str, Any]:
    return value if isinstance(value, dict) else {}


def _list(value: object) -> list[Any]:
    return value if isinstance(value, list) else []
