"""What the capacitors of the mains side still hold after unplugging, for how long, and what bleeds it.

Worst case throughout: charged to the crest of the highest mains, emptied only through what is on the board.
A bleed path on the board is never to be trusted, since its resistor may be the part that failed: the time is
also given with the one part open whose loss hurts most. The proposal takes the highest resistance that is
still quick enough, because that asks least of the resistor.
"""

import math
from collections.abc import Iterable
from dataclasses import dataclass

from triage.board.part import Board, Part
from triage.physics.capacitor_discharge import resistance_for_time, stored_energy, time_to_voltage
from triage.safety.leak_path import discharge_resistance
from triage.safety.limits import Source, source_of, table

_CAPACITORS = ("capacitor", "electrolytic", "x_capacitor")
_BULK_ROLES = ("bulk capacitor", "boost capacitor")
_ACROSS_LINE_ROLES = ("X capacitor", "X1 capacitor", "X2 capacitor", "dropper capacitor")
"""Roles, or parts of them, of capacitors that keep the plug pins charged; a dropper capacitor does through its rectifier."""
BOOST_VOLTAGE = 400.0
"""Usual output of a power-factor stage [V]; common practice, no source."""


def touch_safe_voltage(capacitance: float) -> float:
    """Voltage [V] below which a charged capacitor [F] counts as ES1. Source: IEC 62368-1:2018, table 7."""
    record = table("discharge")["charge_limit"]
    size, limit = record["capacitance_nF"], record["voltage_V"]
    nano = capacitance * 1e9
    if nano >= size[0]:
        return float(limit[0])
    if nano <= size[-1]:
        return float(limit[-1])
    i = next(i for i in range(1, len(size)) if size[i] <= nano)
    share = (size[i - 1] - nano) / (size[i - 1] - size[i])
    return float(limit[i - 1] + share * (limit[i] - limit[i - 1]))


@dataclass(frozen=True, slots=True)
class Store:
    """One capacitor that may still hold a dangerous voltage after unplugging."""

    ref: str
    role: str
    plus: str
    """Node of its positive end."""
    minus: str
    """Node of its negative end."""
    capacitance: float
    """[F], upper end of its tolerance."""
    voltage: float
    """Highest voltage it can be left with [V]."""
    energy: float
    """[J]"""
    safe_voltage: float
    """Voltage to be below before touching [V]."""
    board_time: float
    """Time to the safe voltage through the sound board [s]; ``inf`` when nothing discharges it."""
    worst_time: float
    """The same with the one part open whose loss hurts most [s]."""
    worst_ref: str
    """That part; empty where no part matters."""

    @property
    def grade(self) -> str:
        """``small``, ``painful`` or ``dangerous`` by the stored energy."""
        record = table("discharge")["energy"]
        if self.energy >= record["dangerous_J"]:
            return "dangerous"
        return "painful" if self.energy >= record["careful_J"] else "small"


def stores(board: Board) -> tuple[Store, ...]:
    """Every capacitor of the mains side that holds more than its touch-safe voltage, largest energy first."""
    found = [
        _store(board, part, voltage)
        for part in board.parts
        if part.kind in _CAPACITORS
        and _on_mains(part)
        and (voltage := _left_with(board, part)) > touch_safe_voltage(_largest(part))
    ]
    return tuple(sorted(found, key=lambda store: -store.energy))


def bulk_store(board: Board) -> Store | None:
    """The bulk capacitor that holds most, or None on a board without one (an iron transformer comes
    first)."""
    return next((store for store in stores(board) if any(r in store.role for r in _BULK_ROLES)), None)


def across_line(role: str) -> bool:
    """True for the role of a capacitor whose charge is found at the plug pins."""
    return any(known in role for known in _ACROSS_LINE_ROLES)


def _on_mains(part: Part) -> bool:
    return any(role in part.role for role in (*_BULK_ROLES, *_ACROSS_LINE_ROLES)) and "capacitance" in part.value


def _largest(part: Part) -> float:
    """Capacitance at the upper end of its tolerance, or of the spread where it is only estimated [F]."""
    return part.value["capacitance"] * part.spread.get("capacitance", 1.0 + part.tolerance.get("capacitance", 0.2))


def _left_with(board: Board, part: Part) -> float:
    """Highest voltage a capacitor can be left with [V]: the crest of the highest mains, or a boost stage's
    output."""
    crest = math.sqrt(2.0) * board.mains.high
    return max(crest, BOOST_VOLTAGE) if "boost" in part.role else crest


