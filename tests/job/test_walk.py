"""Every path through the whole program: no live reading, no power-up and no closing as repaired without its gate.

Each call that a screen or the command line can make of a job is tried in each state that the calls before it can lead to,
until no new state turns up, so that paths of any length are covered; taking back is tried after every single step. What
must hold is said by ``Record``, which reads the log by itself and knows nothing of the gates. Whatever is asked for in a
state (the suggestion, the word on touching) is held against the same record.
"""

import math
import os
from collections import deque
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field, replace
from datetime import timedelta
from pathlib import Path

import pytest

from tests.job.stand_in import PROBES, PROFILE, Clock, StandIn
from triage.errors import EntryError, GateError
from triage.job import gates, picture, store
from triage.job.bench import Bench
from triage.job.entries import Entry, make_entry
from triage.safety import gate
from triage.safety.cold_checks import RULED_OUT_BELOW

RETEST = {"insulation": "200 Mohm", "output no load": "5.1 V", "output half load": "5.0 V", "output full load": "5.0 V"}


class InMemory(store.Job):
    """A job whose entries stay in memory: the walk is about gates, the disk has tests of its own."""

    def append(self, entry: Entry) -> None:
        self.entries = (*self.entries, entry)


class Walker:
    """A bench that can be put at any point of any log.

    Its gates ask for one key of each sort (caution, look, short check, line of the retest), which leaves finitely few
    states; that every key of the real board counts is a test of its own.
    """

    def __init__(self, path: Path) -> None:
        self.clock = Clock()
        self.bench = Bench.create(PROFILE, path, StandIn(), self.clock)
        self.bench.prepare()
        self.answers = self.bench.answers
        job = self.bench.job
        self.bench.job = InMemory(job.path, job.document, job.content)
        rules = self.bench.rules
        start = replace(
            rules.start,
            cautions_cold=frozenset({"stored energy"}),
            cautions_live=frozenset({"isolation"}),
            items=frozenset({"board"}),
            before_power=frozenset({"visual"}),
            required=frozenset({"visual", "output no load"}),
        )
        self.bench.rules = replace(rules, start=start, checks=rules.checks[:1])
        kept = start.cautions_cold | start.cautions_live
        self.bench.cautions = tuple(caution for caution in self.bench.cautions if caution.key in kept)
        self.cold = sorted(start.cautions_cold)
        self.live = sorted(start.cautions_live)
        self.lines = sorted(start.required | start.before_power)
        self.live_lines = start.live_lines

    def put(self, entries: tuple[Entry, ...], day: int) -> None:
        self.bench.job.entries = entries
        self.clock.now = Clock().now + timedelta(days=day, seconds=len(entries))

    def key(self) -> gate.GateFacts:
        """What the gates know, the same on every day."""
        return self.bench.facts()


def whole_bench(path: Path) -> Bench:
    """The charger with all its gates, entries kept in memory."""
    bench = Bench.create(PROFILE, path, StandIn(), Clock())
    bench.job = InMemory(bench.job.path, bench.job.document, bench.job.content)
    return bench


def retest(walker: Walker, is_live: bool, good: bool) -> None:
    """The lines of the retest that are needed, cold ones or live ones, all passed; or the first of them failed."""
    keys = [key for key in walker.lines if (key in walker.live_lines) == is_live]
    for key in keys if good else keys[:1]:
        line = next(line for line in walker.bench.lines if line.key == key)
        answer = ("yes" if good else "no") if line.function == "look" else RETEST[key] if good else "0"
        walker.bench.retest(key, answer)


def checks(walker: Walker, text: str) -> None:
    for check in walker.bench.rules.checks:
        walker.bench.read("ohms", check.probe.plus, check.probe.minus, "cold", text)


def refuse_checks(walker: Walker) -> None:
    for check in walker.bench.rules.checks:
        walker.bench.skip("ohms", check.probe.plus, check.probe.minus, "cold", "cannot reach")


def acknowledge(walker: Walker, keys: list[str]) -> None:
    for key in keys:
        walker.bench.acknowledge(key)


