"""What the time-domain solver costs on the shipped charger, and how far its quick tolerances are from its fine ones.

    python -m tests.bench.bench_transient

Times are processor time of this machine, the least of several short runs; steps and deviations do not depend on it.
"""

import dataclasses
import time

from triage.board.circuit import circuit
from triage.board.profile import load_profile
from triage.physics.netlist import Netlist, compile_netlist
from triage.physics.transient import FINE, I_MAX, POWER, QUICK, V_MAX, V_MEAN, Quality, Stretch, Watch, initial_state, run_stretch

CLOSE = dataclasses.replace(FINE, step_relative=0.1 * FINE.step_relative, largest_step=2.5e-7, floors=(0.2,) * 4)
QUALITIES = {"ten times finer": CLOSE, "FINE": FINE, "QUICK": QUICK}
START = {"full": {"C1": 320.4, "C5": 5.0, "C4": 5.5, "C2": 97.0}, "noload": {"C1": 320.4, "C5": 5.5, "C4": 5.5, "C2": 66.5}}
SETTLE, SPAN, REPEATS = 2e-3, 4e-3, 5


def measure(net: Netlist, start: dict[str, float], quality: Quality) -> tuple[Stretch, float]:
    """The stretch from 2 to 6 ms, and the least time of a step [s]."""
    compiled = compile_netlist(net)
    state = initial_state(compiled, start)
    watch = Watch((compiled.index("coll"), -1, compiled.index("bulk"), -1))
    run_stretch(compiled, state, 0.0, SETTLE, watch, quality)
    least = 1.0
    for _ in range(REPEATS):
        again, begun = state.copy(), time.process_time()
        steps = run_stretch(compiled, again, SETTLE, SETTLE + 0.1 * SPAN, watch, quality).steps
        least = min(least, (time.process_time() - begun) / steps)
    return run_stretch(compiled, state, SETTLE, SETTLE + SPAN, watch, quality), least


def figures(net: Netlist, stretch: Stretch) -> dict[str, float]:
    """The readings and stresses that are compared."""
    row = {(port.ref, port.suffix): stretch.statistics[k] for k, port in enumerate(net.ports)}
    return {"output V": row["out", "node"][V_MEAN], "collector V": row["coll", "node"][V_MAX], "clamp V": row["C2", ""][V_MEAN],
            "secondary A": row["T1", "_secondary"][I_MAX], "switch W": row["Q1", ""][POWER],
            "drawn W": -row["C1", ""][POWER],
            "Hz": stretch.frequency}


def main() -> None:
    """Print one table for full load and one for none."""
    for condition, load in (("full", 8.3333), ("noload", 1e6)):
        net = circuit(load_profile("harbour-handset-charger"), load=load)
        reference: dict[str, float] = {}
        for name, quality in QUALITIES.items():
            stretch, each = measure(net, START[condition], quality)
            seen = figures(net, stretch)
            reference = reference or seen
            print(f"{condition:7} {name:16} {stretch.steps / SPAN / 1e3:6.0f} steps/ms {each * 1e6:5.1f} us/step "
                  f"{each * stretch.steps / SPAN:6.1f} s/s   "
                  + "  ".join(f"{key} {value:.4g} ({100.0 * (value / reference[key] - 1.0):+.1f} %)"
                              for key, value in seen.items()))


if __name__ == "__main__":
    main()
