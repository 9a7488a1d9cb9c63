"""The steady state of a powered board: one mains period after the other until it repeats.

Charges that nothing refreshes are set to zero, a geometric drift of the output is followed to where it ends. Faults in the
starting path are solved from rest as well: when nothing swings there, the adapter does not start, however well it would run.
"""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from triage.board.circuit import NOMINAL, Draw, circuit, output_ground
from triage.board.fault import Fault
from triage.board.part import Board, Part
from triage.families.family import Family
from triage.physics.netlist import CONTROLLER, OFF_TIME, Compiled, Netlist, compile_netlist
from triage.physics.transient import (
    POWER,
    SWITCHING_START,
    V_MAX,
    V_MIN,
    Quality,
    State,
    Stretch,
    Watch,
    initial_state,
    joined,
    move_clocks,
    rest_state,
    run_stretch,
    wake,
)

MOST_PERIODS = 8
LEAST_SLOW_PERIODS, MOST_SLOW_PERIODS, SLOW_SHARE = 50, 150, 0.02
"""Periods, and share of the limits below, in a family in which nothing switches: a period costs little there, and the
transformer's magnetising current takes many to settle."""
WAKE_PERIODS, HICCUP_PERIODS, LEAST_HICCUP_PERIODS = 100, 25, 5
"""Most mains periods over which a locked-out controller is waited for: two seconds, longer than a user waits. Then the most for
the averages; those end where it wakes again, after at least the third number."""
SETTLED_OUTPUT = 0.012
"""Change of the output over a period that counts as none, as a share of its rated value [-]."""
SETTLED_CHARGE = 0.04
"""Change of an electrolytic's voltage over a period that counts as none [-]."""
BALANCE_SHARE, BALANCE_WATTS = 0.03, 5e-3
"""Power that goes into the bulk capacitor from period to period and counts as none: share of the input power [-], and [W]."""
MOST_CYCLES, CYCLE_SHARE = 4, 0.03
"""Most hiccups that are followed until the output at waking repeats, within this share of its rated value [-]."""
MOST_RESUMED = 2
"""Times a controller may go on without a pause after all."""
NOTHING_SWITCHES = 1e-4
"""Largest step on a board whose controller is dead [s]."""
MOVED_SHARE = 0.01
"""Swing of the output over a first period, as a share of its rated value, that may be the way to another state [-]."""
LEAST_WATTS, FED_SHARE = 2e-3, 0.2
"""A bulk capacitor is not fed where the mains gives less than this [W], or this share of what it loses [-]: a bleeder's."""
WELL_AWAKE = 0.99
"""A supply between lockout and this share of the waking voltage is that of a controller in operation [-]."""
QUIET_FREQUENCY = 60.0
"""Below this nothing switches [Hz]."""


def output_parts(board: Board, family: Family) -> tuple[Part, ...]:
    """The electrolytics that hold the output voltage."""
    return tuple(part for part in board.parts if part.role in family.output_roles and part.kind == "electrolytic"
                 and part.pins["plus"] in _output_nodes(board))


def _output_nodes(board: Board) -> tuple[str, ...]:
    """The output and the nodes that a cable and then a filter coil join to it."""
    nodes: tuple[str, ...] = ("out",)
    for kind, pins in (("cable", ("a_in", "a_out")), ("connector", ("a_in", "a_out")), ("inductor", ("a", "b"))):
        for part in board.parts:
            ends = [part.pins[pin] for pin in pins] if part.kind == kind else []
            if any(node in nodes for node in ends):
                nodes = (*nodes, *ends)
    return nodes


def rated_start(board: Board, family: Family) -> dict[str, float]:
    """Capacitor voltages to begin a sound board with [V]: outputs at their rated voltage, the supply of a controller awake."""
    start = {part.ref: board.label.output_voltage for part in output_parts(board, family)}
    supply, controller = board.by_role(family.supply_role), _controller(board)
    if supply is not None and controller is not None:
        start[supply.ref] = 0.997 * controller.value["start_voltage"]
    return start


@dataclass(frozen=True, slots=True)
class Settled:
    """The last mains period of a run, and what it started from."""

    stretch: Stretch
    rows: Mapping[tuple[str, str], int]
    """(ref or node, suffix) -> row of the statistics."""
    capacitors: Mapping[str, float]
    """Capacitor voltages at the end [V], to start a similar run from."""
    periods: int
    started: bool

    def row(self, ref: str, suffix: str = "") -> np.ndarray:
        """Statistics of one port, shape (9,)."""
        result: np.ndarray = self.stretch.statistics[self.rows[ref, suffix]]
        return result


