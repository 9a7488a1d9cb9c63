"""Runs a switching reference circuit again where its record holds what no meter would show, and writes the second figures.

    python -m tests.reference.repeat rcc-opto
    python -m tests.reference.repeat pwm-opto

rcc-opto: the record (README of its generator) covers half a mains period from a restart, in which inner nodes, windings and small
capacitors begin at zero, at a relative error of 3e-3. Two things are run again, chosen by the record alone:

- the sound board under load: it settles by the same rule, then the very deck goes on from the capacitor voltages reached at a
  relative error of 1e-3, and is measured for half a mains period that begins a millisecond after the restart;
- the ripple of every fault that the record calls by its ripple, before and after that millisecond, with the deck's own tolerances
  and from the sound board's capacitor voltages, as the record itself was made.

pwm-opto: the record (its README) was made at a relative error of 3e-3 with trtol 40 and steps of 0.8 us, longer than an edge, and
its no-load runs begin beside the settled state. Two things are run again, chosen by the record alone:

- the very decks of the sound board at 3e-4, trtol 2 and steps of 40 ns, twice the time constant of an edge of the drive; without
  load the window comes 20 ms later;
- what the faults of clamp and transformer destroy at full load, as they set the peak of the drain, which an edge missed cuts off:
  with the generator's own closer setting (1e-3, trtol 7) and steps of 0.1 us.

And the faults of the current sense are run from an empty output, with the record's own tolerances: the record starts them beside
the regulated point, where no limit is needed, but whoever plugs the adapter in starts with an empty output.

Needs ngspice and the generator in the folder ``shared`` beside the checkout.
"""

import importlib
import re
import sys
from concurrent.futures import ProcessPoolExecutor
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


class Captured(Exception):
    """Carries the deck that the generator would run."""


def captured(flyback: Any, circuit: Any, volts: float, load: float) -> str:
    """The deck of the sound board's main run."""

    def keep(text: str, **_: object) -> None:
        raise Captured(text)

    once, flyback.ngspice = flyback.ngspice, keep
    try:
        flyback.waveform(circuit, (), volts, load)
    except Captured as found:
        return str(found.args[0])
    finally:
        flyback.ngspice = once
    raise RuntimeError("the generator ran nothing")


def clocked_lines(job: tuple[str, str]) -> list[str]:
    """Lines ``condition,ref,quantity,value`` of the fixed-frequency circuit in one corner."""
    sys.path.insert(0, str(SHARED / "generator_pwm"))
    flyback, engine, stats, build = (importlib.import_module(name) for name in ("flyback", "engine", "stats", "build"))
    (mains, load), (_, circuit) = job, build.get("pwm-opto")
    stop = 0.044 if load == "noload" else 0.024
    text = captured(flyback, circuit, circuit.mains[mains], circuit.load_ohm(load))
    text = re.sub(r"reltol=\S+ trtol=\S+", "reltol=3e-4 trtol=2", text)
    text = re.sub(r"\.tran .*", f".tran 4e-8 {stop:g} {stop - 0.02:g} 4e-8 uic", text)
    seen = engine.ngspice(text, timeout=PATIENCE)[0][0]
    wave = stats.Wave(seen, stop - 0.02)
    shown = stats.readings(circuit, wave) | {"f_sw": (flyback._edges(seen)[0], "Hz")}
    found = [("ADAPTER", quantity, value) for quantity, (value, _) in flyback.adapter_rows(circuit, wave, shown).items()]
    found += [(ref, quantity, value) for (ref, quantity), (value, _) in stats.part_stats(circuit, wave, ()).items()]
    print(mains, load, "done", flush=True)
    return [f"{mains}_{load},{ref},{quantity},{value:.5g}" for ref, quantity, value in found]


def destroyed_line(fault: str) -> str:
    """Line ``fault,load,first,again``: what a fault destroys first at full load, in the record's way and run more closely."""
    sys.path.insert(0, str(SHARED / "generator_pwm"))
    flyback, engine, build = (importlib.import_module(name) for name in ("flyback", "engine", "build"))
    plain = flyback.deck

    def closer(*given: Any, **more: Any) -> str:
        if more.get("clock_off"):
            return str(plain(*given, **more))
        return re.sub(r"reltol=\S+ trtol=\S+", "reltol=1e-3 trtol=7", plain(*given, **{**more, "tmax": 1e-7}))

    flyback.ngspice = lambda text, **_: engine.ngspice(text, timeout=PATIENCE)
    _, circuit = build.get("pwm-opto")
    found = []
    for flyback.deck in (plain, closer):
        _, _, stresses = flyback.run(circuit, (fault,), "nominal", "full")
        found.append("+".join(flyback.collateral(circuit, stresses, (fault,))))
    print(fault, found, flush=True)
    return f"{fault},full,{found[0]},{found[1]}"


def started_line(job: tuple[str, str]) -> str:
    """Line ``fault,load,first,again``: what a fault destroys first beside the regulated point, and from an empty output."""
    sys.path.insert(0, str(SHARED / "generator_pwm"))
    flyback, engine, build = (importlib.import_module(name) for name in ("flyback", "engine", "build"))
    flyback.ngspice = lambda text, **_: engine.ngspice(text, timeout=PATIENCE)
    (fault, load), (_, circuit), known, found = job, build.get("pwm-opto"), flyback.SUPPLY_REFS, []
    for flyback.SUPPLY_REFS in (known, {*known, fault.partition(".")[0]}):
        _, _, stresses = flyback.run(circuit, (fault,), "nominal", load)
        found.append("+".join(flyback.collateral(circuit, stresses, (fault,))))
    flyback.SUPPLY_REFS = known
    print(fault, load, found, flush=True)
    return f"{fault},{load},{found[0]},{found[1]}"


def clocked(name: str) -> None:
    """Write the tables of the fixed-frequency circuit."""
    board = load_profile(PROFILES[name])
    sense = [(f"{part.ref}.{mode}", load) for part in board.parts if part.role.startswith("current sense")
             for mode in part.fault_modes for load in ("noload", "full")]
    faults = [f"{part.ref}.{mode}" for part in board.parts if part.role.startswith("clamp") or part.kind == "transformer"
              for mode in part.fault_modes]
    with ProcessPoolExecutor(2) as pool:
        lines = [*pool.map(destroyed_line, faults), *pool.map(started_line, sense)]
        _write(name, "destroyed_again", ["fault,load,first,again", *lines])
    corners = [(mains, load) for mains in ("low", "nominal", "high") for load in ("noload", "half", "full")]
    with ProcessPoolExecutor(2) as pool:
        lines = ["condition,ref,quantity,value", *(line for found in pool.map(clocked_lines, corners) for line in found)]
    _write(name, "healthy_again", lines)


def _write(name: str, table: str, lines: list[str]) -> None:
    path = DATA / f"{name.replace('-', '_')}_{table}.csv"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    print(path.name, path.stat().st_size)


def main(name: str) -> None:
    """Write the tables of one circuit."""
    if name == "pwm-opto":
        clocked(name)
        return
    sys.path.insert(0, str(SHARED / "generator"))
    generator = {module: importlib.import_module(module) for module in ("measure", "sim", "variants")}
    once = generator["sim"].run_once
    generator["measure"].run = lambda text, stop, timeout=PATIENCE: once(text, stop, timeout)
    circuit = generator["variants"].get(name)
    tables = {"ripple_again": ripple_lines(generator, circuit, name), "healthy_again": sound_lines(generator, circuit)}
    for table, lines in tables.items():
        _write(name, table, lines)


if __name__ == "__main__":
    main(sys.argv[1])
