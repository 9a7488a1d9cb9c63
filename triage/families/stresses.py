"""How hard every part of a board is driven: the worst case over mains and load, next to its rating and derated limit.

Stresses come from the time-domain solution at low, nominal and high mains with no, half and full load; the inrush from a cold
start at the crest of the highest mains. Temperatures stand on the air inside the case and the thermal resistance of the
likely package; they are estimates and say so in their source.
"""

from collections.abc import Callable, Iterable, Mapping, Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass

import numpy as np

from triage.board.circuit import circuit
from triage.board.part import Board, Part
from triage.board.stress import Stress
from triage.families import family_of
from triage.families.points import LOADS, NO_LOAD, load_resistance
from triage.families.steady import Settled, rated_start, settle
from triage.physics.derating import derating
from triage.physics.electrolytic_life import life
from triage.physics.netlist import compile_netlist
from triage.physics.thermal import package_resistance, resistor_hot_spot, temperature_after
from triage.physics.transient import (
    FINE,
    I_MAX,
    I_MEAN,
    I_MIN,
    I_RMS,
    POWER,
    V_MAX,
    V_MIN,
    V_RMS,
    Quality,
    initial_state,
    run_stretch,
)

INSIDE_AIR = 55.0
"""Air inside a closed adapter at full load in a warm room [degC]; common practice, no source."""
RATED_LIFE = 2000.0
"""Endurance of an electrolytic whose series is not known [h]; common practice, no source."""
INRUSH_TIME = 4e-3
RATING_OF = {
    "peak_voltage": "voltage", "reverse_voltage": "voltage", "power": "power", "ripple_current": "ripple_current",
    "average_current": "current", "peak_current": "current", "rms_current": "current", "rms_voltage": "ac_voltage",
    "temperature": "temperature",
    "i2t": "i2t",
}
"""Stress quantity -> key of the rating it is held against."""


@dataclass(frozen=True, slots=True)
class Condition:
    """One corner of use."""

    name: str
    mains: float
    """[V rms]"""
    load: float
    """[ohm]"""


def conditions(board: Board) -> tuple[Condition, ...]:
    """The nine corners: low, nominal and high mains with no, half and full load."""
    words = {"noload": "no load", "half": "half load", "full": "full load"}
    mains = {board.mains.low: None, board.mains.nominal: None, board.mains.high: None}
    return tuple(Condition(f"{volts:g} V, {words[load]}", volts, load_resistance(board, load))
                 for volts in mains for load in LOADS)


def worst_corners(board: Board) -> tuple[Condition, ...]:
    """The three corners in which the worst case of a flyback or linear adapter is found; enough to compare two parts."""
    return (Condition(f"{board.mains.high:g} V, full load", board.mains.high, board.full_load),
            Condition(f"{board.mains.low:g} V, full load", board.mains.low, board.full_load),
            Condition(f"{board.mains.high:g} V, no load", board.mains.high, NO_LOAD))


def settle_corners(board: Board, corners: Iterable[Condition], quality: Quality = FINE) -> dict[Condition, Settled]:
    """Steady state of the sound board in each corner, solved side by side."""
    family = family_of(board.family)
    start = rated_start(board, family)

    def one(corner: Condition) -> Settled:
        return settle(board, family, (), mains=corner.mains, load=corner.load, quality=quality, start=start)

    corners = tuple(corners)
    with ThreadPoolExecutor() as pool:
        return dict(zip(corners, pool.map(one, corners), strict=True))


def part_stresses(part: Part, at: Settled) -> dict[str, float]:
    """Stress quantities of one part in one corner [SI]; see triage.board.stress.QUANTITIES."""
    if part.kind == "transformer":
        loss = sum(float(at.row(part.ref, suffix)[I_RMS]) ** 2 * part.value.get(f"{suffix[1:]}_resistance", 0.0)
                   for ref, suffix in at.rows if ref == part.ref)
        return {"power": loss}
    if part.kind == "bridge":
        return _bridge_stresses([at.row(part.ref, suffix) for ref, suffix in at.rows if ref == part.ref])
    row = at.row(part.ref)
    peak = max(abs(float(row[V_MIN])), abs(float(row[V_MAX])))
    alternating = float(np.sqrt(max(row[I_RMS] ** 2 - row[I_MEAN] ** 2, 0.0)))
    if part.kind in ("diode", "led"):
        return {"reverse_voltage": max(-float(row[V_MIN]), 0.0), "average_current": abs(float(row[I_MEAN])),
                "power": abs(float(row[POWER]))}
    if part.kind in ("primary_side_switcher", "buck_switcher"):
        return {"peak_voltage": peak, "peak_current": float(row[I_MAX]), "power": abs(float(row[POWER]))}
    if part.kind == "varistor":
        return {"rms_voltage": float(row[V_RMS]), "peak_voltage": peak, "power": abs(float(row[POWER]))}
    if part.kind == "zener":
        return {"power": abs(float(row[POWER]))}
    if part.kind == "bipolar_transistor":
        base = at.row(part.ref, "_be")
        return {"peak_voltage": peak, "peak_current": max(abs(float(row[I_MIN])), abs(float(row[I_MAX]))),
                "power": abs(float(row[POWER] + base[POWER]))}
    if part.kind == "electrolytic":
        return {"peak_voltage": peak, "ripple_current": alternating,
                "power": float(row[I_RMS]) ** 2 * part.value.get("esr", 0.0)}
    if "capacitance" in part.value:
        return {"peak_voltage": peak}
    return {"peak_voltage": peak, "power": abs(float(row[POWER])), "rms_current": float(row[I_RMS])}


