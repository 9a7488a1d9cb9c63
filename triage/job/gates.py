"""What the log means for the gates of ``triage.safety``: what is allowed now and what must come first.

The gates themselves are the safety room's; here each entry becomes the events it stands for. An entry in the
log has happened, so replaying applies it whether or not its gate was open; asking for permission is done
before an entry is made (``allow``).
"""

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.probe import Probe
from triage.errors import GateError
from triage.job.entries import Entry, probe_of, undone_numbers
from triage.safety.cold_checks import ShortCheck, short_checks, status
from triage.safety.discharge import Store, bulk_store
from triage.safety.gate import EVENTS, SAFE_VOLTAGE, GateEvent, GateFacts, facts_for, permit, require
from triage.safety.inspection import looks_needed

WHOLE_ADAPTER = "sound"
"""Sign that, given for the whole adapter, answers every look of the inspection not yet taken."""

CLAIMS = frozenset({"repaired", "mended", "fixed", "cured", "works", "working", "ok", "good", "passed"})
"""First words of an outcome that hand the adapter back for use: they ask for the whole retest."""


@dataclass(frozen=True, slots=True)
class Rules:
    """What the gates of one board ask for."""

    board: Board
    start: GateFacts
    """The facts of a job without entries."""
    bulk: Store | None
    checks: tuple[ShortCheck, ...]

    @classmethod
    def of_board(
        cls,
        board: Board,
        retest_keys: tuple[Iterable[str], Iterable[str], Iterable[str]] = ((), (), ()),
    ) -> "Rules":
        """The rules of a board. retest_keys: lines before power, required lines, live lines."""
        start = facts_for(board, looks_needed(board), *retest_keys)
        return cls(board, start, bulk_store(board), short_checks(board))

    @property
    def bulk_probe(self) -> Probe | None:
        """The reading that shows whether the bulk capacitor is empty, or None for a board without one."""
        return None if self.bulk is None else Probe("volts_dc", self.bulk.plus, self.bulk.minus, "cold")

    def is_bulk(self, probe: Probe) -> bool:
        """True for the bulk reading, leads either way round."""
        wanted = self.bulk_probe
        return wanted is not None and probe in (wanted, wanted._replace(plus=wanted.minus, minus=wanted.plus))


def facts_of(
    rules: Rules,
    entries: tuple[Entry, ...],
    today: str,
    probability: Mapping[Fault, float] | None = None,
    found: bool = False,
) -> GateFacts:
    """The facts that the log has established.

    today: date of the present, ISO 8601; on another day than that of the last entry nothing is acknowledged
    any more. probability: present chance of each fault [-], which may rule a short out. found: the diagnosis
    has a verdict.
    """
    undone = undone_numbers(entries)
    facts, day = rules.start, ""
    readings: dict[Probe, float] = {}
    refused: set[Probe] = set()
    for number, entry in enumerate(entries, 1):
        if entry.kind == "undo":
            facts = _after_undo(rules, facts, entries, entry.said["entry"], number)
        if entry.kind == "undo" or number in undone:
            continue
        if day and entry.time[:10] != day:
            facts = _change(facts, GateEvent("another day"))
        day = entry.time[:10]
        for event in _events(rules, facts, entry):
            facts = _change(facts, event)
        if entry.kind == "retest":
            done = {**dict(facts.retested), entry.said["check"]: entry.said["counts_as"]}
            facts = replace(facts, retested=frozenset(done.items()))
        if entry.kind in ("fitted", "returned"):
            readings.clear()
            refused.clear()
        elif entry.kind == "reading":
            readings[probe_of(entry.said)] = float(entry.said["value"])
        elif entry.kind == "skip":
            refused.add(probe_of(entry.said))
    if day and day != today:
        facts = _change(facts, GateEvent("another day"))
    checks = {c.key: status(c, readings, frozenset(refused), probability) for c in rules.checks}
    return replace(facts, checks=frozenset(checks.items()), found=found and not facts.repaired)


def allow(rules: Rules, facts: GateFacts, kind: str, said: Mapping[str, object]) -> None:
    """Raise GateError when an entry asks for a step whose gate is shut.

    A cold reading is always taken in: it has been made, and keeping its value out helps nobody. A live one
    asks for everything that power asks for.
    """
    if facts.closed and kind not in ("undo", "returned", "note"):
        require(facts, "close")
    if kind == "power" and said["on"]:
        require(facts, "power up")
    if kind == "reading" and said["condition"] != "cold":
        _require_powered(facts, "live reading")
    if kind == "skip" and rules.is_bulk(probe_of(said)) and not _discharged(facts):
        raise GateError(
            "bulk reading",
            "cannot be skipped",
            "a voltage, for instance 0.1 V",
            "the board is not to be touched before it is known to be discharged",
        )
    if kind == "fitted":
        require(facts, "repair")
    if kind == "retest":
        if said["check"] in facts.live_lines:
            _require_powered(facts, "retest live")
        else:
            require(facts, "retest cold")
    if kind == "closed":
        require(facts, "close as repaired" if claims_repair(str(said["verdict"])) else "close")
    if kind == "look":
        # What is not among the looks needed is measured at the board: with hands and a rule.
        at_the_board = said["item"] not in facts.items and said["look"] != "skipped"
        require(facts, "measure distance" if at_the_board else "look")
    if kind == "sign" and said["sign"] == WHOLE_ADAPTER and not said["ref"]:
        require(facts, "look")


