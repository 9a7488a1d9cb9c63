"""The record of one job for the customer or the file: what was found, why, what was done, what was not.

Composes sections from the job's own log and from what the bench computed; it computes nothing itself. Every
section stands in every report: where nothing was done, the report says so.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from triage.board.probe import UNITS
from triage.diagnosis.words import FUNCTION_WORDS
from triage.job.entries import Entry, undone_numbers
from triage.job.render import Section, Table
from triage.job.views import CautionView, StressView, VerdictView
from triage.quantities import engineering

DEFERENCE = (
    "The readings and limits named here are the technician's own record. They replace neither the rules in "
    "force at the place of use nor the test that those rules ask of a licensed person before the adapter "
    "goes back into service."
)

SAYS = {
    "open": "no verdict yet",
    "found": "found",
    "does not fit": "the readings do not fit any fault in the list",
    "no part fault": "no part of the board is at fault: look at cord, plug, joints and load",
}
"""Status of a verdict -> how the report says it."""


@dataclass(frozen=True, slots=True)
class RetestLine:
    """One line of the retest: what must hold after the repair, and what came out."""

    text: str
    limit: str
    source: str
    result: str
    """``passed``, ``failed`` or ``not done``."""


@dataclass(frozen=True, slots=True)
class ReportContent:
    """All that a report tells."""

    id: str
    title: str
    opened: str
    label: tuple[tuple[str, str], ...]
    """Lines of the adapter's label: (what, as printed or in SI with unit)."""
    entries: tuple[Entry, ...]
    verdict: VerdictView
    before: tuple[StressView, ...] = ()
    """Stresses of the board as it came."""
    after: tuple[StressView, ...] = ()
    """Stresses with the fitted parts; empty when nothing was fitted."""
    retest: tuple[RetestLine, ...] = ()
    not_done: tuple[str, ...] = ()
    worth: tuple[str, ...] = ()
    """Repair, replace or scrap, in words."""
    cautions: tuple[CautionView, ...] = ()


def sections(content: ReportContent) -> tuple[Section, ...]:
    """The sections of a report, in the order of the work."""
    standing = _standing(content.entries)
    return (
        Section("Adapter", (f"Job {content.id}, opened {content.opened}.",), Table(("label", ""), content.label)),
        Section("Complaint", _complaint(standing), nothing="none recorded"),
        Section("Inspection", _inspection(standing), nothing="nothing recorded"),
        Section("Readings", table=_readings(standing), nothing="none taken"),
        Section("Verdict", _verdict(content.verdict)),
        Section("Worth repairing", content.worth, nothing="not weighed"),
        Section("Stress before", table=_stresses(content.before), nothing="not computed"),
        Section("Parts fitted", _fitted(standing), nothing="none"),
        Section("Stress after", table=_stresses(content.after), nothing="no part was fitted"),
        Section("Retest", _result(standing), _retest(content.retest), nothing="not done"),
        Section("Not done", (*content.not_done, *_skipped(standing)), nothing="nothing was left out"),
        Section("Notes", _notes(standing, content.entries), nothing="none"),
        Section("Cautions", (*(_caution(caution) for caution in content.cautions), DEFERENCE)),
    )


def reading_text(said: Mapping[str, Any]) -> str:
    """A reading in words: ``resistance mains_l to rect, cold: 9.8 ohm``."""
    value = engineering(float(said["value"]), UNITS[said["function"]])
    return f"{probe_text(said)}: {value}"


def probe_text(said: Mapping[str, Any]) -> str:
    """The reading an entry is about, in words: ``resistance mains_l to rect, cold``."""
    return f"{FUNCTION_WORDS[said['function']]} {said['plus']} to {said['minus']}, {said['condition']}"


def stress_text(stress: StressView) -> str:
    """One stress in words: ``peak voltage 612 V of 700 V rated (87 %), over derated limit``."""
    value = engineering(stress.value, stress.unit)
    quantity = stress.quantity.replace("_", " ")
    if stress.rating is None:
        return f"{quantity} {value}, {stress.verdict}"
    share = "" if stress.ratio is None else f" ({100 * stress.ratio:.0f} %)"
    return f"{quantity} {value} of {engineering(stress.rating, stress.unit)} rated{share}, {stress.verdict}"


def _standing(entries: Sequence[Entry]) -> dict[str, list[Entry]]:
    """The entries that were not taken back, by kind."""
    undone = undone_numbers(entries)
    found: dict[str, list[Entry]] = {}
    for number, entry in enumerate(entries, 1):
        if number not in undone:
            found.setdefault(entry.kind, []).append(entry)
    return found


