"""What may be done now, and what is missing first: the gates of a job as a pure state machine.

A job passes cautions, inspection, cold readings, live readings, repair and retest until it is closed.
``GateFacts`` is all that the gates know; ``advance`` folds one entry into it and refuses an entry whose gate
is shut; ``permit`` says what is missing, in one line. There is no way around: a live reading asks for
everything a power-up asks for, and powering makes the bulk voltage unknown again. An adapter can always be
closed without being repaired.
"""

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace

from triage.board.part import Board
from triage.errors import GateError
from triage.safety.cautions import needed
from triage.safety.cold_checks import short_checks
from triage.safety.discharge import bulk_store
from triage.safety.limits import table

STAGES = ("cautions", "inspection", "cold", "live", "repair", "retest", "closed")
"""The way of a job from the mat to the file, in order."""

SAFE_VOLTAGE = float(table("discharge")["touch_safe"]["dc_V"])
"""A bulk capacitor below this may be touched [V]; IEC 62368-1:2018, table 4 (ES1 dc), from memory."""

LOOKS = ("sound", "doubtful", "restorable", "veto", "skipped")
"""What a look can say: a ``restorable`` defect forbids power until it is put right, a ``veto`` forbids the
repair."""


@dataclass(frozen=True, slots=True)
class GateFacts:
    """All that decides what is allowed."""

    cautions_cold: frozenset[str] = frozenset()
    """Keys of the cautions that stand before the board is touched."""
    cautions_live: frozenset[str] = frozenset()
    """Keys of the cautions that stand before it is powered."""
    acknowledged: frozenset[str] = frozenset()
    """Keys acknowledged today in this job; a job resumed on another day starts with none."""
    items: frozenset[str] = frozenset()
    """Keys of the things to look at before the cold readings."""
    looks: frozenset[tuple[str, str]] = frozenset()
    """(item, one of LOOKS); the last look at an item counts."""
    has_bulk: bool = True
    """False for a board that stores nothing at mains voltage."""
    unplugged: bool = True
    """False from a power-up until the technician says unplugged or reads the bulk voltage of the unplugged
    board."""
    bulk_voltage: float | None = None
    """Last bulk reading since the last power-up, today [V]; None: unknown."""
    checks: frozenset[tuple[str, str]] = frozenset()
    """(short check, status of ``cold_checks.STATUSES``)."""
    found: bool = False
    """True when the diagnosis has come to a verdict."""
    repaired: bool = False
    """True when a part was fitted or a joint or cord mended, and it is not known to be no cure."""
    worked_on: bool = False
    """True once a part was fitted, cure or not: the board is another one than came onto the mat."""
    before_power: frozenset[str] = frozenset()
    """Keys of the retest lines that must pass before a repaired adapter is powered."""
    required: frozenset[str] = frozenset()
    """Keys of all retest lines that must pass before the job is closed as repaired."""
    live_lines: frozenset[str] = frozenset()
    """Keys of the retest lines that need the adapter powered."""
    retested: frozenset[tuple[str, str]] = frozenset()
    """(retest line, ``pass``, ``fail`` or ``too close to call``) since the last repair."""
    closed: str = ""
    """Outcome of a closed job, empty while it is open."""


@dataclass(frozen=True, slots=True)
class Permit:
    """Whether an action is open."""

    action: str
    missing: tuple[str, ...] = ()
    """What must be done first, in order; empty when the action is open."""

    @property
    def allowed(self) -> bool:
        """True when nothing is missing."""
        return not self.missing

    @property
    def line(self) -> str:
        """One line for the screen: the next thing to do, or that the action is open."""
        return f"{self.action}: first {'; '.join(self.missing)}" if self.missing else f"{self.action}: open"


def facts_for(
    board: Board,
    items: Iterable[str] = (),
    before_power: Iterable[str] = (),
    required: Iterable[str] = (),
    live_lines: Iterable[str] = (),
) -> GateFacts:
    """The facts of a fresh job on a board. ``items``: keys of the looks; the others: keys of the retest
    lines."""
    return GateFacts(
        cautions_cold=needed(board, "cold"),
        cautions_live=needed(board, "live"),
        items=frozenset(items),
        has_bulk=bulk_store(board) is not None,
        checks=frozenset((check.key, "open") for check in short_checks(board)),
        before_power=frozenset(before_power),
        required=frozenset(required),
        live_lines=frozenset(live_lines),
    )


Requirement = Callable[[GateFacts], tuple[str, ...]]
"""Facts -> what is missing, each as a thing to do."""


def _listed(verb: str, keys: Iterable[str]) -> tuple[str, ...]:
    names = sorted(keys)
    return (f"{verb} {', '.join(names)}",) if names else ()


