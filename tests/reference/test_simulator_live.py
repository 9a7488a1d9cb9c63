"""The decks that the program writes, run in ngspice, against the program's own solution of the same window of time.

Both begin from the capacitor voltages of the settled board at the crest of the mains. Source: ngspice, at tight tolerances
(relative 1e-4; loose ones misplace the clamp voltage of a switching board).
"""

from dataclasses import dataclass, replace

import numpy as np
import pytest

from tests.reference.simulator import MAINS, SWITCHING, Waveforms, current
from triage.board.circuit import circuit, output_ground
from triage.board.fault import Fault
from triage.board.kinds import kinds
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.steady import rated_start, settle, swinging_pin
from triage.job.deck import deck
from triage.physics.netlist import PORT_WINDING, Compiled, Netlist, compile_netlist
from triage.physics.transient import (
    FINE,
    I_MAX,
    I_MEAN,
    I_MIN,
    I_RMS,
    POWER,
    V_MAX,
    V_MEAN,
    V_MIN,
    V_RMS,
    Stretch,
    Watch,
    initial_state,
    run_stretch,
    wake,
)

SOURCE = "ngspice, live run of the program's deck"
BOUNDS = {"voltage": 0.05, "current": 0.10, "power": 0.15, "frequency": 0.15}
"""The owner's bounds, relative."""
FLOORS = {"voltage": 0.02, "current": 1e-5, "power": 1e-3}
"""What no meter shows: 20 mV, 10 uA, 1 mW."""
IDLE = 1e-3
"""Currents below this share of the largest on the board are what leaks while the mains rectifier is blocked."""
SHARE = 0.95
SWITCHERS = {"harbour-handset-charger": (0.004, 5e-8), "weather-display-adapter": (0.004, 1e-7),
             "tide-gauge-brick": (0.002, 1e-7)}
"""Profile -> window from the crest on and largest step of the simulator [s]. The mains rectifier rests in it."""
LINEAR = {"choir-keyboard-supply": 3, "mast-lamp-adapter": 3, "harbour-gate-timer": 3}
"""Profile -> mains periods."""


@dataclass(frozen=True, slots=True)
class Pair:
    """One window of one board in both solutions."""

    net: Netlist
    mine: Stretch
    theirs: Waveforms


def pair(board: Board, ngspice, window: float, step: float, options: str, faults: tuple[Fault, ...] = ()) -> Pair:
    """Both solutions; the first fifth of the window is left out."""
    family = family_of(board.family)
    start = settle(board, family, faults, mains=board.mains.nominal, load=board.full_load, quality=FINE,
                   start=rated_start(board, family)).capacitors
    net = circuit(board, faults)
    compiled = compile_netlist(net)
    quality = replace(FINE, largest_step=family.largest_step) if family.largest_step else FINE
    wake(compiled)
    mine = run_stretch(compiled, initial_state(compiled, start), 0.0, window, watch(board, compiled), quality, 0.2 * window)
    text = deck(board, faults, start=start, periods=window * board.mains.frequency, largest_step=step)
    return Pair(net, mine, ngspice(text, 0.2 * window, net.reference, options))


def watch(board: Board, compiled: Compiled) -> Watch:
    """The switch, for the count of swings."""
    family = family_of(board.family)
    switch, bulk = board.by_role(family.switch_role), board.by_role("bulk capacitor")
    if switch is None or bulk is None:
        return Watch()
    ground = compiled.index(board.ground["primary"])
    return Watch((compiled.index(switch.pins[swinging_pin(switch, family)]), ground, compiled.index(bulk.pins["plus"]), ground),
                 family.swing_low, family.swing_high)


