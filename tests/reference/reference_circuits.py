"""The condensed reference circuits, and how their words map to the program's."""

import csv
import math
from collections.abc import Iterable
from functools import cache
from pathlib import Path

from triage.board.circuit import NOMINAL, Draw, output_ground
from triage.board.fault import Fault
from triage.board.kinds import leak_resistance
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.steady import swinging_pin
from triage.physics.network import HAND_METER, Meter
from triage.safety.instruments import Instruments
from triage.safety.instruments import load as load_instruments

DATA = Path(__file__).parent / "data"
PROFILES = {"rcc-zener": "harbour-handset-charger", "rcc-opto": "weather-display-adapter", "pwm-opto": "tide-gauge-brick",
            "linear-reg": "choir-keyboard-supply"}
"""Reference circuit -> the shipped profile that has its values."""
MODES = {"low_c": "low_capacitance", "low_vz": "low_voltage"}
FUNCTIONS = {"cap": "capacitance"}
BY_CURRENT = Meter(ohms_currents=(1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1.5e-8), diode_limit=3.0, bridge_series=True)
"""The meter of the circuits pwm-opto and linear-reg: their ohms test current steps down, their bridge shows series values."""
LEAK = 4700.0
"""Resistance of a leaky part in those two circuits [ohm]; the other two use the program's own."""
SOURCE = "reference circuits, simulated with ngspice 39"


def meter_of(circuit: str) -> Meter:
    """The meter a circuit's cold readings were taken with."""
    return HAND_METER if circuit.startswith("rcc") else BY_CURRENT


def own_meters(circuit: str) -> Instruments | None:
    """The same meter as a shop's own file tells of it; None where it is the program's usual one."""
    return None if circuit.startswith("rcc") else load_instruments(DATA / "bench_meters.toml")


def draw_of(circuit: str, board: Board) -> Draw:
    """The size of the faults a circuit was simulated with, where it is not the program's own."""
    if circuit.startswith("rcc"):
        return NOMINAL
    return Draw({}, {(part.ref, "leaky"): LEAK / leak_resistance(part) for part in board.parts
                     if part.kind in ("diode", "electrolytic")})


def fault_of(text: str) -> tuple[Fault, ...]:
    """Faults of ``R1.open`` or ``D1.short+RF1.open``; none for ``healthy`` and an empty text."""
    if text in ("", "healthy"):
        return ()
    faults = []
    for one in text.split("+"):
        ref, _, mode = one.partition(".")
        faults.append(Fault(ref, MODES.get(mode, mode)))
    return tuple(faults)


def number(text: str, function: str = "") -> float:
    """A reading: OL is infinite, an empty field or nan is not known; a capacitance beyond any bridge is OL."""
    if text == "OL":
        return math.inf
    value = float(text) if text and text != "nan" else math.nan
    return math.inf if function == "cap" and value > HAND_METER.capacitance_most else value


def _lines(circuit: str, table: str) -> list[list[str]]:
    with (DATA / f"{circuit.replace('-', '_')}_{table}.csv").open(newline="", encoding="utf-8") as file:
        return list(csv.reader(file))


def cold_table(circuit: str) -> dict[str, dict[Probe, float]]:
    """Fault -> cold reading -> value; a fault that shows in no cold reading at all has no entry."""
    sound: dict[Probe, float] = {}
    table: dict[str, dict[Probe, float]] = {"healthy": sound}
    for fault, plus, minus, function, value in _lines(circuit, "cold")[1:]:
        probe = Probe(FUNCTIONS.get(function, function), plus, minus)
        table.setdefault(fault, {})[probe] = number(value, function)
    return {fault: {**sound, **rows} for fault, rows in table.items()}


def live_table(circuit: str, board: Board) -> dict[tuple[str, str], tuple[tuple[Fault, ...], dict[Probe, float]]]:
    """(fault, condition) -> (collateral, live readings); conditions ending in ``_after`` have the collateral applied.

    A frequency in a hiccup is nan: the record gives that inside the bursts, which no counter shows.
    """
    lines = _lines(circuit, "live")
    names = lines[0][3:]
    table = {}
    for fault, condition, chain, *values in lines[1:]:
        load = condition.removesuffix("_after")
        readings = {probe: number(value) for name, value in zip(names, values, strict=True)
                    if (probe := observation(board, name, load)) is not None}
        if float(dict(zip(names, values, strict=True)).get("hiccup") or 0.0) > 0.0:
            readings |= {probe: math.nan for probe in readings if probe.function == "hertz"}
        table[fault, condition] = (fault_of(chain), readings)
    return table


