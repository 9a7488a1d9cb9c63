"""Runs a self-oscillating reference circuit again where its record holds what no meter would show, and writes the second figures.

    python -m tests.reference.repeat rcc-opto

The record (README of its generator) covers half a mains period from a restart, in which inner nodes, windings and small
capacitors begin at zero, at a relative error of 3e-3. Two things are run again, chosen by the record alone:

- the sound board under load: it settles by the same rule, then the very deck goes on from the capacitor voltages reached at a
  relative error of 1e-3, and is measured for half a mains period that begins a millisecond after the restart;
- the ripple of every fault that the record calls by its ripple, before and after that millisecond, with the deck's own tolerances
  and from the sound board's capacitor voltages, as the record itself was made.

Needs ngspice and the generator in the folder ``shared`` beside the checkout.
"""

import importlib
import sys
from typing import Any

from tests.reference.condense import DATA, SHARED
from tests.reference.reference_circuits import PROFILES, live_table
from triage.board.profile import load_profile
from triage.families.live import state_class, summary
from triage.families.points import LOADS

TIGHT = ".options method=gear reltol=1e-3 abstol=1e-7 vntol=1e-4 chgtol=1e-14 itl4=100 rshunt=1e12"
BEGIN = 1e-3
"""The restart is over, several periods of the output filter's ring [s]."""
PATIENCE = 3600
"""Longest wait for one run [s]."""

Waves = dict[str, Any]


def later(seen: Waves) -> Waves:
    """What comes after the restart."""
    keep = seen["time"] >= BEGIN
    return {name: values[keep] for name, values in seen.items()}


def settled(generator: dict[str, Any], circuit: Any, volts: float, load: str) -> tuple[Waves, dict[str, float]]:
    """The last run of the settling sound board, and its capacitor voltages at the end of it."""
    seen, _, _ = generator["measure"].settle(circuit, volts, circuit.load(load))
    return seen, {part.ref: float(generator["measure"].cap_voltage(seen, part, ())[-1])
                  for part in circuit.parts if part.ic is not None}


def sound_lines(generator: dict[str, Any], circuit: Any) -> list[str]:
    """Lines ``condition,ref,quantity,value`` as in the record of the sound board."""
    sim, measure, lines = generator["sim"], generator["measure"], ["condition,ref,quantity,value"]
    stop = BEGIN + 0.5 / circuit.mains["hz"]
    for mains in ("nominal", "low", "high"):
        for load in ("half", "full"):
            _, start = settled(generator, circuit, circuit.mains[mains], load)
            text = sim.deck(circuit, circuit.mains[mains], circuit.load(load), (), start, stop=stop)
            seen = later(sim.run_once(text.replace(sim.OPTIONS, TIGHT), stop, PATIENCE))
            found = measure.adapter(circuit, seen) + measure.stats(circuit, seen)
            lines += [f"{mains}_{load},{ref},{quantity},{value:.5g}" for ref, quantity, value, _ in found]
            print(mains, load, "done", flush=True)
    return lines


def called_by_ripple(name: str) -> list[tuple[str, str, str]]:
    """(fault, its collateral, load) of the record's states that are told by the ripple."""
    board = load_profile(PROFILES[name])
    table = live_table(name, board)
    sound = {load: summary(board, table["healthy", load][1], load) for load in LOADS}
    found = []
    for fault in dict.fromkeys(one for one, _ in table):
        keys = {load: (fault, load + "_after") if (fault, load + "_after") in table else (fault, load) for load in LOADS}
        shown = {load: summary(board, table[key][1], load) for load, key in keys.items()}
        for load, key in keys.items():
            if state_class(board, load, shown, sound) in ("hum or ripple", "pulsing"):
                chain = table[key][0] if key[1] != load else ()
                found.append((fault, "+".join(map(str, chain)), load))
    return found


def ripple_lines(generator: dict[str, Any], circuit: Any, name: str) -> list[str]:
    """Lines ``fault,condition,whole,later``: ripple of the output with the restart and without it [V]."""
    sim, lines, starts = generator["sim"], ["fault,condition,whole,later"], {}
    stop = 0.5 / circuit.mains["hz"]
    for fault, chain, load in called_by_ripple(name):
        if load not in starts:
            starts[load] = generator["measure"].settle(circuit, circuit.mains["nominal"], circuit.load(load))[1]
        faults = tuple(tuple(one.split(".")) for one in f"{fault}+{chain}".split("+") if one)
        text = sim.deck(circuit, circuit.mains["nominal"], circuit.load(load), faults, starts[load], stop=stop)
        seen = sim.run_once(text, stop, PATIENCE)
        ripples = [float((one["out"] - one["sgnd"]).max() - (one["out"] - one["sgnd"]).min()) for one in (seen, later(seen))]
        lines.append(f"{fault},{load}," + ",".join(f"{value:.5g}" for value in ripples))
        print(lines[-1], flush=True)
    return lines


def main(name: str) -> None:
    """Write both tables of one circuit."""
    sys.path.insert(0, str(SHARED / "generator"))
    generator = {module: importlib.import_module(module) for module in ("measure", "sim", "variants")}
    once = generator["sim"].run_once
    generator["measure"].run = lambda text, stop, timeout=PATIENCE: once(text, stop, timeout)
    circuit = generator["variants"].get(name)
    plain = name.replace("-", "_")
    tables = {"ripple_again": ripple_lines(generator, circuit, name), "healthy_again": sound_lines(generator, circuit)}
    for table, lines in tables.items():
        path = DATA / f"{plain}_{table}.csv"
        path.write_text("\n".join(lines) + "\n", encoding="utf-8")
        print(path.name, path.stat().st_size)


if __name__ == "__main__":
    main(sys.argv[1])