CALLS: dict[str, Callable[[Walker], object]] = {
    "acknowledge cold": lambda w: acknowledge(w, w.cold),
    "acknowledge live": lambda w: acknowledge(w, w.live),
    "complain": lambda w: w.bench.complain("hums", "hum or ripple"),
    "all looks sound": lambda w: w.bench.see("sound"),
    "look veto": lambda w: w.bench.look("board", "charred across barrier"),
    "look sound": lambda w: w.bench.look("board", "sound"),
    "bulk charged": lambda w: w.bench.read("volts_dc", "bulk", "pgnd", "cold", "310"),
    "bulk empty": lambda w: w.bench.read("volts_dc", "pgnd", "bulk", "cold", "-0.3"),
    "cold reading": lambda w: w.bench.read("ohms", "rect", "mains_l", "cold", "10"),
    "checks clear": lambda w: checks(w, "1M"),
    "checks short": lambda w: checks(w, "0.1"),
    "checks refused": refuse_checks,
    "skip bulk": lambda w: w.bench.skip("volts_dc", "bulk", "pgnd", "cold", "in a hurry"),
    "live reading": lambda w: w.bench.read("volts_dc", "out", "sgnd", "noload", "4.6"),
    "power": lambda w: w.bench.power(True),
    "unplug": lambda w: w.bench.power(False),
    "hunch": lambda w: w.bench.suspect("C5"),
    "note": lambda w: w.bench.note("nothing"),
    "fit": lambda w: w.bench.fit("R1", "high-voltage film 500 V"),
    "works": lambda w: w.bench.repaired("works"),
    "no cure": lambda w: w.bench.repaired("still faulty"),
    "retest cold": lambda w: retest(w, False, True),
    "retest cold fails": lambda w: retest(w, False, False),
    "retest live": lambda w: retest(w, True, True),
    "retest live fails": lambda w: retest(w, True, False),
    "close repaired": lambda w: w.bench.close("repaired"),
    "close": lambda w: w.bench.close("scrapped"),
    "returned": lambda w: w.bench.returned("dead again"),
}
"""Each thing that can be done to a job, on the charger with the readings of the stand-in."""

SELDOM = ("checks refused", "retest cold fails", "retest live fails", "close")
"""Calls that only the full walk takes: they multiply the states by nine, and ``test_gate`` has them all for the gates."""

FULL = os.environ.get("TRIAGE_WALK", "") == "full"
"""Set TRIAGE_WALK=full for every call in every state (minutes)."""


@dataclass(frozen=True)
class Record:
    """What stands in the log on one day, told from the entries alone."""

    acknowledged: frozenset[str] = frozenset()
    board: str = ""
    """Last look at the board: sound, veto or nothing."""
    bulk: float = math.nan
    """Last reading of the capacitor that nothing has charged since [V]."""
    powered: bool = False
    short: str = "open"
    fitted: bool = False
    """A new part is in the board."""
    repaired: bool = False
    lines: tuple[tuple[str, str], ...] = ()
    closed: bool = False
    day: str = ""


