"""Turns the answers of the other rooms into the records a screen is shown.

Every text passes through ``plain`` here. Nothing is decided in this module: it picks, words and rounds.
"""

import math
from collections.abc import Mapping, Sequence
from typing import Any

from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.stress import Stress
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.explain import Suggestion
from triage.diagnosis.verdict import Suspect, Verdict
from triage.diagnosis.weigh import Weighed
from triage.diagnosis.words import FUNCTION_WORDS
from triage.job.display import plain
from triage.job.entries import Entry
from triage.job.report import reading_text, stress_text
from triage.job.views import (
    NO_PART_FAULT,
    EntryView,
    OutcomeView,
    StressView,
    SuggestionView,
    SuspectView,
    VerdictView,
)
from triage.quantities import engineering
from triage.safety.cold_checks import ShortCheck
from triage.safety.discharge import Store
from triage.safety.gate import SAFE_VOLTAGE

MOST_EVIDENCE = 6
"""Entries named with a verdict: what fits a screen beside it."""

LEAST_WEIGHT = 0.1
"""Natural logarithm of a likelihood ratio below which an entry decided nothing [-]."""

_PRESSING = ("over rating", "over derated limit")


def stress_view(stress: Stress, board: Board) -> StressView:
    """A stress with the role of its part."""
    role = next((part.role for part in board.parts if part.ref == stress.ref), "")
    return StressView(
        plain(stress.ref),
        plain(role),
        stress.quantity,
        stress.value,
        stress.unit,
        stress.rating,
        stress.limit,
        stress.ratio,
        stress.verdict,
        plain(stress.source),
        plain(stress.condition),
    )


def worst_stress(stresses: Sequence[StressView], ref: str) -> StressView | None:
    """The stress of a part that is furthest past its limit, else nearest to its rating; None when none has
    one."""
    rated = [one for one in stresses if one.ref in ref.split("+") and one.ratio is not None]
    return max(rated, key=_pressure, default=None)


def _pressure(stress: StressView) -> tuple[int, float]:
    severity = {"over rating": 2, "over derated limit": 1}.get(stress.verdict, 0)
    ratio = stress.ratio or 0.0
    # Of a life the low value is the bad one.
    return severity, (1.0 / ratio if ratio > 0 else math.inf) if stress.quantity == "life" else ratio


class SuspectWriter:
    """Words suspects of one board; what is the same for every view is worked out once."""

    def __init__(self, board: Board, stresses: Sequence[StressView]) -> None:
        """stresses: of the board as it came onto the mat."""
        self._role = {part.ref: plain(part.role) for part in board.parts}
        worst = {part.ref: worst_stress(stresses, part.ref) for part in board.parts}
        self._pressed = {ref: stress for ref, stress in worst.items() if stress is not None and stress.verdict in _PRESSING}
        self._words = {ref: stress_text(stress) for ref, stress in self._pressed.items()}

    def view(self, suspect: Suspect) -> SuspectView:
        """A suspect with its role and the stress that presses it hardest."""
        refs = [fault.ref for fault in suspect.root]
        pressed = [ref for ref in refs if ref in self._pressed]
        worst = max(pressed, key=lambda ref: _pressure(self._pressed[ref]), default="")
        return SuspectView(
            plain(suspect.ref),
            suspect.mode or NO_PART_FAULT,
            suspect.probability,
            tuple(str(fault) for fault in suspect.collateral),
            " + ".join(self._role.get(ref, "") for ref in refs),
            self._words.get(worst, ""),
        )


def suggestion_view(suggestion: Suggestion) -> SuggestionView:
    """The next reading, as the diagnosis words it."""
    probe = suggestion.probe
    outcomes = tuple(
        OutcomeView(plain(one.text), one.low, one.high, one.probability, plain(one.says)) for one in suggestion.outcomes
    )
    return SuggestionView(
        probe.function,
        plain(probe.plus),
        plain(probe.minus),
        probe.condition,
        probe.unit,
        suggestion.minutes,
        plain(suggestion.reason, 1000),
        outcomes,
        plain(suggestion.hazard),
    )


def bulk_suggestion(store: Store, minutes: float) -> SuggestionView:
    """The reading that opens the cold stage: what the bulk capacitor still holds."""
    digits = 0 if store.board_time >= 10.0 else 1
    time = f"{store.board_time:.{digits}f} s" if math.isfinite(store.board_time) else "never"
    reason = (
        f"Unplug; before you touch anything: {store.ref} may hold {store.voltage:.0f} V; a sound board bleeds it in "
        f"{time}, a faulty one may not."
    )
    return SuggestionView(
        "volts_dc",
        plain(store.plus),
        plain(store.minus),
        "cold",
        "V",
        minutes,
        plain(reason),
        (
            OutcomeView(f"below {SAFE_VOLTAGE:.0f} V", -SAFE_VOLTAGE, SAFE_VOLTAGE, 0.95, "discharged: go on"),
            OutcomeView(
                f"above {SAFE_VOLTAGE:.0f} V",
                SAFE_VOLTAGE,
                math.inf,
                0.05,
                "still charged: discharge it through the bleeder and read it again",
            ),
        ),
        "unplugged, but perhaps charged: 1000 V dc range, rated probes, one hand",
    )


