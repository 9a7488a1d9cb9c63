"""Time-domain solution of a powered circuit: one stretch of time, and the steady state over mains periods.

The compiled part is loaded on first use, because compiling costs seconds once per machine; nothing here is needed for the
first screen.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from triage.physics.netlist import CLOCK, CONTROLLER, Compiled

V_MIN, V_MAX, V_MEAN, V_RMS, I_MIN, I_MAX, I_MEAN, I_RMS, POWER = range(9)
"""Columns of the statistics: extremes, means and rms of voltage [V] and current [A], mean of their product [W]."""

SMALLEST_STEP = 1e-13
CHARGE_FLOOR = 2e-10
"""Charge on a capacitor that never matters [C]."""
SWITCHING_START = 1e-4
"""Statistics leave out the restart of a stretch [s]."""


@dataclass(frozen=True, slots=True)
class Quality:
    """How closely the solution is followed."""

    step_relative: float
    """Truncation error of a step, as a share of the size of each state [-]."""
    largest_step: float
    """[s]"""
    trusted_step: float
    """Step below which the error is not asked for [s]."""
    floors: tuple[float, float, float, float]
    """Factors on the errors that never matter: capacitors, windings, diodes, transistors."""
    newton_share: float = 0.045
    """Move of a blocked junction over its distance to the potential at which a linearisation still holds [-]."""
    newton_absolute: float = 5e-4
    """Error of a conducting junction at which Newton's method ends [V]."""


FINE = Quality(0.003, 1e-6, 1e-12, (1.0, 1.0, 1.0, 1.0))
"""Within 1 % of a solution of three times tighter tolerance, the loss of the switch within 3 %; for stresses."""
QUICK = Quality(0.01, 1e-6, 1e-10, (2.0, 2.0, 5.0, 3.0), 0.09, 4e-3)
"""Two thirds of the time; outputs, collector and clamp within 0.5 % of FINE, the loss of the switch within 3 %, frequencies
within 1.5 %; for readings under faults."""


@dataclass(slots=True)
class State:
    """Voltages of nodes and capacitors [V] and winding currents [A] at one time."""

    nodes: np.ndarray
    capacitors: np.ndarray
    windings: np.ndarray

    def copy(self) -> "State":
        """An independent copy."""
        return State(self.nodes.copy(), self.capacitors.copy(), self.windings.copy())


@dataclass(frozen=True, slots=True)
class Stretch:
    """What a stretch of time showed."""

    statistics: np.ndarray
    """(ports, 9): see the column numbers of this module."""
    frequency: float
    """Excursions of the watched switch per second [Hz]."""
    steps: int
    trace: np.ndarray
    """(rows, 1 + nodes): time and the voltages of the watched nodes."""
    reached: float = 0.0
    """Time at the end [s]."""


class NoConvergence(ArithmeticError):
    """The time-domain solution broke off; carries the time it had reached [s]."""


@dataclass(frozen=True, slots=True)
class Watch:
    """What to look at besides the ports: the switch for the frequency count, and nodes to trace."""

    switch: tuple[int, int, int, int] = (-1, -1, -1, -1)
    """Switch node, its reference, bulk node, its reference."""
    low: float = 0.78
    """An excursion of the switch ends below this share of the bulk voltage [-]."""
    high: float = 1.03
    """It begins above this share of the bulk voltage [-]."""
    nodes: tuple[int, ...] = ()
    start: float = 0.0
    interval: float = 1e-6
    rows: int = 0


def initial_state(compiled: Compiled, capacitor_voltages: Mapping[str, float] | None = None) -> State:
    """State of rest with the given capacitors charged [V]."""
    voltages = compiled.capacitor[4].copy()
    for name, volts in (capacitor_voltages or {}).items():
        voltages[compiled.names["capacitor"].index(name)] = volts
    return State(np.zeros(compiled.size), voltages, np.zeros(len(compiled.names["winding"])))


def rest_state(compiled: Compiled) -> State:
    """State at direct current with the sources at their first value: what a board with nothing moving on it would show."""
    from triage.physics.network_solver import rest_point

    found, nodes, windings = rest_point(compiled.nonzeros, compiled.program, compiled.resistor, compiled.winding,
                                        compiled.transfer, compiled.diode, compiled.bipolar, compiled.source)
    if not found:
        raise NoConvergence(0.0)
    ends = compiled.capacitor[0]
    padded = np.append(nodes, 0.0)
    return State(nodes, padded[ends[:, 0]] - padded[ends[:, 1]], windings)