@dataclass
class Reader:
    """Reads logs of the charger."""

    live_lines: frozenset[str]
    checks: frozenset[frozenset[str]]
    said: Record = field(default_factory=Record)

    def read(self, entries: tuple[Entry, ...], today: str) -> Record:
        self.said = Record()
        taken_back = {entry.said["entry"] for entry in entries if entry.kind == "undo"}
        for number, entry in enumerate(entries, 1):
            if entry.kind == "undo":
                self._taken_back(entries[entry.said["entry"] - 1])
            elif number not in taken_back:
                self._at_day(entry.time[:10])
                self._standing(entry)
        self._at_day(today)
        return replace(self.said, day="")

    def _change(self, **new: object) -> None:
        self.said = replace(self.said, **new)  # type: ignore[arg-type]

    def _at_day(self, day: str) -> None:
        if self.said.day and self.said.day != day:
            self._change(acknowledged=frozenset(), bulk=math.nan, powered=False)
        self._change(day=day)

    def _powers(self, entry: Entry) -> bool:
        said = entry.said
        return bool(
            (entry.kind == "power" and said["on"])
            or (entry.kind == "reading" and said["condition"] != "cold")
            or (entry.kind == "retest" and said["check"] in self.live_lines)
        )

    def _taken_back(self, entry: Entry) -> None:
        """Nobody can take back that the board may have been powered, or that it was found charged."""
        if self._powers(entry):
            self._change(bulk=math.nan, powered=False)
        elif _is_bulk(entry) and self.said.bulk < 60.0:
            self._change(bulk=math.nan)

    def _standing(self, entry: Entry) -> None:
        said = entry.said
        if self._powers(entry) and not self.said.powered:
            self._change(powered=True, bulk=math.nan)
        if _is_bulk(entry):
            self._change(bulk=abs(said["value"]), powered=False)
        elif entry.kind == "power" and not said["on"]:
            self._change(powered=False)
        elif entry.kind == "acknowledge":
            self._change(acknowledged=self.said.acknowledged | {said["caution"]})
        elif entry.kind == "look":
            self._change(board=said["look"])
        elif entry.kind == "sign" and said["sign"] == "sound" and not said["ref"]:
            self._change(board=self.said.board or "sound")
        elif said.get("function") == "ohms" and frozenset((said["plus"], said["minus"])) in self.checks:
            self._short(entry)
        elif entry.kind == "fitted":
            self._change(fitted=True, repaired=True, short="open", lines=())
        elif entry.kind == "repaired" and said["result"] == "still faulty":
            self._change(repaired=False)
        elif entry.kind == "retest":
            done = {**dict(self.said.lines), said["check"]: said["counts_as"]}
            self._change(lines=tuple(sorted(done.items())))
        elif entry.kind == "closed":
            self._change(closed=True)
        elif entry.kind == "returned":
            self.said = Record(fitted=self.said.fitted, day=self.said.day)

    def _short(self, entry: Entry) -> None:
        """All checks are done at once in this walk; a value that was read counts more than a refusal."""
        if entry.kind == "reading":
            self._change(short="short" if entry.said["value"] < 1.0 else "clear")
        elif self.said.short == "open":
            self._change(short="refused")


def _is_bulk(entry: Entry) -> bool:
    said = entry.said
    if entry.kind != "reading" or said["condition"] != "cold" or said["function"] != "volts_dc":
        return False
    return {said["plus"], said["minus"]} == {"bulk", "pgnd"}


@dataclass(frozen=True)
class Law:
    """What safety asks of each call: design, safety; told from the record of the log."""

    cold: frozenset[str]
    live: frozenset[str]
    lines: frozenset[str]
    before_power: frozenset[str]

    def touch(self, now: Record) -> bool:
        return now.bulk < 60.0 and not now.powered

    def may_be_powered(self, now: Record, ruled_out: bool = False) -> bool:
        passed = {key for key, result in now.lines if result == "pass"}
        return (
            not now.closed
            and self.cold | self.live <= now.acknowledged
            and now.board == "sound"
            and (now.short in ("clear", "refused") or (now.short == "open" and ruled_out))
            and (not now.fitted or self.before_power <= passed)
        )

    def permits(self, call: str, now: Record) -> bool:
        if now.closed:
            return call in ("note", "returned")
        cautions = self.cold <= now.acknowledged
        passed = {key for key, result in now.lines if result == "pass"}
        at_the_board = cautions and now.board != "" and self.touch(now)
        may_power = self.may_be_powered(now) and (now.powered or self.touch(now))
        match call:
            case "power" | "live reading":
                return may_power
            case "retest live" | "retest live fails":
                return may_power and now.repaired
            case "retest cold" | "retest cold fails":
                return at_the_board and now.fitted
            case "fit":
                return at_the_board and now.board != "veto"
            case "no cure":
                return now.fitted
            case "all looks sound" | "look veto" | "look sound":
                return cautions
            case "skip bulk":
                return now.bulk < 60.0
            case "close repaired":
                done = self.lines <= passed and len(passed) == len(now.lines)
                looked = cautions and now.board == "sound"
                return looked and now.repaired and not now.powered and done
        return True