def check_suggestion(check: ShortCheck, minutes: float) -> SuggestionView:
    """A short circuit to be looked for before power, where the diagnosis itself did not ask for that
    reading."""
    limit = engineering(check.limit, "ohm")
    faults = " or ".join(str(fault) for fault in check.faults)
    return SuggestionView(
        "ohms",
        plain(check.probe.plus),
        plain(check.probe.minus),
        "cold",
        "ohm",
        minutes,
        plain(f"Before power: {check.key} must not be shorted ({faults} would blow more parts)."),
        (
            OutcomeView(f"below {limit}", 0.0, check.limit, 0.05, "shorted: no power, find the short first"),
            OutcomeView(f"above {limit}", check.limit, math.inf, 0.95, "no short here"),
        ),
    )


def verdict_view(
    verdict: Verdict,
    board: Board,
    stresses: Sequence[StressView],
    weighed: Sequence[Weighed],
    left: Sequence[frozenset[str]] = (),
) -> VerdictView:
    """The verdict with the stress that explains it and the entries that decided it, strongest first.

    left: sets of parts that could explain readings which fit no fault of the list.
    """
    suspect = verdict.suspect
    ref = suspect.ref if suspect else ""
    weights = sorted(((abs(math.log(max(one.ratio, 1e-300))), one.text) for one in weighed), reverse=True)
    decided = [text for weight, text in weights[:MOST_EVIDENCE] if weight > LEAST_WEIGHT]
    odd = [f"does not fit, measure again: {text}" for text in verdict.odd]
    rivals = [f"{'+'.join(refs) or NO_PART_FAULT} {100 * chance:.0f} %" for refs, chance in verdict.rivals]
    return VerdictView(
        status=verdict.status,
        ref=plain(ref),
        mode=suspect.mode if suspect and suspect.root else "",
        collateral=tuple(str(fault) for fault in suspect.collateral) if suspect else (),
        repair=tuple(map(plain, verdict.repair)),
        probability=verdict.probability,
        why=_why(ref, board, stresses),
        evidence=tuple(map(plain, (*decided, *odd))),
        rivals=tuple(map(plain, rivals)),
        left=tuple(plain("+".join(sorted(refs))) for refs in left),
    )


def _why(ref: str, board: Board, stresses: Sequence[StressView]) -> str:
    if not ref:
        return ""
    worst = worst_stress(stresses, ref)
    if worst is None:
        return f"no rating of {plain(ref)} is known, so that no stress can be held against it"
    where = f" ({worst.condition})" if worst.condition else ""
    told = f"{worst.ref} ({worst.role}): {stress_text(worst)}{where}"
    if worst.verdict in _PRESSING:
        return told
    return f"no stress of {plain(ref)} is past its derated limit (the highest: {told}); age or a weak part"


def expected_text(diagnosis: Diagnosis, job: Job, probe: Probe) -> str:
    """What the meter should show under each leading suspect, in a line; empty when nothing is known."""
    found = diagnosis.expected(job, probe)
    return plain(", ".join(f"{one.suspect} {engineering(one.value, probe.unit, 2)}" for one in found))


def entry_view(number: int, entry: Entry, undone: bool) -> EntryView:
    """One line of the log."""
    return EntryView(number, plain(entry.time, 40), plain(entry_text(entry)), undone)


def entry_text(entry: Entry) -> str:
    """An entry in words, as typed and as understood."""
    said = entry.said
    if entry.kind in _WORDS:
        return _WORDS[entry.kind].format_map(_Shown(said))
    if entry.kind == "complaint":
        words = str(said.get("typed", ""))
        state = f"complaint: {said['state']} at {said['condition']}"
        return f"{state} ({words})" if words and words != said["state"] else state
    if entry.kind == "sign":
        return f"{said['sign']} at {said['ref']}" if said["ref"] else f"{said['sign']} (whole adapter)"
    if entry.kind == "reading":
        return reading_text(said)
    if entry.kind == "power":
        return "powered up" if said["on"] else "unplugged"
    where = f"{FUNCTION_WORDS.get(said['function'], said['function'])} {said['plus']} to {said['minus']}"
    return f"skipped: {where}, {said['condition']}" + (f" ({said['reason']})" if said["reason"] else "")


_WORDS = {
    "undo": "took entry {entry} back",
    "hunch": "hunch: {ref}",
    "acknowledge": "acknowledged: {caution}",
    "fitted": "fitted at {ref}: {type}",
    "look": "looked at {item}: {found}",
    "repaired": "after the repair: {result}",
    "retest": "retest {check}: {result}",
    "closed": "closed: {verdict}",
    "returned": "came back: {reason}",
    "note": "note: {note}",
}
"""Kind of entry -> its words."""


class _Shown(dict[str, Any]):
    """Values of an entry as text; braces and attributes in them are text too."""

    def __init__(self, said: Mapping[str, Any]) -> None:
        super().__init__({key: str(value) for key, value in said.items()})
        if "look" in said:
            self["found"] = self["look"] if said["look"] == said["answer"] else f"{said['answer']} ({said['look']})"