def _is_open(facts: GateFacts) -> tuple[str, ...]:
    return (f"this job is closed as {facts.closed}; open a new one",) if facts.closed else ()


def _cold_cautions(facts: GateFacts) -> tuple[str, ...]:
    return _listed("acknowledge", facts.cautions_cold - facts.acknowledged)


def _live_cautions(facts: GateFacts) -> tuple[str, ...]:
    return _listed("acknowledge", facts.cautions_live - facts.acknowledged)


def _inspected(facts: GateFacts) -> tuple[str, ...]:
    return _listed("look at", facts.items - {item for item, _ in facts.looks})


def _no_veto(facts: GateFacts) -> tuple[str, ...]:
    vetoed = [item for item, look in facts.looks if look == "veto"]
    return _listed("no way on, close as replaced or scrapped: veto on", vetoed)


def _restored(facts: GateFacts) -> tuple[str, ...]:
    return _listed("put right and look again at", (i for i, look in facts.looks if look == "restorable"))


def _discharged(facts: GateFacts) -> tuple[str, ...]:
    if not facts.has_bulk:
        return () if facts.unplugged else ("unplug",)
    if facts.bulk_voltage is None:
        return ("unplug and read the bulk voltage",)
    if not facts.bulk_voltage < SAFE_VOLTAGE:
        return (f"discharge the bulk capacitor from {facts.bulk_voltage:.0f} V to below {SAFE_VOLTAGE:.0f} V",)
    return ()


def _discharged_or_powered(facts: GateFacts) -> tuple[str, ...]:
    return () if not facts.unplugged else _discharged(facts)


def _is_unplugged(facts: GateFacts) -> tuple[str, ...]:
    return () if facts.unplugged else ("unplug",)


def _powered(facts: GateFacts) -> tuple[str, ...]:
    return ("power up through the current limit",) if facts.unplugged else ()


def _no_short(facts: GateFacts) -> tuple[str, ...]:
    return (
        *_listed("read or refuse the cold check", (key for key, status in facts.checks if status == "open")),
        *_listed("repair the short", (key for key, status in facts.checks if status == "short")),
    )


def _is_repaired(facts: GateFacts) -> tuple[str, ...]:
    return () if facts.repaired else ("record the repair",)


def _is_worked_on(facts: GateFacts) -> tuple[str, ...]:
    return () if facts.worked_on else ("record the repair",)


def _passed_before_power(facts: GateFacts) -> tuple[str, ...]:
    return _not_passed(facts, facts.before_power) if facts.worked_on else ()


def _passed_all(facts: GateFacts) -> tuple[str, ...]:
    return _not_passed(facts, facts.required | facts.before_power)


def _not_passed(facts: GateFacts, keys: frozenset[str]) -> tuple[str, ...]:
    done = dict(facts.retested)
    return (
        *_listed("retest", (key for key in keys if key not in done)),
        *_listed("not passed:", (f"{key} ({done[key]})" for key in keys if done.get(key, "pass") != "pass")),
    )


_POWER: tuple[Requirement, ...] = (
    _is_open,
    _cold_cautions,
    _inspected,
    _no_veto,
    _restored,
    _live_cautions,
    _no_short,
    _passed_before_power,
)

REQUIREMENTS: Mapping[str, tuple[Requirement, ...]] = {
    "acknowledge": (_is_open,),
    "look": (_is_open, _cold_cautions),
    "measure distance": (_is_open, _cold_cautions, _discharged),
    "bulk voltage": (_is_open, _cold_cautions),
    "cold reading": (_is_open, _cold_cautions, _inspected, _discharged),
    "power up": (*_POWER, _discharged_or_powered),
    "live reading": (*_POWER, _powered),
    "repair": (_is_open, _cold_cautions, _inspected, _no_veto, _discharged),
    "retest cold": (_is_open, _cold_cautions, _inspected, _is_worked_on, _discharged),
    "retest live": (*_POWER, _is_repaired, _powered),
    "close as repaired": (
        _is_open,
        _cold_cautions,
        _inspected,
        _no_veto,
        _restored,
        _is_unplugged,
        _is_repaired,
        _passed_all,
    ),
    "close": (_is_open,),
}
"""Action -> what it asks for."""


def permit(facts: GateFacts, action: str) -> Permit:
    """What an action of REQUIREMENTS still asks for."""
    return Permit(action, tuple(text for need in REQUIREMENTS[action] for text in need(facts)))


def require(facts: GateFacts, action: str) -> None:
    """Raise GateError with the missing things in one line when an action is not open."""
    asked = permit(facts, action)
    if not asked.allowed:
        raise GateError(action, f"not open yet: first {'; '.join(asked.missing)}")