@dataclass(frozen=True, slots=True)
class Traced:
    """What of the last mains period is wanted as a waveform."""

    nodes: tuple[str, ...]
    rows: int
    """Most points of a waveform, evenly over the period."""


@dataclass(slots=True)
class _Run:
    """One board being settled."""

    board: Board
    family: Family
    net: Netlist
    compiled: Compiled
    watch: Watch
    quality: Quality
    state: State
    electrolytics: Mapping[str, int]
    """Ref -> index among the capacitors."""
    zeroed: int = 0
    unfed_done: bool = False
    phase: float = SWITCHING_START
    """Where in the mains period the next period begins [s]."""
    restarted: bool = True
    """True when the state was changed by hand: the next period begins at the crest and leaves out the restart."""

    def period(self) -> Stretch:
        """The next mains period. Its statistics cover a whole period, from a tenth of a millisecond after the crest to the next
        such place, or from where a hiccup left off."""
        begin, period = self.phase, 1.0 / self.board.mains.frequency
        start, skip = (0.0, begin) if self.restarted else (begin, 0.0)
        self.restarted = False
        stretch = run_stretch(self.compiled, self.state, start, begin + period, self.watch, self.quality, skip)
        move_clocks(self.compiled, begin - start)
        return stretch

    def hiccup(self) -> Stretch:
        """From one waking of a locked-out controller to another some mains periods later, or as long as it is worth waiting.

        Begun with the output empty, as after switching on, and followed until the output at the waking repeats, for a light
        load empties it little in a pause; where it does not repeat, all that was followed after the first, that of switching on.
        """
        period, nominal = 1.0 / self.board.mains.frequency, self.board.label.output_voltage
        held = {part.ref for role in (self.family.bulk_role, self.family.supply_role) if (part := self.board.by_role(role))}
        self.state.capacitors[[k for ref, k in self.electrolytics.items() if ref not in held]] = 0.0
        self._follow(WAKE_PERIODS * period, 0.0)
        before = _resting_output(self)
        cycle, _ = self._cycle()
        seen, whole = cycle, 0.0
        for _ in range(1, MOST_CYCLES):
            if abs(_resting_output(self) - before) < CYCLE_SHARE * nominal:
                return cycle
            before = _resting_output(self)
            cycle, time = self._cycle()
            seen, whole = joined(seen, whole, cycle, time) if whole else cycle, whole + time
        return seen

    def _cycle(self) -> tuple[Stretch, float]:
        """From a waking at least some periods on, and to the next waking where it sleeps then; and how long it took [s].
        A latched controller sleeps first."""
        period = 1.0 / self.board.mains.frequency
        least, most = LEAST_HICCUP_PERIODS * period, HICCUP_PERIODS * period
        cycle, time = self._follow(least, math.inf)
        while time < most and (_latched(self) or _asleep(self)):
            asleep = _asleep(self)
            more, taken = self._follow(most - time if asleep else period, 0.0 if asleep else math.inf)
            cycle, time = joined(cycle, time, more, taken), time + taken
            if asleep:
                break
        return cycle, time

    def _follow(self, most: float, wake_after: float) -> tuple[Stretch, float]:
        """A stretch of at most ``most`` [s], ended by waking after ``wake_after`` [s]; and how long it took [s]."""
        start = self.phase
        stretch = run_stretch(self.compiled, self.state, start, start + most, self.watch, self.quality, 0.0,
                              wake=start + wake_after)
        self.phase = SWITCHING_START + (stretch.reached - SWITCHING_START) % (1.0 / self.board.mains.frequency)
        move_clocks(self.compiled, self.phase - start)
        self.restarted = False
        return stretch, stretch.reached - start


