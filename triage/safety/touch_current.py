"""The current a person draws from the output through the Y capacitors, and its limit.

The capacitors are taken from a mains pole to the output, the worst case: behind a bridge the rail follows
the line only half of the time and the reading is lower. What the meter shows is the current through the
measuring network of IEC 60990.
"""

from dataclasses import dataclass

from triage.board.part import Board, Part
from triage.physics.y_capacitor import touch_reading
from triage.safety.insulation import rated_voltage
from triage.safety.limits import Source, source_of, table


@dataclass(frozen=True, slots=True)
class TouchCurrent:
    """Touch current of one adapter: expected and allowed."""

    expected: float
    """Reading to expect from the Y capacitors [A rms]; 0 without one."""
    limit: float
    """[A rms]"""
    voltage: float
    """Voltage of the test [V rms]."""
    capacitance: float
    """All Y capacitors across the barrier [F]."""
    source: Source


def bridges_barrier(board: Board, part: Part) -> bool:
    """True for a capacitor with one end on the primary and one on the secondary side."""
    if "capacitance" not in part.value:
        return False
    return {board.side_of(node) for node in part.pins.values()} >= {"primary", "secondary"}


def touch_current(board: Board) -> TouchCurrent:
    """Expected and allowed touch current of a board's output, at 110 % of its rated voltage.

    The limit is the strictest that holds for the marked year and the class, with that after repair; a class
    I output is taken as movable equipment.
    """
    tables = table("touch_current")
    capacitance = sum(
        part.value["capacitance"] * (1.0 + part.tolerance.get("capacitance", 0.0))
        for part in board.parts
        if bridges_barrier(board, part)
    )
    voltage = rated_voltage(board) * tables["test_voltage"]["factor"]
    frequency = 60.0 if "60" in board.label.input else board.mains.frequency
    case = "class I movable" if board.label.insulation_class == "I" else "class II output"
    year = board.label.marked_year or 0
    rows = [row for row in tables["limit"] if row["case"] == case and row["from_year"] <= year]
    newest = {row["standard"]: row for row in rows}
    if "IEC 62368-1" in newest:
        newest.pop("IEC 60950-1")
    row = min(newest.values(), key=lambda row: row["amps_rms"])
    return TouchCurrent(
        float(touch_reading(capacitance, voltage, frequency).weighted) if capacitance else 0.0,
        row["amps_rms"],
        voltage,
        capacitance,
        source_of(row),
    )