def run_stretch(compiled: Compiled, state: State, start: float, stop: float, watch: Watch | None = None,
                quality: Quality = FINE, skip: float | None = None, wake: float = math.inf) -> Stretch:
    """Integrate from ``start`` to ``stop`` [s]; ``state`` is moved to the end point.

    The statistics leave out the first ``skip`` [s], the restart of a stretch that does not go on from another; by default
    SWITCHING_START or a tenth of the stretch. From the time ``wake`` [s] on it ends early where a locked-out controller wakes.

    Raises NoConvergence when no step small enough is found.
    """
    from triage.physics.transient_steps import memory, run

    watch = watch or Watch()
    work = memory(compiled, state.nodes, _floors(compiled, quality.floors))
    trace = np.zeros((watch.rows, 1 + len(watch.nodes)))
    skip = min(SWITCHING_START, 0.1 * (stop - start)) if skip is None else skip
    status, steps, reached, swings, used = run(
        work, compiled.program, compiled.resistor, compiled.transfer, compiled.capacitor, compiled.winding,
        compiled.diode, compiled.bipolar, compiled.behaviour, compiled.source, compiled.port, state.capacitors, state.windings,
        np.array([start, stop, start + skip, quality.largest_step, SMALLEST_STEP, quality.trusted_step, wake]),
        (quality.newton_share, quality.newton_absolute, quality.step_relative, watch.low, watch.high),
        np.array(watch.switch, dtype=np.int64),
        (watch.start, watch.interval, np.array(watch.nodes, dtype=np.int64), trace))
    if status != 0:
        raise NoConvergence(reached)
    move_clocks(compiled, start - reached)
    span = reached - start - skip
    stats = np.ascontiguousarray(work.stats.T)
    stats[:, [V_MEAN, I_MEAN, POWER]] /= span
    stats[:, [V_RMS, I_RMS]] = np.sqrt(np.maximum(stats[:, [V_RMS, I_RMS]] / span, 0.0))
    return Stretch(stats, swings / span, steps, trace[:used], reached)


def move_clocks(compiled: Compiled, time: float) -> None:
    """Move what controllers remember as times by ``time`` [s]; after a stretch they count from its start again."""
    compiled.behaviour[4][:, CLOCK] += time * (compiled.behaviour[2] == CONTROLLER)


def joined(first: Stretch, first_time: float, second: Stretch, second_time: float) -> Stretch:
    """Two stretches, of so many seconds each, as one."""
    share = first_time / (first_time + second_time)
    a, b = first.statistics, second.statistics
    both = share * a + (1.0 - share) * b
    both[:, [V_RMS, I_RMS]] = np.sqrt(share * a[:, [V_RMS, I_RMS]] ** 2 + (1.0 - share) * b[:, [V_RMS, I_RMS]] ** 2)
    both[:, [V_MIN, I_MIN]] = np.minimum(a, b)[:, [V_MIN, I_MIN]]
    both[:, [V_MAX, I_MAX]] = np.maximum(a, b)[:, [V_MAX, I_MAX]]
    frequency = share * first.frequency + (1.0 - share) * second.frequency
    return Stretch(both, frequency, first.steps + second.steps, second.trace, second.reached)


def wake(compiled: Compiled) -> None:
    """Let a run at time 0 begin with its controllers awake, as in operation."""
    kinds, states = compiled.behaviour[2], compiled.behaviour[4]
    states[kinds >= CONTROLLER, 0] = 1.0


def _floors(compiled: Compiled, factors: tuple[float, float, float, float]) -> np.ndarray:
    """Deviation that never matters, per state: capacitor voltage [V], winding current [A], charge of junctions [C].

    Windings on one core count by their energy: the largest inductance has the smallest floor.
    """
    own = np.diag(compiled.winding[2])
    return np.concatenate([
        factors[0] * (5e-3 + CHARGE_FLOOR / compiled.capacitor[2]),
        factors[1] * 1e-4 * np.sqrt(own.max(initial=0.0) / own),
        factors[2] * (2e-12 + compiled.diode[2][:, 2] * 0.2),
        np.full(2 * len(compiled.names["bipolar"]), factors[3] * 1e-11)])