def settle(board: Board, family: Family, faults: Sequence[Fault] = (), *, mains: float, load: float, quality: Quality,
           start: Mapping[str, float] | None = None, draw: Draw = NOMINAL, traced: Traced | None = None) -> Settled:
    """Steady state at ``mains`` [V rms] with ``load`` [ohm], begun from the capacitor voltages ``start`` [V].

    ``traced``: nodes whose voltages over the last mains period are wanted in ``stretch.trace``.

    Raises NoConvergence of the time-domain solution when it breaks off.
    """
    if family.largest_step:
        quality = replace(quality, largest_step=family.largest_step)
    if family.step_relative:
        quality = replace(quality, step_relative=min(quality.step_relative, family.step_relative))
    net = circuit(board, faults, draw=draw, mains=mains, load=load)
    compiled = compile_netlist(net)
    rows = {(port.ref, port.suffix): index for index, port in enumerate(net.ports)}
    start_refs = {part.ref for part in board.parts if part.role in family.start_roles}
    if any(fault.ref in start_refs for fault in faults):
        run = _begin(board, family, net, compiled, quality, mains, {}, traced)
        run.state = rest_state(compiled)
        stretch = run.period()
        if stretch.frequency == 0.0 and _output(run) < 0.1 * board.label.output_voltage:
            return Settled(stretch, rows, _voltages(run), 1, False)
    begin = {} if family.starts_empty else start or {}
    controlled = _controlled(board, family)
    if controlled and not np.any(compiled.behaviour[2] >= CONTROLLER):
        quality = replace(quality, largest_step=NOTHING_SWITCHES)
    running = controlled and _running(board, family, begin)
    awake = running and _wakes(board, family, net, compiled, quality, mains, begin)
    run = _begin(board, family, net, compiled, quality, mains, begin if awake or not running else {}, traced)
    if awake:
        wake(compiled)
    stretch, periods = _repeat_controlled(run, rows) if controlled else _repeat(run, rows)
    return Settled(stretch, rows, _voltages(run), periods, True)


def _begin(board: Board, family: Family, net: Netlist, compiled: Compiled, quality: Quality, mains: float,
           start: Mapping[str, float], traced: Traced | None) -> _Run:
    """A run at the crest of the mains: the bulk capacitor charged, the others as given, else empty."""
    bulk = board.by_role(family.bulk_role)
    crest = mains * 2.0**0.5
    known = {name: volts for name, volts in start.items() if name in compiled.names["capacitor"]}
    if bulk is not None:
        known[bulk.ref] = min(known.get(bulk.ref, 0.985 * crest), crest)
    electrolytics = {part.ref: compiled.names["capacitor"].index(part.ref) for part in board.parts
                     if part.kind == "electrolytic"}
    watch = _watch(board, family, compiled)
    if traced is not None:
        nodes = tuple(map(compiled.index, traced.nodes))
        watch = replace(watch, nodes=nodes, start=SWITCHING_START, interval=1.0 / board.mains.frequency / traced.rows,
                        rows=traced.rows)
    return _Run(board, family, net, compiled, watch, quality, initial_state(compiled, known), electrolytics)


def _running(board: Board, family: Family, start: Mapping[str, float]) -> bool:
    """True for a start in operation, the controller's supply between lockout and waking."""
    supply, controller = board.by_role(family.supply_role), _controller(board)
    if supply is None or controller is None:
        return False
    return controller.value["stop_voltage"] < start.get(supply.ref, 0.0) < WELL_AWAKE * controller.value["start_voltage"]


def _wakes(board: Board, family: Family, net: Netlist, compiled: Compiled, quality: Quality, mains: float,
           start: Mapping[str, float]) -> bool:
    """True where the controller would wake as well if its supply were at its lockout."""
    supply, controller = board.by_role(family.supply_role), _controller(board)
    if supply is None or controller is None:
        return False
    lockout = {**start, supply.ref: controller.value["stop_voltage"]}
    run = _begin(board, family, net, compiled, quality, mains, lockout, None)
    most = WAKE_PERIODS / board.mains.frequency
    asleep = compiled.behaviour[4].copy()
    reached = run_stretch(compiled, run.state, 0.0, most, run.watch, quality, 0.0, wake=0.0).reached
    compiled.behaviour[4][:] = asleep
    return reached < most


def _controlled(board: Board, family: Family) -> bool:
    """True for a board whose controller lives on a supply of its own."""
    return _controller(board) is not None and board.by_role(family.supply_role) is not None


def _controller(board: Board) -> Part | None:
    """The part that wakes and sleeps by its supply voltage."""
    return next((part for part in board.parts if "start_voltage" in part.value), None)


def _watch(board: Board, family: Family, compiled: Compiled) -> Watch:
    """The switch and the bulk voltage for the count of swings."""
    switch, bulk = board.by_role(family.switch_role), board.by_role(family.bulk_role)
    if switch is None or bulk is None:
        return Watch()
    drain = compiled.index(switch.pins[swinging_pin(switch, family)])
    ground = compiled.index(board.ground["primary"])
    return Watch((drain, ground, compiled.index(bulk.pins["plus"]), ground), family.swing_low, family.swing_high)


