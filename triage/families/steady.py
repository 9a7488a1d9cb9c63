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
    restarted: bool = True
    """True when the state was changed by hand: the next period begins at the crest and leaves out the restart."""

    def period(self) -> Stretch:
        """The next mains period. Its statistics cover a whole period, a tenth of a millisecond after the crest to the next."""
        begin, period = SWITCHING_START, 1.0 / self.board.mains.frequency
        start, skip = (0.0, begin) if self.restarted else (begin, 0.0)
        self.restarted = False
        return run_stretch(self.compiled, self.state, start, begin + period, self.watch, self.quality, skip)

    def hiccup(self) -> Stretch:
        """From one waking of a locked-out controller to another some mains periods later, or as long as it is worth waiting."""
        period = 1.0 / self.board.mains.frequency
        least = LEAST_HICCUP_PERIODS * period
        _, start = self._follow(SWITCHING_START, WAKE_PERIODS * period, 0.0)
        first, start = self._follow(start, least, math.inf)
        rest, _ = self._follow(start, HICCUP_PERIODS * period - least if _asleep(self) else least, 0.0)
        return joined(first, least, rest, rest.reached - start)

    def _follow(self, start: float, most: float, wake_after: float) -> tuple[Stretch, float]:
        """A stretch of at most ``most`` [s], ended by waking after ``wake_after`` [s]; and where the next one starts [s]."""
        stretch = run_stretch(self.compiled, self.state, start, start + most, self.watch, self.quality, 0.0,
                              wake=start + wake_after)
        then = SWITCHING_START + (stretch.reached - SWITCHING_START) % (1.0 / self.board.mains.frequency)
        move_clocks(self.compiled, then - start)
        return stretch, then


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
    awake = _wakes(board, family, net, compiled, quality, mains, begin)
    run = _begin(board, family, net, compiled, quality, mains, begin, traced)
    if awake:
        wake(compiled)
    stretch, periods = _repeat(run, rows)
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


def _wakes(board: Board, family: Family, net: Netlist, compiled: Compiled, quality: Quality, mains: float,
           start: Mapping[str, float]) -> bool:
    """True for a start in operation from which the controller would wake as well if its supply were at its lockout."""
    supply, controller = board.by_role(family.supply_role), _controller(board)
    volts = controller.value if controller is not None else {}
    if supply is None or not volts:
        return False
    if not volts["stop_voltage"] < start.get(supply.ref, 0.0) < WELL_AWAKE * volts["start_voltage"]:
        return False
    run = _begin(board, family, net, compiled, quality, mains, {**start, supply.ref: volts["stop_voltage"]}, None)
    most = WAKE_PERIODS / board.mains.frequency
    asleep = compiled.behaviour[4].copy()
    reached = run_stretch(compiled, run.state, 0.0, most, run.watch, quality, 0.0, wake=0.0).reached
    compiled.behaviour[4][:] = asleep
    return reached < most


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
    nominal, last, output = run.board.label.output_voltage, None, _resting_output(run)
    limit = min((part.ratings["voltage"] for part in output_parts(run.board, run.family) if "voltage" in part.ratings),
                default=1e9)
    slow = run.family.slow
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
        drift = max((abs(run.state.capacitors[k] - before[k]) / max(abs(run.state.capacitors[k]), 0.05 * _rated(run, ref))
                     for ref, k in run.electrolytics.items()), default=0.0)
        highest = stretch.statistics[rows["out", "node"], V_MAX]
        still = (abs(change) < close * SETTLED_OUTPUT * nominal and drift < close * SETTLED_CHARGE
                 and _balanced(run, stretch, rows, before))
        if (still and not (slow and number < LEAST_SLOW_PERIODS)) or highest > 1.8 * limit:
            break
        last = None if slow else _follow_drift(run, change, last)
    if _asleep(run):
        return run.hiccup(), number + 1
    return stretch, number


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
    falling = [k for ref, k in run.electrolytics.items() if k != index and ref != _awaited(run)
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


def _awaited(run: _Run) -> str:
    """Ref of a controller's supply capacitor: it sinks to its level from above, and unfed it comes to the lockout by itself."""
    supply = run.board.by_role(run.family.supply_role)
    return supply.ref if supply is not None and _controller(run.board) is not None else ""


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
