"""The current a person draws from the output through the Y capacitors, and its limit.

The capacitors are taken from a mains pole to the output, the worst case: behind a bridge the rail follows
the line only half of the time and the reading is lower. What the meter shows is the current through the
measuring network of IEC 60990.
"""

import math
from dataclasses import dataclass

from triage.board.part import Board, Part
from triage.safety.insulation import rated_voltage
from triage.safety.limits import Source, source_of, table


def capacitor_current(capacitance: float, voltage: float, frequency: float) -> float:
    """Current [A rms] of a capacitor [F] on a voltage [V rms] at a frequency [Hz]: 2·pi·f·C·U.

    >>> round(capacitor_current(2.2e-9, 264.0, 60.0) * 1e3, 3)
    0.219
    """
    return 2.0 * math.pi * frequency * capacitance * voltage


def network_reading(capacitance: float, voltage: float, frequency: float) -> float:
    """Reading [A rms] of the perception/reaction network fed through a capacitor [F] from a voltage [V rms]
    at [Hz].

    U2 over the body resistance. Source: IEC 60990:2016, figure 4.
    """
    parts = table("touch_current")["network"]
    jw = 2j * math.pi * frequency
    skin = 1.0 / (1.0 / parts["series_ohm"] + jw * parts["series_F"])
    filter_branch = parts["filter_ohm"] + 1.0 / (jw * parts["filter_F"])
    body = 1.0 / (1.0 / parts["body_ohm"] + 1.0 / filter_branch)
    u1 = voltage * body / (1.0 / (jw * capacitance) + skin + body)
    u2 = u1 / (jw * parts["filter_F"]) / filter_branch
    return abs(complex(u2)) / parts["body_ohm"]


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
        network_reading(capacitance, voltage, frequency) if capacitance else 0.0,
        row["amps_rms"],
        voltage,
        capacitance,
        source_of(row),
    )
