"""The voltage window of an adapter's output by its kind of connector, at the plug.

The label names volts, the connector says how far off they may be. A thin cable eats volts at full load that
the board does deliver: ``cable_drop`` says how many.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from triage.board.part import Board
from triage.errors import TriageError
from triage.safety.limits import Source, source_of, table


class OutputKindError(TriageError):
    """A connector kind that is not in the table."""


@dataclass(frozen=True, slots=True)
class Window:
    """What an output may be under one load."""

    kind: str
    condition: str
    low: float
    """[V]"""
    high: float
    """[V]"""
    ripple: float
    """Highest peak-to-peak ripple [V]."""
    source: Source


def kinds() -> tuple[str, ...]:
    """Keys of the connector kinds."""
    return tuple(row["key"] for row in table("output")["kind"])


def guessed_kind(board: Board) -> str:
    """Connector kind by label and family, for when nobody has said: common practice, no source."""
    volts, power = board.label.output_voltage, board.label.output_voltage * board.label.output_current
    if board.family.startswith("linear") and not any("regulator" in part.role for part in board.parts):
        return "unregulated"
    if abs(volts - 5.0) < 0.15:
        return "USB since 2014" if (board.label.marked_year or 0) >= 2015 else "USB dedicated charger"
    return "laptop" if 16.0 <= volts <= 20.5 and power >= 30.0 else "barrel"


def window(kind: str, label_voltage: float, condition: str = "full") -> Window:
    """Window of a connector kind for a label voltage [V] and a load: ``noload``, ``half`` or ``full``.

    Raises OutputKindError for an unknown kind. An unregulated adapter stands between its no-load and
    full-load windows at half load.
    """
    row = next((row for row in table("output")["kind"] if row["key"] == kind), None)
    if row is None:
        raise OutputKindError("connector kind", repr(kind), ", ".join(kinds()))
    low, high = _limits(row, label_voltage, condition)
    return Window(kind, condition, low, high, row["ripple_share"] * label_voltage, source_of(row))


def _limits(row: Mapping[str, Any], volts: float, condition: str) -> tuple[float, float]:
    if "volts_min" in row:
        return row["volts_min"], row["volts_max"]
    low, high = volts * (1.0 - row["tolerance"]), volts * (1.0 + row["tolerance"])
    if "no_load_min" not in row or condition == "full":
        return low, high
    bottom, top = volts * row["no_load_min"], volts * row["no_load_max"]
    return (bottom, top) if condition == "noload" else (low, top)


def load_regulation_limit(kind: str) -> float:
    """Highest drop from no load to full load over the label voltage [-]."""
    row = next(row for row in table("output")["kind"] if row["key"] == kind)
    if "no_load_max" in row:
        return float(row["no_load_max"] - 1.0 + row["tolerance"])
    return float(row.get("load_regulation", table("output")["load_regulation"]["share"]))


def cable_drop(current: float, length: float, gauge: str = "AWG28") -> float:
    """Volts lost in both conductors of a cable [m] at a current [A]. Source: copper wire sizes of ASTM B258,
    20 degC.

    >>> round(cable_drop(1.0, 1.0), 3)
    0.426
    """
    return 2.0 * current * length * float(table("output")["cable"][gauge])
