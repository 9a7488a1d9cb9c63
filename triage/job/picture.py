"""Puts together what is shown of an open job: stage, suspects, next reading, verdict and what the gates wait
for."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

from triage.board.evidence import Reading
from triage.board.fault import Fault
from triage.board.probe import LIVE_FUNCTIONS, Probe
from triage.diagnosis.after_repair import Fitted
from triage.diagnosis.engine import Diagnosis, Job
from triage.job import shown
from triage.job.display import plain
from triage.job.entries import Replay, Told, replay
from triage.job.gates import Rules, bulk_open, claims_repair, cold_waits_for, live_open, open_check, waits_for
from triage.job.proof import shown as shown_lines
from triage.job.views import CautionView, JobView, LookView, StressView, SuggestionView, SuspectView, VerdictView
from triage.safety.gate import GateFacts, permit, safe_to_touch, stage
from triage.safety.inspection import items

if TYPE_CHECKING:
    from triage.job.bench import Bench

BULK_MINUTES = 1.0
"""Time to read the bulk voltage before the costs are known [min]; common practice, no source."""


@dataclass(frozen=True, slots=True)
class Answers:
    """What was computed once for a job's board."""

    diagnosis: Diagnosis
    stresses: tuple[StressView, ...]
    """Of the board as it came onto the mat."""
    suspects: shown.SuspectWriter


def asked(state: Replay) -> Job:
    """The log as the diagnosis takes it."""
    entries = tuple(Fitted(told) if isinstance(told, frozenset) else told for told in state.told if not _is_leftover(told))
    return Job(entries, frozenset(state.hunches), frozenset(state.skips))


def _is_leftover(told: Told) -> bool:
    """True for volts read on the unpowered board: what a capacitor still held, which tells nothing of a
    fault."""
    return isinstance(told, Reading) and not told.probe.live and told.probe.function in LIVE_FUNCTIONS


def fault_chances(bench: "Bench") -> dict[Fault, float]:
    """Present chance of each fault, alone or along with others [-]."""
    assert bench.answers is not None
    diagnosis = bench.answers.diagnosis
    belief = diagnosis.belief(asked(replay(bench.job.entries)))
    chances: dict[Fault, float] = {}
    for hypothesis, chance in zip(diagnosis.expectations.hypotheses, belief, strict=True):
        for fault in hypothesis.faults:
            chances[fault] = chances.get(fault, 0.0) + float(chance)
    return chances


def view(bench: "Bench", message: str) -> JobView:
    """All a screen shows of the job now."""
    entries = bench.job.entries
    state = replay(entries)
    suspects: tuple[SuspectView, ...] = ()
    verdict = VerdictView("open")
    if bench.answers is None:
        facts = bench.facts()
        suggestion = _first_of_all(bench, facts, state)
    else:
        diagnosis, job = bench.answers.diagnosis, asked(state)
        found = diagnosis.verdict(job)
        facts = bench.facts(fault_chances(bench), found.status != "open")
        stresses = bench.answers.stresses
        suspects = tuple(map(bench.answers.suspects.view, diagnosis.suspects(job)))
        left = diagnosis.what_is_left(job) if found.status == "does not fit" else ()
        verdict = shown.verdict_view(found, bench.board, stresses, diagnosis.evidence(job), left)
        suggestion = None
        if found.status == "open" and not facts.closed and not facts.repaired:
            suggestion = _next(bench, facts, state, job)
        elif not facts.closed and not _live_checks_left(facts):
            suggestion = _bulk_again(bench, facts)
    return JobView(
        id=plain(bench.job.id),
        title=plain(bench.board.title),
        stage=stage(facts),
        safe_to_touch=plain(safe_to_touch(facts)),
        suspects=suspects,
        suggestion=suggestion,
        verdict=verdict,
        entries=tuple(shown.entry_view(n, one, n in state.undone) for n, one in enumerate(entries, 1)),
        message=plain(message or _standing_message(bench, facts, suggestion)),
        computing=bench.answers is None,
        cautions=cautions_of(bench, facts),
        drawing=plain(bench.board.drawing, 8000, lines=True),
        read_only=plain(bench.read_only),
        waits_for=tuple(plain(one) for one in waits_for(facts)),
        looks=_looks(bench, facts),
        retest=shown_lines(bench.lines, dict(state.retests)),
    )


def leading_fault(bench: "Bench") -> tuple[Fault, ...]:
    """The root faults of the likeliest suspect that is a fault of a part; empty where nothing was computed or none is."""
    if bench.answers is None:
        return ()
    found = bench.answers.diagnosis.suspects(asked(replay(bench.job.entries)))
    return next((one.root for one in found if one.root), ())


def derivations(bench: "Bench") -> dict[tuple[str, str], str]:
    """(ref, mode) -> derivation of the chance of that fault before anything was seen; empty before
    ``prepare``."""
    why = bench.answers.diagnosis.why if bench.answers else {}
    return {(fault.ref, fault.mode): plain(text, 1000) for fault, text in why.items()}


