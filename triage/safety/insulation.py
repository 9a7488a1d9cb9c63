"""The distances that keep the mains away from the output, from the tables of the insulation standards.

Lengths are metres inside, as everywhere; the table file holds millimetres as the standards print them. The
general tables of IEC 60664-1 serve any working voltage; a mains barrier is judged by the fixed figures of
the product standard that held when the adapter was marked, never below what the tables give for its own
rated voltage.
"""

import math
import re
from dataclasses import dataclass

from triage.board.part import Board
from triage.errors import TriageError
from triage.safety.limits import Source, source_of, table

GROUPS = ("I", "II", "III")
"""Material groups by comparative tracking index: 600 and above, 400 to 600, below 400 (taken when
unknown)."""
GRADES = ("functional", "basic", "reinforced")


class InsulationRangeError(TriageError):
    """A voltage, altitude or class outside the printed table."""


def rated_impulse(line_to_neutral: float, category: str = "II") -> float:
    """Rated impulse voltage [V peak] for a mains line-to-neutral voltage [V rms] and overvoltage category (I
    to IV).

    The next printed row at or above the voltage. Source: IEC 60664-1:2007, table F.1.

    >>> rated_impulse(230.0)
    2500.0
    """
    record = table("insulation")["rated_impulse"]
    for row, impulse in zip(record["line_to_neutral_V"], record[category], strict=True):
        if line_to_neutral <= row:
            return float(impulse)
    raise InsulationRangeError("mains voltage", f"{line_to_neutral:g} V", "at most 1000 V")


def clearance(impulse: float, pollution_degree: int = 2, grade: str = "basic", altitude: float = 0.0) -> float:
    """Least clearance [m] for an impulse voltage [V peak], pollution degree 1 to 3, grade and altitude [m].

    Reinforced: the next preferred impulse voltage, or 160 % of one that is not preferred. Linear between
    rows; above 2000 m times the altitude factor. Source: IEC 60664-1:2007, tables F.2 (case A) and A.2,
    5.1.6.
    """
    record = table("insulation")["clearance"]
    if grade == "reinforced":
        preferred = record["preferred_impulse_V"]
        impulse = next((v for v in preferred if v > impulse), math.inf) if impulse in preferred else 1.6 * impulse
    column = record[f"PD{pollution_degree}_mm"]
    impulse = max(impulse, record["impulse_V"][0])
    return _interpolated(impulse, record["impulse_V"], column, "impulse voltage") * 1e-3 * altitude_factor(altitude)


def altitude_factor(altitude: float) -> float:
    """Factor on the clearance for an altitude [m], 1 up to 2000 m. Source: IEC 60664-1:2007, table A.2."""
    record = table("insulation")["altitude"]
    return _interpolated(max(altitude, record["altitude_m"][0]), record["altitude_m"], record["factor"], "altitude")


def creepage(working_voltage: float, group: str = "III", pollution_degree: int = 2, grade: str = "basic") -> float:
    """Least creepage distance [m] for a working voltage [V rms], material group (GROUPS) and pollution
    degree 2 or 3.

    Linear between rows, rounded up to 0.1 mm; reinforced twice the rounded basic value. Not for printed
    wiring under coating. Source: IEC 60664-1:2007, table F.5.

    >>> round(creepage(230.0, grade="reinforced") * 1e3, 3)
    4.6
    """
    tables = table("insulation")
    record, rule = tables["creepage"][f"PD{pollution_degree}"], tables["reinforced_creepage"]
    rows = record["working_V"]
    basic = _interpolated(max(working_voltage, rows[0]), rows, record[f"{group}_mm"], "working voltage")
    if working_voltage not in rows:
        basic = math.ceil(round(basic / rule["step_mm"], 9)) * rule["step_mm"]
    return basic * 1e-3 * (rule["factor"] if grade == "reinforced" else 1.0)


def _interpolated(x: float, xs: list[float], ys: list[float], what: str) -> float:
    if not xs[0] <= x <= xs[-1]:
        raise InsulationRangeError(what, f"{x:g} is outside the printed table", f"{xs[0]:g} to {xs[-1]:g}")
    i = next(i for i in range(1, len(xs)) if x <= xs[i])
    return ys[i - 1] + (x - xs[i - 1]) / (xs[i] - xs[i - 1]) * (ys[i] - ys[i - 1])


@dataclass(frozen=True, slots=True)
class Barrier:
    """What the insulation of one adapter must offer."""

    standard: str
    grade: str
    clearance: float
    """[m]"""
    creepage: float
    """[m]"""
    rework_creepage: float
    """What to keep after rework on the board [m]."""
    source: Source


def is_isolated(board: Board) -> bool:
    """True where a barrier parts the output from the mains; an output on the mains side has none."""
    return "primary" in board.sides and "secondary" in board.sides


def rated_voltage(board: Board) -> float:
    """Highest rated mains voltage [V rms]: the upper figure of the label's input line, else the nominal
    mains.

    Standards count the rated voltage, not its tolerance. A label figure is taken between 90 and 300 V.
    """
    figures = [float(text) for text in re.findall(r"\d+(?:\.\d+)?", board.label.input.partition("Hz")[0])]
    return max([board.mains.nominal, *(v for v in figures if 90.0 <= v <= 300.0)])


def barrier(
    board: Board,
    grade: str = "reinforced",
    group: str = "III",
    pollution_degree: int = 2,
    altitude: float = 0.0,
) -> Barrier:
    """The mains-to-output barrier of a board, or its basic or functional insulation (GRADES).

    Mains above 150 V: the clearance of the product standard that held in the marked year (unknown: the older
    one, whose clearance is the longer) and the longer of its creepage and the table value for the rated
    voltage. Mains up to 150 V, other material groups and pollution degrees: IEC 60664-1 alone.
    """
    tables = table("insulation")
    year, volts = board.label.marked_year or 0, rated_voltage(board)
    rows = [row for row in tables["barrier"] if row["grade"] == grade and row["from_year"] <= year]
    row = max(rows, key=lambda row: row["from_year"])
    path = creepage(volts, group, pollution_degree, grade)
    if volts > 150.0:
        gap = row["clearance_mm"] * 1e-3 * altitude_factor(altitude)
        if group == "III" and pollution_degree == 2:
            path = max(path, row["creepage_mm"] * 1e-3)
        standard, source = row["standard"], source_of(row)
    else:
        gap = clearance(rated_impulse(volts), pollution_degree, grade, altitude)
        standard, source = "IEC 60664-1", source_of(tables["creepage"][f"PD{pollution_degree}"])
    path = max(path, gap)
    return Barrier(standard, grade, gap, path, max(path, tables["rework"]["least_mm"] * 1e-3), source)


def through_insulation() -> float:
    """Least distance through a single solid layer of reinforced insulation [m]. Source: IEC 60950-1,
    2.10.5.2."""
    return float(table("insulation")["through_insulation"]["least_mm"]) * 1e-3