def _require_powered(facts: GateFacts, action: str) -> None:
    """Raise GateError unless the adapter may be powered, where it is not yet, and the action then is open."""
    if facts.unplugged:
        require(facts, "power up")
        facts = _change(facts, GateEvent("power up"))
    require(facts, action)


def claims_repair(verdict: str) -> bool:
    """True for an outcome that says the adapter may be used again after a repair, however it is worded.

    >>> claims_repair("Repaired, burnt in"), claims_repair("scrapped")
    (True, False)
    """
    words = re.findall(r"\w+", verdict.casefold())
    return bool(words) and words[0] in CLAIMS


def cold_waits_for(facts: GateFacts) -> tuple[str, ...]:
    """What must be done before a cold reading is proposed, in order: the cautions, then the bulk reading.

    The looks come before it as well, but a reading is not kept back for one that was left out.
    """
    missing = permit(facts, "bulk voltage").missing
    return missing if missing or _discharged(facts) else permit(facts, "measure distance").missing


def waits_for(facts: GateFacts) -> tuple[str, ...]:
    """What must be done before the board may be powered, in order."""
    return permit(facts, "power up" if facts.unplugged else "live reading").missing


def live_open(facts: GateFacts) -> bool:
    """True when a live reading may be proposed."""
    return not waits_for(facts)


def bulk_open(rules: Rules, facts: GateFacts) -> bool:
    """True while the voltage of the bulk capacitor must be read before anything else is done at the board."""
    return rules.bulk is not None and not _discharged(facts)


def open_check(rules: Rules, facts: GateFacts) -> ShortCheck | None:
    """The next short check that is neither read, refused nor ruled out."""
    where = dict(facts.checks)
    return next((check for check in rules.checks if where.get(check.key) == "open"), None)


def _discharged(facts: GateFacts) -> bool:
    return not facts.has_bulk or (facts.bulk_voltage is not None and facts.bulk_voltage < SAFE_VOLTAGE)


def _change(facts: GateFacts, event: GateEvent) -> GateFacts:
    return EVENTS[event.kind][1](facts, event)


def _events(rules: Rules, facts: GateFacts, entry: Entry) -> tuple[GateEvent, ...]:
    """The gate events that one entry stands for."""
    said = entry.said
    if entry.kind == "acknowledge":
        return (GateEvent("acknowledge", said["caution"]),)
    if entry.kind == "look":
        return (GateEvent("look", said["item"], said["look"]),)
    if entry.kind == "sign" and said["sign"] == WHOLE_ADAPTER and not said["ref"]:
        seen = {item for item, _ in facts.looks}
        return tuple(GateEvent("look", item, "sound") for item in sorted(facts.items - seen))
    if entry.kind == "power":
        return (GateEvent("power up" if said["on"] else "unplug"),)
    if entry.kind == "reading":
        if rules.is_bulk(probe_of(said)):
            return (GateEvent("bulk voltage", volts=float(said["value"])),)
        return (GateEvent("power up"),) if said["condition"] != "cold" and facts.unplugged else ()
    if entry.kind == "fitted":
        return (GateEvent("repair"),)
    if entry.kind == "retest":
        return (GateEvent("power up"),) if said["check"] in facts.live_lines and facts.unplugged else ()
    if entry.kind == "closed":
        return (GateEvent("close", said["verdict"]),)
    if entry.kind == "returned":
        return (GateEvent("returned"),)
    if entry.kind == "repaired" and said["result"] == "still faulty":
        return (GateEvent("no cure"),)
    return ()


def _after_undo(rules: Rules, facts: GateFacts, entries: tuple[Entry, ...], number: int, at: int) -> GateFacts:
    """The facts once entry ``number`` is taken back by entry ``at``.

    The entry itself is passed over in the replay. What cannot be passed over is what may have happened at
    the board: after an entry that powered it, or one that found it charged, nobody knows what the bulk
    capacitor holds.
    """
    if not 0 < number < at:
        return facts
    taken = entries[number - 1]
    if _may_have_powered(facts, taken):
        return _change(facts, GateEvent("power taken back"))
    if taken.kind == "reading" and rules.is_bulk(probe_of(taken.said)) and _discharged(facts):
        return replace(facts, bulk_voltage=None)
    return facts


def _may_have_powered(facts: GateFacts, entry: Entry) -> bool:
    """True for an entry that stands for power at the adapter."""
    said = entry.said
    if entry.kind == "power":
        return bool(said["on"])
    if entry.kind == "reading":
        return bool(said["condition"] != "cold")
    return entry.kind == "retest" and said["check"] in facts.live_lines
