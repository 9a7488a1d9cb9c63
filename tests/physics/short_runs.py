"""Short runs of every shipped board and its cold readings, for test_compiled.py; as a program it prints the figures as JSON.

    NUMBA_DISABLE_JIT=1 python -m tests.physics.short_runs

runs the kernel as plain Python, some hundred times slower.
"""

import json
import sys

from triage.board.circuit import circuit
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.cold import cold_probes, read_cold
from triage.families.steady import rated_start
from triage.physics.netlist import compile_netlist
from triage.physics.network import HAND_METER, Meter
from triage.physics.transient import QUICK, Watch, initial_state, rest_state, run_stretch

RUNS = (
    ("choir-keyboard-supply", 2e-4, 1.0, ""),
    ("mast-lamp-adapter", 2e-4, 1.0, ""),
    ("harbour-gate-timer", 2e-4, 1.0, ""),
    ("harbour-handset-charger", 6e-5, 1.0, ""),
    ("weather-display-adapter", 3e-5, 1.0, ""),
    ("tide-gauge-brick", 1.2e-4, 1.05, ""),
    ("tide-gauge-brick", 2e-5, 1.0, ""),
    ("tide-gauge-brick", 2e-5, 2.5, ""),
    ("pilot-boat-handset-charger", 1.5e-4, 1.05, ""),
    ("pilot-boat-handset-charger", 2e-5, 1.0, ""),
    ("fish-dock-ice-controller", 2e-4, 1.05, ""),
    ("fish-dock-ice-controller", 4e-5, 0.5, ""),
)
"""Board, time it is followed from the crest of the mains [s], first supply voltage of the controller as a share of the one that
wakes it (far above it latches off, far below it sleeps) [-], fault."""
PROBES = 8
"""Cold readings of each board that are compared."""
METERS = (HAND_METER, Meter(ohms_currents=(1e-3, 1e-4, 1e-5, 1e-6, 1e-7)))


def powered(name: str, span: float, supply: float, fault: str) -> list[float]:
    """Steps, statistics of all ports and the output voltage over time of a board at full load."""
    board = load_profile(name)
    family = family_of(board.family)
    compiled = compile_netlist(circuit(board, (Fault.parse(fault),) if fault else (), load=board.full_load))
    start = rated_start(board, family)
    for role, share, volts in ((family.bulk_role, 0.985, 2.0**0.5 * board.mains.nominal), (family.supply_role, supply, 0.0),
                               ("feedback filter", 1.0, 2.5)):
        part = board.by_role(role)
        if part is not None:
            start[part.ref] = share * (volts or start.get(part.ref, 0.0))
    state = initial_state(compiled, start)
    switch = board.by_role(family.switch_role)
    swinging = compiled.index(next(iter(switch.pins.values()))) if switch else -1
    watch = Watch((swinging, -1, swinging, -1), nodes=(compiled.index("out"),), interval=span / 20, rows=20)
    stretch = run_stretch(compiled, state, 0.0, span, watch, QUICK)
    return [float(stretch.steps), *stretch.statistics.ravel().tolist(), *stretch.trace.ravel().tolist()]


def cold(name: str) -> list[float]:
    """Some cold readings of a sound board with two kinds of meter, and its state at rest."""
    board = load_profile(name)
    probes = cold_probes(board)
    some = probes[:: max(len(probes) // PROBES, 1)]
    read = [value for meter in METERS for value in read_cold(board, (), some, meter=meter).ravel().tolist()]
    return [*read, *rest_state(compile_netlist(circuit(board, load=board.full_load))).nodes.tolist()]


def figures() -> dict[str, list[float]]:
    """All of them by name."""
    runs = {" ".join(map(str, run)).strip(): powered(*run) for run in RUNS}
    return runs | {f"{name} cold": cold(name) for name in {name: None for name, *_ in RUNS}}


if __name__ == "__main__":
    json.dump(figures(), sys.stdout)