def observation(board: Board, name: str, load: str) -> Probe | None:
    """The probe of an observation such as ``v_dc.bulk``; None for one that no instrument of ours takes."""
    kind, _, where = name.partition(".")
    primary = board.ground["primary"]
    if kind in ("v_dc", "v_pp"):
        side = board.side_of(where)
        return Probe({"v_dc": "volts_dc", "v_pp": "volts_pp"}[kind], where, board.ground[side], load) if side else None
    if kind == "v_ac":
        plus, _, minus = where.partition("-")
        return Probe("volts_ac", plus, minus, load)
    back = "mains_n" if board.side_of("mains_n") else primary
    if name == "p_in":
        return Probe("watts", "mains_l", back, load)
    if name == "i_ac":
        return Probe("amps_ac", "mains_l", back, load)
    if name == "f_sw":
        family = family_of(board.family)
        switch = board.by_role(family.switch_role)
        return Probe("hertz", switch.pins[swinging_pin(switch, family)], primary, load) if switch else None
    return None


def output_probe(board: Board, load: str) -> Probe:
    """The output voltage under a load."""
    return Probe("volts_dc", "out", output_ground(board), load)


def healthy_table(circuit: str) -> dict[tuple[str, str, str], float]:
    """(condition, ref, quantity) -> value of the sound board."""
    return {(condition, ref, quantity): number(value) for condition, ref, quantity, value in _lines(circuit, "healthy")[1:]}


def sound_again_table(circuit: str) -> dict[tuple[str, str, str], float]:
    """As healthy_table, of the circuit run again more closely and past its restart (repeat.py); empty where it was not."""
    if not (DATA / f"{circuit.replace('-', '_')}_healthy_again.csv").is_file():
        return {}
    return {(condition, ref, quantity): number(value) for condition, ref, quantity, value in _lines(circuit, "healthy_again")[1:]}


def ripple_again_table(circuit: str) -> dict[tuple[str, str], tuple[float, float]]:
    """(fault, load) -> ripple of the output with the restart and without it [V], run again (repeat.py)."""
    if not (DATA / f"{circuit.replace('-', '_')}_ripple_again.csv").is_file():
        return {}
    return {(fault, load): (number(whole), number(later)) for fault, load, whole, later in _lines(circuit, "ripple_again")[1:]}


def not_repeated(circuit: str, board: Board) -> set[tuple[str, str]]:
    """(fault, load) whose record destroys other parts than the same deck run again, more closely or from an empty output, as
    repeat.py tells."""
    if not (DATA / f"{circuit.replace('-', '_')}_destroyed_again.csv").is_file():
        return set()
    table = live_table(circuit, board)
    return {(fault, load) for fault, load, _, again in _lines(circuit, "destroyed_again")[1:]
            if bool(again) != bool(table[fault, load][0]) or not set(fault_of(again)) <= set(table[fault, load][0])}


def collateral_cold_table(circuit: str) -> dict[frozenset[Fault], dict[Probe, float]]:
    """Cold readings with a fault and all its collateral present, made with the same generator; empty where there is no file."""
    if not (DATA / f"{circuit.replace('-', '_')}_collateral_cold.csv").is_file():
        return {}
    sound = cold_table(circuit)["healthy"]
    table: dict[frozenset[Fault], dict[Probe, float]] = {}
    for faults, plus, minus, function, value in _lines(circuit, "collateral_cold")[1:]:
        rows = table.setdefault(frozenset(fault_of(faults)), dict(sound))
        rows[Probe(FUNCTIONS.get(function, function), plus, minus)] = number(value, function)
    return table


@cache
def lifted_table(circuit: str) -> dict[tuple[str, str], dict[Probe, float]]:
    """(ref, fault mode or ``sound``) -> readings of the part with one leg lifted: the same generator on the part alone."""
    pins: dict[str, list[str]] = {}
    rows: dict[tuple[str, str], list[tuple[str, str, str]]] = {}
    for ref, mode, function, plus, value in _lines(circuit, "lifted")[1:]:
        pins.setdefault(ref, [])
        pins[ref] += [plus] if plus not in pins[ref] else []
        rows.setdefault((ref, MODES.get(mode, mode)), []).append((function, plus, value))
    board = load_profile(PROFILES[circuit])
    table: dict[tuple[str, str], dict[Probe, float]] = {}
    for (ref, mode), found in rows.items():
        names = tuple(board.part(ref).pins)
        for function, plus, value in found:
            minus = names[1 - names.index(plus)]
            probe = Probe(FUNCTIONS.get(function, function), f"{ref}.{plus}", f"{ref}.{minus}")
            table.setdefault((ref, mode), {})[probe] = number(value, function)
    return table


def lifted_readings(circuit: str, faults: Iterable[Fault]) -> dict[Probe, float]:
    """What every part of two legs reads with one of them lifted, on a board with these faults."""
    table, modes = lifted_table(circuit), {fault.ref: fault.mode for fault in faults}
    found: dict[Probe, float] = {}
    for ref in dict.fromkeys(ref for ref, _ in table):
        found |= table.get((ref, modes.get(ref, "sound")), {})
    return found