def _complaint(standing: Mapping[str, list[Entry]]) -> tuple[str, ...]:
    lines = []
    for entry in standing.get("complaint", ()):
        words = str(entry.said.get("typed", ""))
        state = f"{entry.said['state']} ({entry.said['condition']})"
        lines.append(f"{words}: {state}" if words and words != entry.said["state"] else state)
    return tuple(lines)


def _inspection(standing: Mapping[str, list[Entry]]) -> tuple[str, ...]:
    signs = [
        f"{entry.said['sign']} {'at ' + entry.said['ref'] if entry.said['ref'] else 'on the whole adapter'}"
        for entry in standing.get("sign", ())
    ]
    looks = [f"{entry.said['item']}: {_found(entry.said)}" for entry in standing.get("look", ())]
    return (*looks, *signs)


def _found(look: Mapping[str, Any]) -> str:
    """What a look found: ``sound``, or the verdict with its text."""
    text = look.get("text", look["answer"])
    return str(text) if text == look["look"] else f"{look['look']}; {text}"


def _readings(standing: Mapping[str, list[Entry]]) -> Table:
    rows = []
    for entry in standing.get("reading", ()):
        said = entry.said
        what, _, value = reading_text(said).rpartition(": ")
        rows.append(
            (
                entry.time,
                what,
                value,
                str(said.get("typed", "")),
                str(said.get("instrument", "hand multimeter")),
            )
        )
    return Table(("time (UTC)", "reading", "value", "as typed", "instrument"), tuple(rows))


def _verdict(verdict: VerdictView) -> tuple[str, ...]:
    lines = [SAYS.get(verdict.status, verdict.status)]
    if verdict.ref:
        lines[0] += f": {verdict.ref} {verdict.mode}, probability {100 * verdict.probability:.1f} %"
    if verdict.collateral:
        lines.append("It took with it: " + ", ".join(verdict.collateral))
    if verdict.repair:
        lines.append("To be replaced: " + ", ".join(verdict.repair))
    if verdict.why:
        lines.append("Why it failed: " + verdict.why)
    if verdict.rivals:
        lines.append("Not ruled out: " + ", ".join(verdict.rivals))
    lines += [f"Evidence: {text}" for text in verdict.evidence]
    return tuple(lines)


def _stresses(stresses: Sequence[StressView]) -> Table:
    """Worst first; the ratio decides, parts without a known rating come last."""
    ordered = sorted(stresses, key=lambda one: -(one.ratio if one.ratio is not None else -1.0))
    rows = tuple((f"{one.ref} {one.role}", stress_text(one), one.condition, one.source) for one in ordered)
    return Table(("part", "stress", "worst at", "source of the limit"), rows)


def _fitted(standing: Mapping[str, list[Entry]]) -> tuple[str, ...]:
    return tuple(f"{entry.said['ref']}: {entry.said['type']}" for entry in standing.get("fitted", ()))


def _result(standing: Mapping[str, list[Entry]]) -> tuple[str, ...]:
    lines = [f"After the repair: {entry.said['result']}" for entry in standing.get("repaired", ())]
    lines += [f"Closed as: {entry.said['verdict']}" for entry in standing.get("closed", ())]
    lines += [f"Came back: {entry.said['reason']}" for entry in standing.get("returned", ())]
    return tuple(lines)


def _retest(lines: Sequence[RetestLine]) -> Table:
    return Table(
        ("check", "limit", "result", "source"),
        tuple((line.text, line.limit, line.result, line.source) for line in lines),
    )


def _skipped(standing: Mapping[str, list[Entry]]) -> tuple[str, ...]:
    return tuple(
        f"{probe_text(said)}: {said['reason'] or 'skipped'}" for said in (entry.said for entry in standing.get("skip", ()))
    )


def _notes(standing: Mapping[str, list[Entry]], entries: Sequence[Entry]) -> tuple[str, ...]:
    notes = [str(entry.said["note"]) for entry in standing.get("note", ())]
    notes += [f"Hunch: {entry.said['ref']}" for entry in standing.get("hunch", ())]
    taken_back = len(undone_numbers(entries))
    if taken_back:
        notes.append(f"{taken_back} entries were taken back; they stand in the job file.")
    return tuple(notes)


def _caution(caution: CautionView) -> str:
    return f"{caution.text} ({'acknowledged' if caution.acknowledged else 'not acknowledged'})"