def swinging_pin(switch: Part, family: Family) -> str:
    """Pin of the switch whose swings are the switching frequency."""
    return family.swing_pin or ("collector" if "collector" in switch.pins else "drain")


def _voltages(run: _Run) -> dict[str, float]:
    """Capacitor voltages by name [V]."""
    return dict(zip(run.compiled.names["capacitor"], map(float, run.state.capacitors), strict=True))


def _output(run: _Run) -> float:
    """Output voltage now [V]."""
    plus, minus = run.compiled.index("out"), run.compiled.index(output_ground(run.board))
    return float((run.state.nodes[plus] if plus >= 0 else 0.0) - (run.state.nodes[minus] if minus >= 0 else 0.0))


def _repeat(run: _Run, rows: Mapping[tuple[str, str], int]) -> tuple[Stretch, int]:
    """Periods until the output repeats; returns the last one and how many there were."""
    last, output = None, _resting_output(run)
    limit, slow = _output_limit(run), run.family.slow
    most, close = (MOST_SLOW_PERIODS, SLOW_SHARE) if slow else (MOST_PERIODS, 1.0)
    number = 0
    while number < most:
        number += 1
        before = run.state.capacitors.copy()
        stretch = run.period()
        change, output = _output(run) - output, _output(run)
        if _empty_unfed(run, stretch, rows, before):
            run.restarted = True
            last, output = None, _resting_output(run)
            continue
        highest = stretch.statistics[rows["out", "node"], V_MAX]
        still = _still(run, stretch, rows, before, change, close)
        if (still and not (slow and number < LEAST_SLOW_PERIODS)) or highest > 1.8 * limit:
            break
        last = None if slow else _follow_drift(run, change, last)
    if _asleep(run):
        return run.hiccup(), number + 1
    return stretch, number


def _repeat_controlled(run: _Run, rows: Mapping[tuple[str, str], int]) -> tuple[Stretch, int]:
    """As _repeat where a controller may lock out: then the last stretch goes from one waking to another."""
    nominal, number, resumed, output = run.board.label.output_voltage, 0, 0, _resting_output(run)
    limit = _output_limit(run)
    while number < MOST_PERIODS + resumed:
        number += 1
        before, restarted = run.state.capacitors.copy(), run.restarted
        stretch = run.period()
        change, output = _output(run) - output, _output(run)
        if _empty_unfed(run, stretch, rows, before):
            run.restarted, run.phase = True, SWITCHING_START
            continue
        if _slept(run, stretch, rows):
            stretch = run.hiccup()
            if resumed == MOST_RESUMED or _slept(run, stretch, rows):
                return stretch, number
            resumed, output = resumed + 1, _output(run)
            continue
        row = stretch.statistics[rows["out", "node"]]
        moved = restarted and row[V_MAX] - row[V_MIN] > MOVED_SHARE * nominal
        if row[V_MAX] > 1.8 * limit or (_still(run, stretch, rows, before, change, 1.0) and not moved):
            break
    return stretch, number


def _slept(run: _Run, stretch: Stretch, rows: Mapping[tuple[str, str], int]) -> bool:
    """True when the controller is dead or locked out, or its supply was at the lockout."""
    supply, controller = run.board.by_role(run.family.supply_role), _controller(run.board)
    if supply is None or controller is None:
        return False
    lowest = stretch.statistics[rows[supply.ref, ""], V_MIN]
    return _asleep(run) or not np.any(run.compiled.behaviour[2] >= CONTROLLER) or bool(lowest < controller.value["stop_voltage"])


def _output_limit(run: _Run) -> float:
    """Lowest voltage rating of what holds the output [V]."""
    return min((part.ratings["voltage"] for part in output_parts(run.board, run.family) if "voltage" in part.ratings),
               default=1e9)


def _still(run: _Run, stretch: Stretch, rows: Mapping[tuple[str, str], int], before: np.ndarray, change: float,
           close: float) -> bool:
    """True when output, electrolytics and the bulk's energy repeat, within ``close`` times the limits."""
    drift = max((abs(run.state.capacitors[k] - before[k]) / max(abs(run.state.capacitors[k]), 0.05 * _rated(run, ref))
                 for ref, k in run.electrolytics.items()), default=0.0)
    return (abs(change) < close * SETTLED_OUTPUT * run.board.label.output_voltage and drift < close * SETTLED_CHARGE
            and _balanced(run, stretch, rows, before))


