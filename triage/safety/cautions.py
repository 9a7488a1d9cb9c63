"""The cautions that fit the board on the mat, with its own numbers in them.

The words and the order are in ``cautions.toml``; this module computes the numbers and leaves out what does
not apply. A caution is acknowledged by its key, for its gate and for the day: see ``triage.safety.gate``.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from triage.board.part import Board
from triage.safety.discharge import Bleeder, ResistorKind, Store, across_line, bulk_store, propose_bleeder, stores
from triage.safety.insulation import is_isolated
from triage.safety.limits import Source, source_of, table
from triage.safety.power_up import first_power_up

GATES = ("cold", "live")
"""What a caution stands before: touching the board, powering it."""

FUSES = ("fuse", "fusible_resistor", "thermal_fuse")
"""Kinds of parts that take an adapter off the mains when it fails."""
_LONG = 3600.0
"""A time beyond which a number of seconds says less than the word hours [s]."""


@dataclass(frozen=True, slots=True)
class Caution:
    """One thing to know and to acknowledge before going on."""

    key: str
    gate: str
    """One of GATES."""
    text: str
    source: Source


def cautions(board: Board, resistors: Iterable[ResistorKind] | None = None) -> tuple[Caution, ...]:
    """The cautions of a board in the order to be shown, those before the cold gate first.

    ``resistors``: kinds the technician has for bleeding; None: those of an ordinary bench.
    """
    values = _values(board, None if resistors is None else tuple(resistors))
    return tuple(
        Caution(row["key"], row["gate"], row["text"].format_map(values), source_of(row))
        for row in table("cautions")["caution"]
        if row.get("when") is None or values.get(row["when"])
    )


def needed(board: Board, gate: str) -> frozenset[str]:
    """Keys of the cautions that stand before a gate (one of GATES)."""
    return frozenset(caution.key for caution in cautions(board) if caution.gate == gate)


def time_text(seconds: float) -> str:
    """A time as a person says it: ``40 ms``, ``8.4 s``, ``4 min``, ``hours``."""
    if seconds > _LONG:
        return "hours"
    if seconds >= 120.0:
        return f"{seconds / 60.0:.0f} min"
    return f"{seconds * 1e3:.0f} ms" if seconds < 0.1 else f"{seconds:.2g} s"


def ohms_text(resistance: float) -> str:
    """A resistance of a bench resistor in words: ``2.2 kohm``."""
    for size, unit in ((1e6, "Mohm"), (1e3, "kohm")):
        if resistance >= size:
            return f"{resistance / size:.3g} {unit}"
    return f"{resistance:.3g} ohm"


def bleeder_text(bleeder: Bleeder) -> str:
    """What to take from the drawer: ``2 x 100 kohm 0.25 W carbon film in series``."""
    kind = bleeder.resistor
    each = f"{ohms_text(bleeder.resistance_each)} {kind.power:g} W {kind.voltage:.0f} V {kind.kind}"
    return each if bleeder.count == 1 else f"{bleeder.count} x {each} in series"


def _values(board: Board, resistors: tuple[ResistorKind, ...] | None) -> Mapping[str, object]:
    """Everything a text may name, and the facts that make a caution apply."""
    held = stores(board)
    return {
        **_feed_values(board),
        **_bulk_values(bulk_store(board), resistors),
        **_line_values(next((store for store in held if across_line(store.role)), None)),
        "isolated_sides": is_isolated(board),
        "not_isolated": not is_isolated(board),
        "no_fuse": not any(part.kind in FUSES for part in board.parts),
        "primary_nodes": ", ".join(board.sides.get("primary", ())),
        "primary_ground": board.ground.get("primary", "its common line"),
        "secondary_ground": board.ground.get("secondary", "the output minus"),
    }


def _feed_values(board: Board) -> dict[str, object]:
    first = first_power_up(board)
    return {
        "lamp_watts": first.lamp_power,
        "lamp_milliamps": first.lamp_current * 1e3,
        "limit_milliamps": first.current_limit * 1e3,
        "input_milliamps": first.input_current * 1e3,
        "transformer_va": first.transformer_va,
        "load_ohm": first.load_resistance,
        "load_watts": first.load_power,
        "output_volts": board.label.output_voltage,
        "twice_volts": 2.0 * board.label.output_voltage,
    }


def _bulk_values(bulk: Store | None, resistors: tuple[ResistorKind, ...] | None) -> dict[str, object]:
    if bulk is None:
        return {}
    worst = f", {time_text(bulk.worst_time)} if {bulk.worst_ref} is open" if bulk.worst_ref else ""
    values: dict[str, object] = {
        "bulk": True,
        "bulk_ref": bulk.ref,
        "bulk_volts": bulk.voltage,
        "bulk_joule": bulk.energy,
        "bulk_grade": bulk.grade,
        "bulk_time": time_text(bulk.board_time),
        "bulk_worst": worst,
        "bulk_plus": bulk.plus,
        "bulk_minus": bulk.minus,
        "safe_volts": bulk.safe_voltage,
    }
    bleeder = propose_bleeder(bulk, resistors)
    if bleeder is not None:
        values |= {
            "bleeder": True,
            "bleed_text": bleeder_text(bleeder),
            "bleed_watts": bleeder.peak_power,
            "bleed_milliamps": bleeder.peak_current * 1e3,
            "bleed_time": time_text(bleeder.time_to(bulk.safe_voltage)),
        }
    return values


def _line_values(line: Store | None) -> dict[str, object]:
    if line is None:
        return {}
    allowed = table("discharge")["plug"]["seconds"]
    late = f" (more than the {allowed:.0f} s allowed: look for the discharge resistor)"
    return {
        "x_capacitor": True,
        "x_ref": line.ref,
        "x_volts": line.voltage,
        "x_time": time_text(line.board_time),
        "x_late": late if line.board_time > allowed else "",
        "x_safe": line.safe_voltage,
    }