def _store(board: Board, part: Part, voltage: float) -> Store:
    plus, minus = tuple(part.pins.values())[:2]
    capacitance = _largest(part)
    safe = touch_safe_voltage(capacitance)
    # While the bulk capacitor is charged too, no junction helps an X capacitor to empty.
    through_junctions = not across_line(part.role)

    def time_without(ref: str) -> float:
        resistance = discharge_resistance(board, plus, minus, ref, through_junctions)
        return float(time_to_voltage(voltage, safe, resistance, capacitance))

    sound = time_without("")
    others = [(time_without(other.ref), other.ref) for other in board.parts if other.ref != part.ref]
    worst, worst_ref = max(others, default=(sound, ""))
    if worst <= sound * 1.01:
        worst, worst_ref = sound, ""
    energy = float(stored_energy(capacitance, voltage))
    return Store(part.ref, part.role, plus, minus, capacitance, voltage, energy, safe, sound, worst, worst_ref)


@dataclass(frozen=True, slots=True)
class ResistorKind:
    """One kind of resistor the technician has, whatever its ohms."""

    kind: str
    power: float
    """Rated power [W]."""
    voltage: float
    """Limiting element voltage [V]."""
    overload: float
    """First power of a pulse of up to 5 s over the rated power [-]."""


@dataclass(frozen=True, slots=True)
class Bleeder:
    """A resistor, or several in series, that empties a capacitor."""

    resistor: ResistorKind
    count: int
    """Resistors in series."""
    resistance_each: float
    """[ohm]"""
    voltage: float
    """Voltage over the chain at first [V]."""
    capacitance: float
    """[F]"""
    source: Source

    @property
    def resistance(self) -> float:
        """Resistance of the chain [ohm]."""
        return self.resistance_each * self.count

    @property
    def peak_current(self) -> float:
        """First current [A]."""
        return self.voltage / self.resistance

    @property
    def peak_power(self) -> float:
        """First power of the chain [W]."""
        return self.voltage**2 / self.resistance

    @property
    def time_constant(self) -> float:
        """[s]"""
        return self.resistance * self.capacitance

    def time_to(self, voltage: float) -> float:
        """Time to fall to a voltage [V] -> [s]."""
        return float(time_to_voltage(self.voltage, voltage, self.resistance, self.capacitance))


def shop_resistors() -> tuple[ResistorKind, ...]:
    """The resistor kinds of an ordinary bench, from the shipped table."""
    return tuple(ResistorKind(r["kind"], r["power_W"], r["voltage_V"], r["overload"]) for r in table("discharge")["resistor"])


def propose_bleeder(store: Store, kinds: Iterable[ResistorKind] | None = None) -> Bleeder | None:
    """The fewest and least loaded resistors of the technician's kinds that empty a capacitor in time, or
    None.

    Fewest in series first, then the kind with the smallest rated power that will do. Rules: first current at
    most 0.2 A, below the touch-safe voltage within 2 s, voltage and first power inside the kind's limits.
    """
    found = [b for kind in (shop_resistors() if kinds is None else kinds) if (b := _bleeder(store, kind)) is not None]
    return min(found, key=lambda b: (b.count, b.resistor.power, b.peak_power), default=None)


def _bleeder(store: Store, kind: ResistorKind) -> Bleeder | None:
    rule = table("discharge")["bleed"]
    most = float(resistance_for_time(rule["seconds"], store.voltage, store.safe_voltage, store.capacitance))
    for count in range(1, rule["count_max"] + 1):
        each = _step_below(most / count, rule["resistance_E12"])
        bleeder = Bleeder(kind, count, each, store.voltage, store.capacitance, source_of(rule))
        if (
            bleeder.peak_current <= rule["current_max_A"]
            and store.voltage / count <= kind.voltage
            and bleeder.peak_power / count <= kind.power * kind.overload
        ):
            return bleeder
    return None


def _step_below(resistance: float, series: list[float]) -> float:
    """Largest value of an E-series decade at or below a resistance, never above 1 Mohm (common stock)."""
    resistance = min(resistance, 1e6)
    decade = 10.0 ** math.floor(math.log10(resistance) + 1e-9)
    return decade * max(step for step in series if step * decade <= resistance * (1 + 1e-9))