def rows(both: Pair) -> list[tuple[str, str, float, float]]:
    """(name, kind, ours, theirs) of every part; means that are zero in a steady state are left out.

    A capacitor's mean current and a winding's mean voltage are what is left over of large alternating ones.
    """
    found = []
    for port, row in zip(both.net.ports, both.mine.statistics, strict=True):
        if port.suffix in ("node", "mains"):
            continue
        name, volts = port.ref + port.suffix, both.theirs.node(port.plus) - both.theirs.node(port.minus)
        capacitor = any(port.element == one[0] for one in both.net.capacitors)
        found.append((f"{name} v_peak", "voltage", max(abs(row[V_MIN]), abs(row[V_MAX])), float(np.abs(volts).max())))
        found.append((f"{name} v_rms", "voltage", row[V_RMS], both.theirs.rms(volts)))
        if port.kind != PORT_WINDING:
            found.append((f"{name} v_mean", "voltage", abs(row[V_MEAN]), abs(both.theirs.mean(volts))))
        amps = current(both.net, port, both.theirs)
        if amps is not None:
            found.append((f"{name} i_peak", "current", max(abs(row[I_MIN]), abs(row[I_MAX])), float(np.abs(amps).max())))
            found.append((f"{name} i_rms", "current", row[I_RMS], both.theirs.rms(amps)))
            if not capacitor:
                found.append((f"{name} i_mean", "current", abs(row[I_MEAN]), abs(both.theirs.mean(amps))))
                found.append((f"{name} power", "power", abs(row[POWER]), abs(both.theirs.mean(volts * amps))))
    return found


def compare(subject: str, both: Pair, outside_check) -> None:
    """Share of the rows within the owner's bounds."""
    found = rows(both)
    largest = max(theirs for _, kind, _, theirs in found if kind == "current")
    floors = {**FLOORS, "current": max(FLOORS["current"], IDLE * largest)}
    off = [(name, ours, theirs) for name, kind, ours, theirs in found
           if abs(ours - theirs) > BOUNDS[kind] * abs(theirs) + floors[kind]]
    print(f"\n{subject}: {len(found) - len(off)} of {len(found)} within bounds; off: "
          + "; ".join(f"{name} {ours:.4g} for {theirs:.4g}" for name, ours, theirs in off))
    outside_check.at_least(subject, SOURCE, 1.0 - len(off) / len(found), SHARE)


def output(both: Pair, board: Board, outside_check, subject: str) -> None:
    """Mean output voltage."""
    port = next(k for k, one in enumerate(both.net.ports) if (one.ref, one.suffix) == ("out", "node"))
    theirs = both.theirs.mean(both.theirs.node("out") - both.theirs.node(output_ground(board)))
    outside_check(f"{subject}, output voltage", SOURCE, both.mine.statistics[port, V_MEAN], theirs, BOUNDS["voltage"])


@pytest.mark.long
@pytest.mark.parametrize("name", SWITCHERS)
def test_switching_boards_run_as_ngspice_runs_them(name: str, ngspice, outside_check) -> None:
    board = load_profile(name)
    both = pair(board, ngspice, *SWITCHERS[name], SWITCHING)
    compare(f"{name}, all parts", both, outside_check)
    output(both, board, outside_check, name)
    family = family_of(board.family)
    switch, bulk = board.by_role(family.switch_role), board.by_role("bulk capacitor")
    assert switch is not None and bulk is not None
    ground = both.theirs.node(board.ground["primary"])
    middle = 0.5 * both.theirs.mean(both.theirs.node(bulk.pins["plus"]) - ground)
    swings = both.theirs.swings(both.theirs.node(switch.pins[swinging_pin(switch, family)]) - ground, middle)
    outside_check(f"{name}, switching frequency", SOURCE, both.mine.frequency, swings, BOUNDS["frequency"])


@pytest.mark.parametrize("name", LINEAR)
def test_boards_of_mains_frequency_run_as_ngspice_runs_them(name: str, ngspice, outside_check) -> None:
    board = load_profile(name)
    both = pair(board, ngspice, LINEAR[name] / board.mains.frequency, 2e-5, MAINS)
    compare(f"{name}, all parts", both, outside_check)
    output(both, board, outside_check, name)


@pytest.mark.parametrize("name", LINEAR)
def test_boards_with_random_faults_run_as_ngspice_runs_them(name: str, ngspice, outside_check) -> None:
    """Five faults drawn with a fixed seed; the fuse is taken as holding, as in the program's own run."""
    board = load_profile(name)
    every = [Fault(part.ref, mode) for part in board.parts for mode in part.fault_modes or kinds()[part.kind].fault_modes]
    for number in np.random.default_rng(9).choice(len(every), 5, replace=False):
        both = pair(board, ngspice, LINEAR[name] / board.mains.frequency, 2e-5, MAINS, (every[number],))
        compare(f"{name}, all parts under faults", both, outside_check)
