"""Every path of the gates' state machine: nothing live, no power and no closing as repaired without its gate.

A job is a sequence of events. With one key of each sort the machine has finitely many states, so walking the
product of machine and an independent record of the history visits every path there is, of any length: two
paths that end in the same pair of states go on alike. The record below knows nothing of the machine but the
names of the events.
"""

from collections import deque
from collections.abc import Iterator
from dataclasses import dataclass, replace

import pytest

from tests.safety.boards import brick, charger, iron
from triage.errors import GateError
from triage.safety import gate
from triage.safety.gate import (
    EVENTS,
    REQUIREMENTS,
    STAGES,
    GateEvent,
    GateFacts,
    advance,
    facts_for,
    permit,
    stage,
)

FRESH = GateFacts(
    cautions_cold=frozenset({"c"}),
    cautions_live=frozenset({"l"}),
    items=frozenset({"i"}),
    checks=frozenset({("s", "open")}),
    before_power=frozenset({"r1"}),
    required=frozenset({"r1", "r2"}),
    live_lines=frozenset({"r2"}),
)

ALPHABET = (
    GateEvent("acknowledge", "c"),
    GateEvent("acknowledge", "l"),
    *(GateEvent("look", "i", look) for look in gate.LOOKS),
    GateEvent("bulk voltage", volts=325.0),
    GateEvent("bulk voltage", volts=5.0),
    GateEvent("cold reading"),
    *(GateEvent("cold check", "s", status) for status in ("clear", "short", "refused", "ruled out")),
    GateEvent("power up"),
    GateEvent("live reading"),
    GateEvent("unplug"),
    GateEvent("power taken back"),
    GateEvent("repair"),
    GateEvent("no cure"),
    GateEvent("returned"),
    *(
        GateEvent(kind, key, verdict)
        for kind in ("retest cold", "retest live")
        for key in ("r1", "r2")
        for verdict in ("pass", "fail", "too close to call")
    ),
    GateEvent("close as repaired", "repaired"),
    GateEvent("close", "scrapped"),
    GateEvent("another day"),
)


FROM_OUTSIDE = ("unplug", "power taken back", "no cure", "returned", "another day")
"""What happens without asking a gate."""


@dataclass(frozen=True)
class History:
    """What happened, told from the events alone."""

    cold_acknowledged: bool = False
    live_acknowledged: bool = False
    look: str = ""
    powered: bool = False
    below_60: bool = False
    short: str = "open"
    repaired: bool = False
    worked_on: bool = False
    lines: tuple[tuple[str, str], ...] = ()
    closed: bool = False

    def after(self, event: GateEvent) -> "History":
        match event.kind:
            case "acknowledge":
                return replace(self, **{"cold_acknowledged" if event.key == "c" else "live_acknowledged": True})
            case "look":
                return replace(self, look=event.value)
            case "bulk voltage":
                return replace(self, below_60=event.volts < 60.0, powered=False)
            case "cold check":
                return replace(self, short=event.value)
            case "power up":
                return replace(self, powered=True, below_60=False)
            case "unplug":
                return replace(self, powered=False)
            case "power taken back":
                return replace(self, powered=False, below_60=False)
            case "repair":
                return replace(self, repaired=True, worked_on=True, short="open", lines=())
            case "no cure":
                return replace(self, repaired=False)
            case "returned":
                return History(worked_on=self.worked_on)
            case "retest cold" | "retest live":
                return replace(self, lines=tuple(sorted({**dict(self.lines), event.key: event.value}.items())))
            case "close" | "close as repaired":
                return replace(self, closed=True)
            case "another day":
                return replace(self, cold_acknowledged=False, live_acknowledged=False, powered=False, below_60=False)
        return self

    def may_be_powered(self) -> bool:
        return (
            self.cold_acknowledged
            and self.live_acknowledged
            and self.look in ("sound", "doubtful", "skipped")
            and self.short in ("clear", "refused", "ruled out")
            and (not self.worked_on or dict(self.lines).get("r1") == "pass")
        )

    def permits(self, event: GateEvent) -> bool:
        """The safety rule of an event, in words of the bench: see design, safety."""
        if self.closed and event.kind not in FROM_OUTSIDE:
            return False
        looked = self.cold_acknowledged and self.look != ""
        live_line = event.kind.startswith("retest") and event.key == "r2"
        match event.kind:
            case "power up":
                return self.may_be_powered() and (self.below_60 or self.powered)
            case "live reading":
                return self.may_be_powered() and self.powered
            case "retest live":
                return self.may_be_powered() and self.powered and self.repaired
            case "retest cold":
                return looked and self.below_60 and self.worked_on and not live_line
            case "cold reading" | "cold check":
                return looked and self.below_60
            case "repair":
                return looked and self.below_60 and self.look != "veto"
            case "bulk voltage" | "look":
                return self.cold_acknowledged
            case "close as repaired":
                return (
                    looked
                    and self.look not in ("veto", "restorable")
                    and self.repaired
                    and not self.powered
                    and dict(self.lines) == {"r1": "pass", "r2": "pass"}
                )
        return True


def walk(start: GateFacts) -> Iterator[tuple[GateFacts, History, GateEvent, bool]]:
    """Every event tried in every reachable pair of machine and history, and whether the machine took it."""
    seen = {(start, History())}
    queue = deque(seen)
    while queue:
        facts, history = queue.popleft()
        for event in ALPHABET:
            try:
                following = advance(facts, event)
            except GateError:
                yield facts, history, event, False
                continue
            yield facts, history, event, True
            pair = (following, history.after(event))
            if pair not in seen:
                seen.add(pair)
                queue.append(pair)