def stage(facts: GateFacts) -> str:
    """The stage a job is in, one of STAGES."""
    if facts.closed:
        return "closed"
    if _cold_cautions(facts):
        return "cautions"
    if _inspected(facts):
        return "inspection"
    if facts.repaired:
        return "retest"
    if facts.found:
        return "repair"
    return "cold" if facts.unplugged and not permit(facts, "power up").allowed else "live"


def safe_to_touch(facts: GateFacts) -> str:
    """One line on whether a hand may go to the board now."""
    missing = _discharged(facts)
    if not facts.unplugged:
        return "NOT safe to touch: powered"
    return f"NOT safe to touch: {missing[0]}" if missing else "safe to touch while unplugged"


@dataclass(frozen=True, slots=True)
class GateEvent:
    """One entry of a job as the gates see it."""

    kind: str
    """Key of EVENTS."""
    key: str = ""
    """Caution, item, check, retest line or outcome."""
    value: str = ""
    """Look, status of a check or verdict of a line."""
    volts: float = float("nan")
    """Bulk voltage [V], for ``bulk voltage``."""


def _with(pairs: frozenset[tuple[str, str]], key: str, value: str) -> frozenset[tuple[str, str]]:
    return frozenset({**dict(pairs), key: value}.items())


def _acknowledge(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, acknowledged=facts.acknowledged | {event.key})


def _look(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, looks=_with(facts.looks, event.key, event.value))


def _bulk(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, bulk_voltage=abs(event.volts), unplugged=True)


def _check(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, checks=_with(facts.checks, event.key, event.value))


def _power(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, unplugged=False, bulk_voltage=None)


def _unplug(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, unplugged=True)


def _taken_back(facts: GateFacts, event: GateEvent) -> GateFacts:
    """An entry that powered the board was a slip of the pen: whether it was powered is unknown, so is the
    bulk."""
    return replace(facts, unplugged=True, bulk_voltage=None)


def _same(facts: GateFacts, event: GateEvent) -> GateFacts:
    return facts


def _fit(facts: GateFacts, event: GateEvent) -> GateFacts:
    """A repair: every short check must be read again and the retest begins anew."""
    return replace(
        facts,
        repaired=True,
        worked_on=True,
        found=False,
        retested=frozenset(),
        checks=frozenset((key, "open") for key, _ in facts.checks),
    )


def _retest(facts: GateFacts, event: GateEvent) -> GateFacts:
    if event.key in facts.live_lines:
        require(facts, "retest live")
    return replace(facts, retested=_with(facts.retested, event.key, event.value))


def _close(facts: GateFacts, event: GateEvent) -> GateFacts:
    return replace(facts, closed=event.key)


def _no_cure(facts: GateFacts, event: GateEvent) -> GateFacts:
    """The search goes on, on a board that was worked on and counts as not repaired."""
    return replace(facts, repaired=False)


def _returned(facts: GateFacts, event: GateEvent) -> GateFacts:
    """Back from its owner: open again, and everything is looked at and measured anew."""
    return replace(
        _another_day(facts, event),
        closed="",
        repaired=False,
        looks=frozenset(),
        retested=frozenset(),
        checks=frozenset((key, "open") for key, _ in facts.checks),
    )


def _another_day(facts: GateFacts, event: GateEvent) -> GateFacts:
    """Resumed: nothing is acknowledged, and who knows what the adapter was plugged into meanwhile."""
    return replace(facts, acknowledged=frozenset(), unplugged=True, bulk_voltage=None)


EVENTS: Mapping[str, tuple[str | None, Callable[[GateFacts, GateEvent], GateFacts]]] = {
    "acknowledge": ("acknowledge", _acknowledge),
    "look": ("look", _look),
    "measure distance": ("measure distance", _look),
    "bulk voltage": ("bulk voltage", _bulk),
    "cold reading": ("cold reading", _same),
    "cold check": ("cold reading", _check),
    "power up": ("power up", _power),
    "live reading": ("live reading", _same),
    "unplug": (None, _unplug),
    "power taken back": (None, _taken_back),
    "repair": ("repair", _fit),
    "retest cold": ("retest cold", _retest),
    "retest live": ("retest live", _retest),
    "close as repaired": ("close as repaired", _close),
    "close": ("close", _close),
    "no cure": (None, _no_cure),
    "returned": (None, _returned),
    "another day": (None, _another_day),
}
"""Event -> (the action whose gate it passes, what it changes)."""


def advance(facts: GateFacts, event: GateEvent) -> GateFacts:
    """The facts after one event. Raises GateError when its gate is shut."""
    action, change = EVENTS[event.kind]
    if action is not None:
        require(facts, action)
    return change(facts, event)