def _balanced(run: _Run, stretch: Stretch, rows: Mapping[tuple[str, str], int], before: np.ndarray) -> bool:
    """True when what the mains gave over a period was used in it, and did not go into the bulk capacitor or come out of it."""
    bulk = run.board.by_role(run.family.bulk_role)
    index = run.electrolytics.get(bulk.ref) if bulk else None
    if index is None:
        return True
    power = abs(stretch.statistics[rows["ADAPTER", ""], POWER])
    return bool(abs(_stored(run, index, before)) < BALANCE_SHARE * power + BALANCE_WATTS)


def _stored(run: _Run, index: int, before: np.ndarray) -> float:
    """Mean power that went into a capacitor over the last mains period [W]."""
    farad, now, then = run.compiled.capacitor[2][index], run.state.capacitors[index], before[index]
    return float(0.5 * farad * (now * now - then * then) * run.board.mains.frequency)


def _asleep(run: _Run) -> bool:
    """True when a controller is locked out or rests: it will try again later, or never."""
    kinds, states = run.compiled.behaviour[2], run.compiled.behaviour[4]
    return bool(np.any((kinds >= CONTROLLER) & (states[:, 0] < 0.5) | (kinds == OFF_TIME) & (states[:, 2] > 0.5)))


def _latched(run: _Run) -> bool:
    """True when a controller is awake but latched off: it sinks to its lockout."""
    kinds, states = run.compiled.behaviour[2], run.compiled.behaviour[4]
    return bool(np.any((kinds == CONTROLLER) & (states[:, 0] > 0.5) & (states[:, 2] > 0.5)))


def _resting_output(run: _Run) -> float:
    """Voltage of the output capacitor [V], the output voltage of a board at rest."""
    parts = output_parts(run.board, run.family)
    return float(run.state.capacitors[run.electrolytics[parts[0].ref]]) if parts else 0.0


def _rated(run: _Run, ref: str) -> float:
    return run.board.part(ref).ratings.get("voltage", 10.0)


def _empty_unfed(run: _Run, stretch: Stretch, rows: Mapping[tuple[str, str], int], before: np.ndarray) -> bool:
    """Set charges to zero that nothing refreshes; True when the period must be run again."""
    caps, power = run.state.capacitors, float(stretch.statistics[rows["ADAPTER", ""], 8])
    bulk = run.board.by_role(run.family.bulk_role)
    index = run.electrolytics.get(bulk.ref) if bulk else None
    drawn = -_stored(run, index, before) if index is not None else 0.0
    dead = power < max(LEAST_WATTS, FED_SHARE * drawn)
    if run.zeroed < 2 and dead and index is not None and 1.0 < caps[index] < 0.9995 * before[index]:
        run.state = initial_state(run.compiled)
        run.zeroed += 1
        return True
    if _controlled(run.board, run.family):
        return False  # a pause is no end: the controller wakes and feeds what falls now
    falling = [k for ref, k in run.electrolytics.items() if k != index
               and _only_falls(run, stretch, rows, ref, before)]
    if falling and not run.unfed_done:
        run.unfed_done = True
        caps[falling] = 0.0
        return True
    if stretch.frequency < QUIET_FREQUENCY and run.zeroed < 2:
        idle = [k for k in range(len(caps)) if k != index and 1e-2 < abs(caps[k]) < abs(before[k]) * (1 - 2e-4)]
        if idle:
            caps[idle] = 0.0
            run.zeroed += 1
            return True
    return False


def _only_falls(run: _Run, stretch: Stretch, rows: Mapping[tuple[str, str], int], ref: str, before: np.ndarray) -> bool:
    """True for an electrolytic whose voltage was never above its start and ends well below it."""
    k = run.electrolytics[ref]
    start, end = float(before[k]), float(run.state.capacitors[k])
    highest = float(stretch.statistics[rows[ref, ""], V_MAX])
    return 0.02 * run.board.label.output_voltage < end < 0.985 * start and highest <= start + 1e-3


def _follow_drift(run: _Run, change: float, last: float | None) -> float | None:
    """Move the output capacitor towards the end of a geometric drift; returns the change to compare the next one with."""
    nominal = run.board.label.output_voltage
    parts = output_parts(run.board, run.family)
    if last is not None and change * last > 0.0 and abs(change) > 0.01 * nominal and 0.1 < change / last < 0.95 and parts:
        ratio = change / last
        for part in parts:
            k = run.electrolytics[part.ref]
            run.restarted = True
            run.state.capacitors[k] = max(run.state.capacitors[k] + 0.9 * change * ratio / (1.0 - ratio), 0.0)
        return None
    return change
