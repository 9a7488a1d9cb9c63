"""The log of a job: what was seen, measured, skipped, fitted and found, in the order it was said.

A job is a log of entries that is only ever added to; taking an entry back is an entry of its own. ``replay``
turns the log into what the diagnosis takes (evidence, skips) and into the state of the repair. It depends on
nothing but the entries, so that the same job gives the same answer on any machine and at any time.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import Any

from triage.board.evidence import SIGNS, STATES, Evidence, Reading, Sign, Symptom
from triage.board.probe import COLD_FUNCTIONS, CONDITIONS, LIVE_FUNCTIONS, Probe
from triage.errors import EntryError, JobError

RESULTS = ("works", "still faulty", "given up")
"""What a repair led to."""

LOOKS = ("sound", "doubtful", "restorable", "veto", "skipped")
"""What a look at one item of the inspection can say; the gates of ``triage.safety`` know the same words."""

RETEST_RESULTS = ("pass", "fail", "too close to call")
"""What a line of the retest can come to."""

FUNCTIONS = COLD_FUNCTIONS + LIVE_FUNCTIONS

LONGEST_TEXT = 2000
"""Longest text of one entry [characters]: a page; a log line is no place for a book."""

_TEXT = "text"
_NUMBER = "number"
_PROBE: dict[str, Any] = {"function": FUNCTIONS, "plus": _TEXT, "minus": _TEXT, "condition": CONDITIONS}

KINDS: dict[str, dict[str, Any]] = {
    "complaint": {"state": STATES, "condition": CONDITIONS[1:]},
    "sign": {"sign": SIGNS, "ref": _TEXT},
    "look": {"item": _TEXT, "look": LOOKS, "answer": _TEXT, "ref": _TEXT},
    "reading": {**_PROBE, "value": _NUMBER},
    "skip": {**_PROBE, "reason": _TEXT},
    "undo": {"entry": int},
    "hunch": {"ref": _TEXT},
    "acknowledge": {"caution": _TEXT},
    "fitted": {"ref": _TEXT, "type": _TEXT},
    "power": {"on": bool},
    "repaired": {"result": RESULTS},
    "retest": {"check": _TEXT, "result": RETEST_RESULTS, "counts_as": RETEST_RESULTS},
    "closed": {"verdict": _TEXT},
    "returned": {"reason": _TEXT},
    "note": {"note": _TEXT},
}
"""Kind of entry -> key -> what its value must be: one of the words, a text, a number, a whole number, yes or
no."""


@dataclass(frozen=True, slots=True)
class Entry:
    """One line of the log."""

    kind: str
    """One of KINDS."""
    time: str
    """When it was entered, UTC, ISO 8601; for the reader only, nothing is computed from it."""
    said: Mapping[str, Any]
    """The keys of its kind, numbers in SI; further keys (``unit``, ``typed``, ``instrument``) are kept as
    they are."""


Told = Evidence | frozenset[str]
"""Evidence, or the refs of parts whose replacement did not cure: from there on the board is another one."""


@dataclass(frozen=True, slots=True)
class Replay:
    """What a log comes to."""

    told: tuple[Told, ...] = ()
    """What the diagnosis takes, in order. Readings after a repair count only once it has turned out to be no
    cure: those of a cured board say nothing about what was wrong with it."""
    told_numbers: tuple[int, ...] = ()
    """Entry number of each of them; for a failed repair that of its result."""
    skips: tuple[Probe, ...] = ()
    """Since the last repair that did not cure."""
    hunches: tuple[str, ...] = ()
    acknowledged: frozenset[str] = frozenset()
    fitted: tuple[tuple[str, str], ...] = ()
    """(ref, type) in the order of fitting."""
    repaired: str = ""
    """Result of the last repair, one of RESULTS; empty while it is not known."""
    retests: tuple[tuple[str, str], ...] = ()
    """(line, one of RETEST_RESULTS) since the last part was fitted."""
    closed: str = ""
    """The outcome the job was closed with; empty again when the adapter came back."""
    returned: int = 0
    """How many times the adapter came back after the repair."""
    undone: frozenset[int] = field(default_factory=frozenset)
    """Numbers of the entries that were taken back."""


def entry_from_dict(found: object, where: str) -> Entry:
    """Check one entry of a job file.

    found: the table as read. where: file and number of the entry, for the message.
    Raises JobError for an unknown kind, a missing key or a value that its kind does not know.
    """
    if not isinstance(found, dict):
        raise JobError(where, f"found {type(found).__name__}", "a table with kind and time")
    kind = found.get("kind")
    if not isinstance(kind, str) or kind not in KINDS:
        raise JobError(f"{where}, kind", _short(kind), "one of " + ", ".join(KINDS))
    time = found.get("time")
    if not isinstance(time, str) or len(time) > 40:
        raise JobError(f"{where}, time", _short(time), "a time such as 2026-01-31T08:15:00Z")
    said = {key: value for key, value in found.items() if key not in ("kind", "time")}
    for key, rule in KINDS[kind].items():
        problem = _broken_rule(said.get(key), rule)
        if problem:
            raise JobError(f"{where}, {kind}, {key}", _short(said.get(key)), problem)
    return Entry(kind, time, said)


def entry_to_dict(entry: Entry) -> dict[str, Any]:
    """The entry as a table of the job file."""
    return {"time": entry.time, "kind": entry.kind, **entry.said}


def make_entry(kind: str, time: str, **said: Any) -> Entry:
    """A new entry, checked as one read from a file; line ends become those of the file. Raises EntryError
    naming the key and what it may be.
    """
    said = {key: value.replace("\r\n", "\n") if isinstance(value, str) else value for key, value in said.items()}
    try:
        return entry_from_dict({"kind": kind, "time": time, **said}, "entry")
    except JobError as error:
        raise EntryError(error.where, error.found, error.expected, error.advice) from None


def undone_numbers(entries: Iterable[Entry]) -> frozenset[int]:
    """Numbers (from 1) of the entries that a later ``undo`` takes back."""
    undone: set[int] = set()
    for number, entry in enumerate(entries, 1):
        if entry.kind == "undo" and 0 < entry.said["entry"] < number:
            undone.add(entry.said["entry"])
    return frozenset(undone)


def last_standing(entries: tuple[Entry, ...]) -> int | None:
    """Number of the last entry that can still be taken back, or None."""
    undone = undone_numbers(entries)
    standing = [n for n, entry in enumerate(entries, 1) if entry.kind != "undo" and n not in undone]
    return standing[-1] if standing else None


def replay(entries: tuple[Entry, ...]) -> Replay:
    """What the log comes to: evidence in order, skips, and how far the repair has got."""
    undone = undone_numbers(entries)
    course = _Course()
    for number, entry in enumerate(entries, 1):
        if entry.kind != "undo" and number not in undone:
            course.take(number, entry)
    return Replay(
        told=tuple(told for _, told in course.told),
        told_numbers=tuple(number for number, _ in course.told),
        skips=tuple(course.skips),
        hunches=tuple(course.hunches),
        acknowledged=frozenset(course.acknowledged),
        fitted=tuple(course.fitted),
        repaired=course.repaired,
        retests=tuple(course.retests),
        closed=course.closed,
        returned=course.returned,
        undone=undone,
    )


class _Course:
    """The state of a job while its log is read through."""

    def __init__(self) -> None:
        self.told: list[tuple[int, Told]] = []
        self.skips: list[Probe] = []
        self.hunches: list[str] = []
        self.acknowledged: list[str] = []
        self.fitted: list[tuple[str, str]] = []
        self.retests: list[tuple[str, str]] = []
        self.repaired = ""
        self.closed = ""
        self.returned = 0
        self._on_trial: list[str] = []
        """Refs fitted since the last result that was no cure."""
        self._since: list[tuple[int, Told]] = []
        """Evidence since the first of them was fitted."""

    def take(self, number: int, entry: Entry) -> None:
        """Take in one entry that stands."""
        said = entry.said
        evidence = evidence_of(entry)
        if evidence is not None:
            (self._since if self._on_trial else self.told).append((number, evidence))
        elif entry.kind == "skip":
            self.skips.append(probe_of(said))
        elif entry.kind == "hunch":
            self.hunches.append(said["ref"])
        elif entry.kind == "acknowledge":
            self.acknowledged.append(said["caution"])
        elif entry.kind == "fitted":
            self.fitted.append((said["ref"], said["type"]))
            self._on_trial.append(said["ref"])
            self.retests.clear()
            self.repaired = ""
        elif entry.kind == "retest":
            self.retests.append((said["check"], said["result"]))
        elif entry.kind == "closed":
            self.closed = said["verdict"]
        elif entry.kind in ("repaired", "returned"):
            self._result(number, entry)

    def _result(self, number: int, entry: Entry) -> None:
        if entry.kind == "returned":
            self.returned += 1
            self.closed = ""
            self.retests.clear()
            self.repaired = "still faulty"
        else:
            self.repaired = entry.said["result"]
        if self.repaired == "still faulty" and self._on_trial:
            self.told += [(number, frozenset(self._on_trial)), *self._since]
            self._on_trial, self._since, self.skips = [], [], []


def probe_of(said: Mapping[str, Any]) -> Probe:
    """The reading that an entry is about."""
    return Probe(said["function"], said["plus"], said["minus"], said["condition"])


def evidence_of(entry: Entry) -> Evidence | None:
    """The evidence in an entry, or None for an entry that says nothing about the fault."""
    said = entry.said
    if entry.kind == "complaint":
        return Symptom(said["state"], said["condition"])
    if entry.kind == "sign":
        return Sign(said["sign"], said["ref"])
    if entry.kind == "reading":
        return Reading(probe_of(said), float(said["value"]))
    return None


def _broken_rule(value: object, rule: object) -> str:
    """What the value should have been, or an empty text when it is right."""
    if isinstance(rule, tuple):
        return "" if isinstance(value, str) and value in rule else "one of " + ", ".join(rule)
    if rule is _TEXT:
        right = isinstance(value, str) and len(value) <= LONGEST_TEXT
        return "" if right else f"a text of at most {LONGEST_TEXT} characters"
    if rule is _NUMBER:
        is_number = isinstance(value, int | float) and not isinstance(value, bool)
        return "" if is_number and not math.isnan(value) else "a number, or inf for OL"  # type: ignore[arg-type]
    if rule is bool:
        return "" if isinstance(value, bool) else "true or false"
    return "" if isinstance(value, int) and not isinstance(value, bool) else "a whole number"


def _short(value: object) -> str:
    return "nothing" if value is None else repr(value)[:60]