@pytest.fixture(scope="module")
def walked() -> list[tuple[GateFacts, History, GateEvent, bool]]:
    return list(walk(FRESH))


def test_no_path_passes_a_shut_gate(walked) -> None:
    """On every path the machine takes exactly the events that the independent record permits."""
    wrong = [(history, event, taken) for _, history, event, taken in walked if taken != history.permits(event)]
    assert wrong == []
    print(f"{len(walked) // len(ALPHABET)} states, {len(walked)} events tried")


def test_every_event_is_reached_and_every_gate_is_met_shut(walked) -> None:
    """The walk is not empty: each event is taken somewhere, and each gated one is refused somewhere."""
    outcomes_of: dict[GateEvent, set[bool]] = {}
    for _, _, event, taken in walked:
        outcomes_of.setdefault(event, set()).add(taken)
    for event in ALPHABET:
        outcomes = outcomes_of[event]
        impossible = event.kind == "retest cold" and event.key == "r2"
        assert (True in outcomes) is not impossible
        if EVENTS[event.kind][0] is not None:
            assert False in outcomes


def test_every_stage_is_reached(walked) -> None:
    states = {facts for facts, *_ in walked}
    stages = {stage(facts) for facts in states} | {stage(replace(facts, found=True)) for facts in states}
    assert stages == set(STAGES)


def test_live_stage_and_power_only_with_everything_in_place(walked) -> None:
    for facts, history in {(facts, history) for facts, history, *_ in walked}:
        if not facts.unplugged:
            assert history.powered
        if permit(facts, "live reading").allowed:
            assert history.may_be_powered() and history.powered


def test_from_every_open_state_the_job_can_be_closed_unrepaired(walked) -> None:
    states = {facts for facts, *_ in walked}
    assert all(permit(facts, "close").allowed for facts in states if not facts.closed)


@pytest.mark.parametrize(
    "left_out", sorted({need for needs in REQUIREMENTS.values() for need in needs}, key=lambda n: n.__name__)
)
def test_each_requirement_is_needed(left_out, monkeypatch) -> None:
    """The walk can fail: without any one requirement some path passes a shut gate."""
    weaker = {action: tuple(need for need in needs if need is not left_out) for action, needs in REQUIREMENTS.items()}
    monkeypatch.setattr(gate, "REQUIREMENTS", weaker)
    assert any(taken and not history.permits(event) for _, history, event, taken in walk(FRESH))


def test_missing_things_stand_in_one_line() -> None:
    line = permit(FRESH, "live reading").line
    assert "\n" not in line
    for piece in ("acknowledge c", "look at i", "acknowledge l", "cold check s", "power up"):
        assert piece in line


def test_a_shut_gate_says_what_to_do_first() -> None:
    with pytest.raises(GateError, match="power up: not open yet: first acknowledge c"):
        advance(FRESH, GateEvent("power up"))


def test_bulk_reading_sign_does_not_open_the_gate() -> None:
    ready = advance(FRESH, GateEvent("acknowledge", "c"))
    held = advance(ready, GateEvent("bulk voltage", volts=-325.0))
    assert "from 325 V" in gate.safe_to_touch(held)
    unknown = advance(ready, GateEvent("bulk voltage", volts=float("nan")))
    assert gate.safe_to_touch(unknown).startswith("NOT safe")


def test_resumed_on_another_day_everything_is_asked_again() -> None:
    facts = FRESH
    for event in (
        GateEvent("acknowledge", "c"),
        GateEvent("acknowledge", "l"),
        GateEvent("look", "i", "sound"),
        GateEvent("bulk voltage", volts=5.0),
        GateEvent("cold check", "s", "clear"),
        GateEvent("power up"),
        GateEvent("another day"),
    ):
        facts = advance(facts, event)
    assert stage(facts) == "cautions"
    assert gate.safe_to_touch(facts) == "NOT safe to touch: unplug and read the bulk voltage"


@pytest.mark.parametrize("board", [charger(), brick(), iron()], ids=["cube", "brick", "iron"])
def test_real_boards_walk_to_the_end(board) -> None:
    """One whole job on each board: the straight way through, with nothing left out."""
    facts = facts_for(
        board,
        items=("cord",),
        before_power=("visual",),
        required=("visual", "output"),
        live_lines=("output",),
    )
    discharged = GateEvent("bulk voltage", volts=1.0) if facts.has_bulk else GateEvent("unplug")
    checks = [GateEvent("cold check", key, "clear") for key, _ in sorted(facts.checks)]
    for event in (
        *(GateEvent("acknowledge", key) for key in sorted(facts.cautions_cold)),
        GateEvent("look", "cord", "sound"),
        discharged,
        *checks,
        *(GateEvent("acknowledge", key) for key in sorted(facts.cautions_live)),
        GateEvent("power up"),
        GateEvent("live reading"),
        discharged,
        GateEvent("repair"),
        *checks,
        GateEvent("retest cold", "visual", "pass"),
        GateEvent("power up"),
        GateEvent("retest live", "output", "pass"),
        GateEvent("unplug"),
        GateEvent("close as repaired", "repaired"),
    ):
        facts = advance(facts, event)
    assert stage(facts) == "closed"
