"""Waveforms of a powered board: the switch over one of its periods, bulk and output over one of the mains.

They come out of the same solution as the stresses, traced over its last mains period.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from triage.board.circuit import output_ground
from triage.board.fault import Fault
from triage.board.part import Board
from triage.families import family_of
from triage.families.family import Family
from triage.families.steady import Traced, rated_start, settle, swinging_pin
from triage.physics.transient import I_MEAN, I_RMS, QUICK, Quality

SAMPLES_PER_SECOND = 1e7
"""Ten points a microsecond: the spike at turn-off of a small flyback lasts some tenths of one [1/s]."""
SWITCH_PERIODS = 1.5
"""Switching periods shown, so that one is seen whole [-]."""
AVERAGED = 4.0
"""Switching periods averaged over where only what follows the mains is wanted [-]."""
MOST_BINS = 250
"""Averages over a mains period: the charge of a bulk capacitor lasts a tenth of it."""
BEFORE_PEAK = 0.15
"""Share of the stretch in front of its highest value [-]."""
STILL_SPAN = 5e-5
"""Shown of a switch that does not swing [s]."""
MOST_POINTS = 400
"""Points of a curve: two a column on the widest terminal."""
RESERVOIR = "reservoir capacitor"
"""What takes the place of the bulk capacitor behind a transformer or a dropper."""
_OTHER_ENDS = ("emitter", "source", "ground")
"""Pins a switch is read against, in this order."""


@dataclass(frozen=True, slots=True)
class Waveform:
    """One voltage over time."""

    time: np.ndarray
    """[s], from 0"""
    voltage: np.ndarray
    """[V]"""


@dataclass(frozen=True, slots=True)
class Waveforms:
    """The waveforms of one operating point; None for what the family lacks."""

    switch: Waveform | None
    """Across the switch, about the highest peak of the mains period."""
    bulk: Waveform | None
    """Across the bulk capacitor, one mains period."""
    output: Waveform
    """At the output, one mains period."""
    frequency: float
    """Of the switching [Hz]; 0 where nothing swings."""


def ends_of_switch(board: Board, family: Family) -> tuple[str, str, str] | None:
    """Ref of the switch and the nodes that its voltage lies between; None in a family in which nothing switches."""
    switch = board.by_role(family.switch_role) if family.switch_role else None
    if switch is None:
        return None
    swings = swinging_pin(switch, family)
    others = ("drain",) if swings == "source" else tuple(pin for pin in _OTHER_ENDS if pin in switch.pins)
    far = switch.pins[others[0]] if others else board.ground["primary"]
    near = switch.pins[swings]
    return (switch.ref, far, near) if swings == "source" else (switch.ref, near, far)


def ends_of_bulk(board: Board, family: Family) -> tuple[str, str, str] | None:
    """Ref and nodes of the bulk capacitor, or of the reservoir capacitor of a mains-frequency family; None without one."""
    bulk = board.by_role(family.bulk_role or RESERVOIR)
    return None if bulk is None else (bulk.ref, bulk.pins["plus"], bulk.pins["minus"])


def waveforms(board: Board, faults: Sequence[Fault], *, mains: float, load: float, start: Mapping[str, float] | None = None,
              span: float | None = None, quality: Quality = QUICK) -> Waveforms:
    """Waveforms under some faults in the steady state.

    mains: [V rms]. load: [ohm]. start: capacitor voltages to begin with [V]; by default those of a sound board. span: time of
    the switching waveform [s], to hold it beside another; by default one and a half of its own periods. Raises NoConvergence
    when the solution breaks off.
    """
    family = family_of(board.family)
    ends = ends_of_switch(board, family), ends_of_bulk(board, family), ("", "out", output_ground(board))
    nodes = tuple(dict.fromkeys(node for one in ends if one for node in one[1:]))
    rows = round(SAMPLES_PER_SECOND / board.mains.frequency) if ends[0] else 4 * MOST_POINTS
    settled = settle(board, family, faults, mains=mains, load=load, quality=quality, start=start or rated_start(board, family),
                     traced=Traced(nodes, rows))
    trace = settled.stretch.trace
    time = trace[:, 0] - trace[0, 0]

    def between(one: tuple[str, str, str]) -> np.ndarray:
        columns = [trace[:, 1 + nodes.index(node)] for node in one[1:]]
        return np.asarray(columns[0] - columns[1])

    frequency = settled.stretch.frequency
    if span is None:
        span = SWITCH_PERIODS / frequency if frequency > 0.0 else STILL_SPAN
    switch, bulk, output = ends
    return Waveforms(about_peak(time, between(switch), span) if switch else None,
                     thinned(time, between(bulk)) if bulk else None, thinned(time, between(output)), frequency)


@dataclass(frozen=True, slots=True)
class Ripple:
    """The ripple current of a capacitor, taken apart."""

    slow: float
    """What follows the mains [A rms]."""
    fast: float
    """What follows the switching [A rms]; the squares of both add up to that of the whole."""
    frequency: float
    """Of the switching [Hz]; 0 where nothing swings."""


def ripple(board: Board, ref: str, *, mains: float, load: float, quality: Quality = QUICK) -> Ripple:
    """The ripple current of a capacitor of the sound board. mains: [V rms]. load: [ohm].

    The part that follows the mains is the charge that its voltage, averaged over some switching periods, takes up and gives
    back. Raises KeyError for an unknown part, NoConvergence when the solution breaks off.
    """
    family, part = family_of(board.family), board.part(ref)
    plus, minus = part.pins["plus"], part.pins["minus"]
    period = 1.0 / board.mains.frequency
    settled = settle(board, family, (), mains=mains, load=load, quality=quality, start=rated_start(board, family),
                     traced=Traced((plus, minus), round(SAMPLES_PER_SECOND * period)))
    row, trace = settled.row(ref), settled.stretch.trace
    whole = float(np.sqrt(max(row[I_RMS] ** 2 - row[I_MEAN] ** 2, 0.0)))
    frequency = settled.stretch.frequency
    if frequency <= 0.0:
        return Ripple(whole, 0.0, 0.0)
    slow = min(slow_current(trace[:, 0], trace[:, 1] - trace[:, 2], part.value["capacitance"], frequency), whole)
    return Ripple(slow, float(np.sqrt(whole**2 - slow**2)), frequency)


def slow_current(time: np.ndarray, voltage: np.ndarray, capacitance: float, frequency: float) -> float:
    """Current through a capacitor besides the switching [A rms], from its voltage averaged over switching periods.

    time: [s], one mains period. voltage: [V]. capacitance: [F]. frequency: of the switching [Hz].

    >>> t = np.arange(0.0, 0.02, 1e-6)
    >>> hum, swings = np.sin(2 * np.pi * 100 * t), 0.1 * np.sin(2 * np.pi * 50e3 * t)
    >>> round(slow_current(t, 300.0 + hum + swings, 10e-6, 50e3) / (2 * np.pi * 100 * 10e-6 / 2**0.5), 2)
    1.0
    """
    bins = max(min(int((time[-1] - time[0]) * frequency / AVERAGED), MOST_BINS), 2)
    edges = np.linspace(time[0], time[-1], bins + 1)
    grid = np.linspace(time[0], time[-1], bins * 50)
    means = np.interp(grid, time, voltage).reshape(bins, 50).mean(axis=1)
    current = capacitance * np.diff(means) / (edges[1] - edges[0])
    return float(np.sqrt(np.mean(current**2) - np.mean(current) ** 2))


def about_peak(time: np.ndarray, voltage: np.ndarray, span: float) -> Waveform:
    """The stretch of ``span`` [s] of a switching waveform in which its highest value lies near the left end.

    time: [s]. voltage: [V].

    >>> found = about_peak(np.arange(100.0), np.where(np.arange(100) == 50, 9.0, 0.0), 20.0)
    >>> float(found.time[np.argmax(found.voltage)]), len(found.time)
    (3.0, 21)
    """
    span = min(span, float(time[-1]))
    peak = float(time[np.argmax(voltage)])
    begin = min(max(peak - BEFORE_PEAK * span, 0.0), float(time[-1]) - span)
    chosen = (time >= begin) & (time <= begin + span)
    found = thinned(time[chosen], voltage[chosen])
    return Waveform(found.time - begin, found.voltage)


def thinned(time: np.ndarray, voltage: np.ndarray) -> Waveform:
    """The curve in at most ``MOST_POINTS`` points that keep the lowest and the highest value of every stretch.

    >>> found = thinned(np.arange(4000.0), np.where(np.arange(4000) == 1234, 9.0, 0.0))
    >>> len(found.time), float(found.voltage.max())
    (400, 9.0)
    """
    if len(time) <= MOST_POINTS:
        return Waveform(time, voltage)
    kept = []
    for part in np.array_split(np.arange(len(time)), MOST_POINTS // 2):
        kept += sorted((part[np.argmin(voltage[part])], part[np.argmax(voltage[part])]))
    return Waveform(time[kept], voltage[kept])