def weighed_lines(bench: "Bench") -> tuple[str, ...]:
    """What each entry did to the odds of the leading suspect: the factor, and the entry in words."""
    if bench.answers is None:
        return ()
    job = asked(replay(bench.job.entries))
    return tuple(f"x{one.ratio:.3g}  {plain(one.text)}" for one in bench.answers.diagnosis.evidence(job))


def lesson(bench: "Bench", outcome: str) -> dict[str, object]:
    """What the next job may learn from this one: root fault, role of its part, and whether its repair cured.

    outcome: what the job is closed as; one that hands the adapter back has passed every needed check.
    Empty where nothing was computed or no single part is accused.
    """
    state = replay(bench.job.entries)
    if bench.answers is None:
        return {}
    suspect = bench.answers.diagnosis.verdict(asked(state)).suspect
    if suspect is None or len(suspect.root) != 1:
        return {}
    fault = suspect.root[0]
    replaced = fault.ref in {ref for ref, _ in state.fitted}
    role = bench.board.part(fault.ref).role
    return {"fault": str(fault), "role": role, "cured": replaced and (state.repaired == "works" or claims_repair(outcome))}


def cautions_of(bench: "Bench", facts: GateFacts | None = None) -> tuple[CautionView, ...]:
    """The cautions of the board, and which are acknowledged today."""
    known = (facts or bench.facts()).acknowledged
    return tuple(CautionView(one.key, plain(one.text, 1000), one.key in known, one.gate) for one in bench.cautions)


def _looks(bench: "Bench", facts: GateFacts) -> tuple[LookView, ...]:
    seen = dict(facts.looks)
    return tuple(
        LookView(one.key, one.question, one.answers, one.unit, one.refs, not one.touch, seen.get(one.key, ""))
        for one in items(bench.board)
    )


def _first_of_all(bench: "Bench", facts: GateFacts, state: Replay) -> SuggestionView | None:
    """The bulk reading, as long as it is due and was not skipped, once the cautions are acknowledged."""
    probe, store = bench.rules.bulk_probe, bench.rules.bulk
    if store is None or probe is None or probe in state.skips or not bulk_open(bench.rules, facts):
        return None
    minutes = BULK_MINUTES
    if bench.answers is not None:
        minutes = bench.answers.diagnosis.costs.reading["volts_dc"]
    open_now = facts.unplugged and permit(facts, "bulk voltage").allowed
    return shown.bulk_suggestion(store, minutes) if open_now else None


def _live_checks_left(facts: GateFacts) -> bool:
    """True while a repaired adapter is still to be read with mains on it."""
    done = {key for key, result in facts.retested if result == "pass"}
    return facts.repaired and not facts.unplugged and bool((facts.required & facts.live_lines) - done)


def _bulk_again(bench: "Bench", facts: GateFacts) -> SuggestionView | None:
    """The bulk reading that stands between readings with mains and hands at the board again."""
    store = bench.rules.bulk
    if store is None or not bulk_open(bench.rules, facts) or not permit(facts, "bulk voltage").allowed:
        return None
    assert bench.answers is not None
    return shown.bulk_suggestion(store, bench.answers.diagnosis.costs.reading["volts_dc"])


def _next(bench: "Bench", facts: GateFacts, state: Replay, job: Job) -> SuggestionView | None:
    """The cautions and the bulk reading first; then the diagnosis; then the shorts that stand before
    power."""
    assert bench.answers is not None
    first = _first_of_all(bench, facts, state)
    if first is not None:
        return first
    diagnosis = bench.answers.diagnosis
    live, cold = live_open(facts), facts.unplugged and not cold_waits_for(facts)

    def gate(probe: Probe) -> bool:
        return live if probe.live else cold

    suggestion = diagnosis.suggest(job, gate)
    if suggestion is not None:
        return shown.suggestion_view(suggestion)
    if not facts.unplugged:
        # No reading with mains tells more: what is left is read on the unpowered board.
        return _bulk_again(bench, facts)
    check = open_check(bench.rules, facts)
    if live or not cold or check is None:
        return None
    return shown.check_suggestion(check, diagnosis.costs.minutes(check.probe, ()))


def _standing_message(bench: "Bench", facts: GateFacts, suggestion: SuggestionView | None) -> str:
    """What keeps the job from going on, or what is to be known on opening it."""
    if bench.job.conflicts:
        names = ", ".join(path.name for path in bench.job.conflicts)
        return f"a sync program left other versions of this job: {names}; compare them before going on"
    if bench.read_only and not bench.only_looks:
        return f"read-only: {bench.read_only}"
    if bench.last_session and bench.answers is None:
        return f"the last session was cut off ({bench.last_session}); every entry it had accepted is here"
    if bench.answers is not None and suggestion is None and not facts.repaired and not facts.found:
        cold, missing = cold_waits_for(facts), waits_for(facts)
        if cold:
            return f"readings wait: first {cold[0]}"
        return f"live readings wait: first {missing[0]}" if missing else ""
    return ""


def unready(facts: GateFacts, rules: Rules, probe: Probe) -> str:
    """What a cold reading was taken without, as a caution behind it; empty when nothing was missing."""
    missing = permit(facts, "bulk voltage").missing if rules.is_bulk(probe) else cold_waits_for(facts)
    return f"CAUTION, entered before its time: first {'; '.join(missing)}" if missing else ""
