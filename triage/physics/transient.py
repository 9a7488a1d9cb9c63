"""Time-domain solution of a powered circuit: one stretch of time, and the steady state over mains periods.

The compiled part is loaded on first use, because compiling costs seconds once per machine; nothing here is needed for the
first screen.
"""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from triage.physics.netlist import Compiled

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
    """Deviation of a step from its extrapolation, as a share of the size of each state [-]."""
    largest_step: float
    """[s]"""
    trusted_step: float
    """Step below which the deviation is not asked for [s]."""
    floors: tuple[float, float, float, float]
    """Factors on the deviations that never matter: capacitors, windings, diodes, transistors."""
    newton_relative: float = 5e-4
    newton_absolute: float = 5e-4
    """[V]"""


FINE = Quality(0.02, 1e-6, 1e-12, (1.0, 1.0, 1.0, 1.0))
"""Agrees with a solution of ten times tighter tolerance within 1 %; for stresses."""
QUICK = Quality(0.05, 1e-6, 1e-10, (2.0, 10.0, 20.0, 10.0), 2e-3, 4e-3)
"""A third less time; clamp voltages within 5 %, outputs and mains figures within 1 %; for readings under faults."""


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


class NoConvergence(ArithmeticError):
    """The time-domain solution broke off; carries the time it had reached [s]."""


@dataclass(frozen=True, slots=True)
class Watch:
    """What to look at besides the ports: the switch for the frequency count, and nodes to trace."""

    switch: tuple[int, int, int, int] = (-1, -1, -1, -1)
    """Switch node, its reference, bulk node, its reference."""
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
                quality: Quality = FINE) -> Stretch:
    """Integrate from ``start`` to ``stop`` [s]; ``state`` is moved to the end point.

    Raises NoConvergence when no step small enough is found.
    """
    from triage.physics.transient_steps import run

    watch = watch or Watch()
    floors = tuple(f * factor for f, factor in zip(_floors(compiled), quality.floors, strict=True))
    trace = np.zeros((watch.rows, 1 + len(watch.nodes)))
    skip = min(SWITCHING_START, 0.1 * (stop - start))
    status, steps, reached, stats, swings, used = run(
        compiled.program, compiled.nonzeros, compiled.resistor, compiled.capacitor, compiled.winding, compiled.diode,
        compiled.bipolar, compiled.source, compiled.port, (state.nodes, state.capacitors, state.windings),
        np.array([start, stop, start + skip, quality.largest_step, SMALLEST_STEP, quality.trusted_step]),
        (quality.newton_relative, quality.newton_absolute, quality.step_relative, *floors),
        np.array(watch.switch, dtype=np.int64),
        (watch.start, watch.interval, np.array(watch.nodes, dtype=np.int64), trace))
    if status != 0:
        raise NoConvergence(reached)
    span = stop - start - skip
    stats[:, [2, 6, 8]] /= span
    stats[:, [3, 7]] = np.sqrt(np.maximum(stats[:, [3, 7]] / span, 0.0))
    return Stretch(stats, swings / span, steps, trace[:used])


def _floors(compiled: Compiled) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Deviation that never matters: capacitor voltage [V], winding current [A], charge of diodes and transistors [C]."""
    capacitors = 5e-3 + CHARGE_FLOOR / compiled.capacitor[2]
    windings = np.full(len(compiled.names["winding"]), 1e-4)
    diodes = np.full(len(compiled.names["diode"]), 2e-12) + compiled.diode[2][:, 2] * 0.2
    transistors = np.full((len(compiled.names["bipolar"]), 2), 1e-11)
    return capacitors, windings, diodes, transistors