@dataclass(frozen=True)
class Step:
    """One call tried in one state."""

    entries: tuple[Entry, ...]
    day: int
    now: Record
    call: str
    taken: bool

    @property
    def entries_key(self) -> int:
        """One for each state."""
        return id(self.entries)


def walk(walker: Walker, reader: Reader, calls: dict[str, Callable[[Walker], object]] = CALLS) -> Iterator[Step]:
    """Every call in every state that can be reached, each also taken back, each also on the next day."""
    walker.put((), 0)
    seen = {(walker.key(), Record())}
    queue: deque[tuple[tuple[Entry, ...], int]] = deque([((), 0)])
    while queue:
        entries, day = queue.popleft()
        walker.put(entries, day)
        now = reader.read(entries, _today(walker))
        for name, call in calls.items():
            walker.put(entries, day)
            try:
                call(walker)
            except (GateError, EntryError):
                yield Step(entries, day, now, name, False)
                continue
            yield Step(entries, day, now, name, True)
            after = walker.bench.job.entries
            for following, days in ((after, day), (after, day + 1), (_undone(walker), day)):
                walker.put(following, days)
                state = (walker.key(), reader.read(following, _today(walker)))
                if state not in seen:
                    seen.add(state)
                    queue.append((following, days))


def _undone(walker: Walker) -> tuple[Entry, ...]:
    walker.bench.undo()
    return walker.bench.job.entries


def _today(walker: Walker) -> str:
    return walker.clock.now.strftime("%Y-%m-%d")


@pytest.fixture(scope="module")
def walker(tmp_path_factory: pytest.TempPathFactory) -> Walker:
    return Walker(tmp_path_factory.mktemp("walk") / "cube.toml")


@pytest.fixture(scope="module")
def law(walker: Walker) -> Law:
    start = walker.bench.rules.start
    return Law(start.cautions_cold, start.cautions_live, start.required, start.before_power)


@pytest.fixture(scope="module")
def steps(walker: Walker) -> list[Step]:
    """The walk on the board as it is before anything is computed: then no short is ruled out by its chance."""
    check = walker.bench.rules.checks[0].probe
    reader = Reader(walker.live_lines, frozenset({frozenset((check.plus, check.minus))}))
    calls = {name: call for name, call in CALLS.items() if FULL or name not in SELDOM}
    with pytest.MonkeyPatch.context() as patched:
        patched.setattr(picture, "view", lambda bench, message: None)
        patched.setattr(walker.bench, "answers", None)
        return list(walk(walker, reader, calls))


def test_every_call_is_taken_exactly_where_safety_permits_it(steps: list[Step], law: Law) -> None:
    wrong = [(step.call, step.taken, step.now) for step in steps if step.taken != law.permits(step.call, step.now)]
    assert wrong == []
    print(f"{len({step.entries_key for step in steps})} states, {len(steps)} calls tried")


def test_the_walk_reaches_what_it_is_about(steps: list[Step]) -> None:
    """It is not empty: each call is taken somewhere, and each gated one is refused somewhere."""
    outcomes: dict[str, set[bool]] = {}
    for step in steps:
        outcomes.setdefault(step.call, set()).add(step.taken)
    assert all(True in found for found in outcomes.values())
    gated = {"power", "live reading", "fit", "retest live", "retest cold", "close repaired", "skip bulk", "no cure"}
    assert all(False in outcomes[call] for call in gated)
    assert any(step.now.closed for step in steps) and any(step.now.powered for step in steps)


def test_what_is_asked_for_and_said_in_each_state_is_safe(steps: list[Step], walker: Walker, law: Law) -> None:
    """With everything computed: each state's suggestion, its word on touching and what it says it waits for."""
    asked = set()
    skipped = [probe for probe in PROBES if not probe.live]
    for step in {step.entries_key: step for step in steps}.values():
        walker.put(step.entries, step.day)
        asked.add(_asked_for(walker, step.now, law))
        time = walker.clock.now.strftime("%Y-%m-%dT%H:%M:%SZ")
        skips = tuple(make_entry("skip", time, **probe._asdict(), reason="cannot reach") for probe in skipped)
        if step.entries:
            walker.put(step.entries + skips, step.day)
            asked.add(_asked_for(walker, step.now, law))
    assert asked == {"nothing", "bulk", "cold", "live"}