def _bridge_stresses(legs: Sequence[np.ndarray]) -> dict[str, float]:
    """Reverse voltage of the worst diode, current out of the bridge (two of the four diodes share it), loss of all four."""
    return {"reverse_voltage": max(max(-float(leg[V_MIN]), 0.0) for leg in legs),
            "average_current": sum(abs(float(leg[I_MEAN])) for leg in legs) / 2.0,
            "power": sum(abs(float(leg[POWER])) for leg in legs)}


def thermal_stresses(part: Part, worst: Mapping[str, float]) -> dict[str, float]:
    """Temperature [degC] and, for an electrolytic, expected life [h], from the worst power and ripple."""
    power = worst.get("power", 0.0)
    if part.kind == "electrolytic":
        rated, ripple = part.ratings.get("ripple_current"), worst.get("ripple_current", 0.0)
        hottest = part.ratings.get("temperature", 105.0)
        if not rated:
            return {}
        core = INSIDE_AIR + 5.0 * (ripple / rated) ** 2
        return {"temperature": core,
                "life": float(life(part.ratings.get("life", RATED_LIFE), INSIDE_AIR, ripple, rated, rated_temperature=hottest))}
    if part.kind in ("resistor", "fusible_resistor") and part.ratings.get("power"):
        return {"temperature": float(resistor_hot_spot(INSIDE_AIR, power, part.ratings["power"]))}
    package = package_resistance(kind=part.kind)
    if package is None or part.kind in ("led", "transformer"):
        return {}
    return {"temperature": float(temperature_after(INSIDE_AIR, power, package.junction_ambient))}


def inrush_i2t(board: Board) -> dict[str, float]:
    """Melting integral of the cold start at the crest of the highest mains in each fuse and fusible resistor [A2s]."""
    fuses = [part.ref for part in board.parts if part.kind in ("fuse", "fusible_resistor")]
    if not fuses:
        return {}
    net = circuit(board, mains=board.mains.high, load=NO_LOAD)
    rows = {port.ref: index for index, port in enumerate(net.ports) if port.suffix == ""}
    compiled = compile_netlist(net)
    stretch = run_stretch(compiled, initial_state(compiled), 0.0, INRUSH_TIME, skip=0.0)
    span = INRUSH_TIME
    first = stretch.statistics
    return {ref: float(first[rows[ref], I_RMS]) ** 2 * span for ref in fuses}


def worst_stresses(board: Board, settled: Mapping[Condition, Settled],
                   inrush: Mapping[str, float] | None = None,
                   set_name: str | None = None) -> tuple[Stress, ...]:
    """Worst stress of every part over the corners, with rating, derating factor and source.

    ``set_name`` chooses the derating yardstick (see triage.physics.derating.SETS).
    """
    return tuple(stress for part in board.parts for stress in _of_part(part, settled, inrush or {}, set_name))


def _of_part(part: Part, settled: Mapping[Condition, Settled], inrush: Mapping[str, float],
             set_name: str | None) -> Iterable[Stress]:
    found: dict[str, tuple[float, str]] = {}
    for corner, at in settled.items():
        for quantity, value in part_stresses(part, at).items():
            if quantity not in found or value > found[quantity][0]:
                found[quantity] = (value, corner.name)
    if part.ref in inrush:
        found["i2t"] = (inrush[part.ref], "cold start at the crest of the highest mains")
    worst = {quantity: value for quantity, (value, _) in found.items()}
    for quantity, value in thermal_stresses(part, worst).items():
        found[quantity] = (value, f"air inside at {INSIDE_AIR:g} degC")
    for quantity, (value, where) in found.items():
        yield _stress(part, quantity, value, where, set_name)


def _stress(part: Part, quantity: str, value: float, where: str, set_name: str | None) -> Stress:
    key = RATING_OF.get(quantity)
    rating = part.ratings.get(key) if key else None
    if quantity == "temperature" and rating is None:
        rating = 155.0 if part.kind in ("resistor", "fusible_resistor") else 150.0 if part.kind != "electrolytic" else 105.0
    arguments = {} if set_name is None else {"chosen": set_name}
    found = derating(part.kind, part.role, quantity, rating, **arguments)
    return Stress(part.ref, quantity, float(f"{value:.6g}"), rating, found.factor, found.source, where)


def stresses(board: Board, corners: Iterable[Condition] | None = None, quality: Quality = FINE,
             progress: Callable[[int, int], None] | None = None) -> tuple[Stress, ...]:
    """Worst-case stresses of a sound board; slow: some seconds for each corner."""
    chosen = tuple(corners or conditions(board))
    settled = settle_corners(board, chosen, quality)
    if progress:
        progress(len(chosen), len(chosen))
    return worst_stresses(board, settled, inrush_i2t(board))