def _asked_for(walker: Walker, now: Record, law: Law) -> str:
    """What sort of reading is suggested, once it has been held against the record of the log."""
    view, discharged = walker.bench.view(), law.touch(now)
    assert view.safe_to_touch.startswith("safe") == discharged
    chances = picture.fault_chances(walker.bench)
    ruled_out = sum(chances.get(fault, 0.0) for fault in walker.bench.rules.checks[0].faults) < RULED_OUT_BELOW
    ready = law.may_be_powered(now, ruled_out) and (now.powered or discharged)
    assert ready or view.waits_for
    if view.suggestion is None:
        return "nothing"
    one = view.suggestion
    assert not now.closed and law.cold <= now.acknowledged
    if one.condition != "cold":
        assert ready
        return "live"
    if one.function == "volts_dc":
        assert not now.powered or "unplug" in one.reason.lower()
        return "bulk"
    assert discharged
    return "cold"


@pytest.mark.parametrize("left_out", ["_after_undo", "_require_powered", "claims_repair"])
def test_the_walk_finds_a_gate_left_open(left_out: str, walker: Walker, law: Law, monkeypatch: pytest.MonkeyPatch) -> None:
    """It can fail: without any one of these the walk meets a call that safety does not permit."""
    open_gate = {
        "_after_undo": lambda rules, facts, *more: facts,
        "_require_powered": lambda facts, action: None,
        "claims_repair": lambda verdict: False,
    }
    monkeypatch.setattr(gates, left_out, open_gate[left_out])
    monkeypatch.setattr(picture, "view", lambda bench, message: None)
    monkeypatch.setattr(walker.bench, "answers", None)
    check = walker.bench.rules.checks[0].probe
    reader = Reader(walker.live_lines, frozenset({frozenset((check.plus, check.minus))}))
    found = (step for step in walk(walker, reader) if step.taken and not law.permits(step.call, step.now))
    assert next(found, None) is not None


def test_every_caution_look_check_and_line_of_the_real_board_counts(tmp_path: Path) -> None:
    """All done but one thing, for each thing there is: no power-up, and for the lines no closing as repaired."""
    bench = whole_bench(tmp_path / "cube.toml")
    start = bench.rules.start
    keys = [*start.cautions_cold, *start.cautions_live, *start.items, *(check.key for check in bench.rules.checks)]
    for left_out in keys:
        bench.job.entries = ()
        _get_ready(bench, left_out)
        with pytest.raises(GateError, match=left_out):
            bench.power(True)
        with pytest.raises(GateError, match=left_out):
            bench.read("volts_dc", "out", "sgnd", "noload", "5")
    lines = start.required | start.before_power
    for left_out in ("", *lines):
        bench.job.entries = ()
        _get_ready(bench, "")
        bench.fit("R1", "high-voltage film 500 V")
        for check in bench.rules.checks:
            bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "1M")
        cold_first = sorted(lines, key=lambda key: (key in start.live_lines, key))
        for key in cold_first:
            if key != left_out and (left_out not in start.before_power or key not in start.live_lines):
                line = next(line for line in bench.lines if line.key == key)
                bench.retest(key, "yes" if line.function == "look" else RETEST[key])
        bench.power(False)
        if left_out:
            with pytest.raises(GateError, match=left_out):
                bench.close("repaired")
        else:
            assert bench.close("repaired").stage == "closed"
    assert len(keys) > 20 and len(lines) > 5


def _get_ready(bench: Bench, left_out: str) -> None:
    """Everything that power asks for, but one thing."""
    for key in sorted(bench.rules.start.cautions_cold | bench.rules.start.cautions_live):
        if key != left_out:
            bench.acknowledge(key)
    if left_out not in bench.rules.start.cautions_cold:
        for item in sorted(bench.rules.start.items - {left_out}):
            bench.look(item, "sound")
    bench.read("volts_dc", "bulk", "pgnd", "cold", "0.3")
    for check in bench.rules.checks:
        if check.key != left_out:
            bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "1M")
