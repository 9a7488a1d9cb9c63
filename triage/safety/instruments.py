"""The shop's meters: what can be read with them, in which ranges, how truly, and with what test current.

One TOML file; its head explains the fields. All faults of a file are told together. The limit of error of a
meter is a percentage of the reading plus counts of its last digit; as a rectangular distribution it gives
the standard uncertainty.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from triage.board.probe import UNITS
from triage.errors import TriageError
from triage.safety.limits import Source
from triage.safety.uncertainty import rectangular
from triage.toml_guard import read_toml

FUNCTIONS: Mapping[str, str] = {
    **UNITS,
    "insulation_ohms": "ohm",
    "touch_amps": "A",
    "temperature": "degC",
    "millimetres": "m",
}
"""Function key -> SI unit: those of readings, and those of the retest and the inspection."""

SHIPPED = Path(__file__).resolve().parent / "instruments.toml"
"""The bench of someone who has told nothing: a hand multimeter and a calliper."""


class InstrumentError(TriageError):
    """An instruments file with a fault in it, or a reading that no instrument can take."""


@dataclass(frozen=True, slots=True)
class Range:
    """One range of one function."""

    full_scale: float
    """[SI]"""
    share: float
    """Accuracy, share of the reading [-]."""
    counts: float
    """Accuracy, counts of the last digit."""
    count_size: float
    """One count [SI]."""
    test_current: float | None
    """Current through the part [A], where known."""


@dataclass(frozen=True, slots=True)
class Function:
    """What one instrument can read."""

    instrument: str
    key: str
    """One of FUNCTIONS."""
    ranges: tuple[Range, ...]
    """Smallest first."""
    offset: float
    """Constant error, such as the leads [SI]."""
    test_voltage: float | None
    """Open-circuit voltage [V], where known."""
    source: Source
    constant_current: bool = False
    """Ohms: True for a meter that drives its test current through the part, False for one that puts its voltage on it through a
    resistor."""
    series_value: bool = False
    """Capacitance: True for a bridge that shows the series value, False for the parallel one."""
    frequency: float | None = None
    """Of the test signal [Hz], where known."""

    def range_for(self, value: float) -> Range | None:
        """The smallest range that shows a value [SI]; None above the last one (OL)."""
        return next((r for r in self.ranges if abs(value) <= r.full_scale), None)

    def limit_of_error(self, value: float) -> float:
        """Limit of error at a reading [SI]; ``inf`` above the last range.

        Percentage of reading plus counts plus the constant error.
        """
        found = self.range_for(value)
        if found is None:
            return math.inf
        return abs(value) * found.share + found.counts * found.count_size + self.offset


@dataclass(frozen=True, slots=True)
class Instruments:
    """All meters of a shop."""

    functions: tuple[Function, ...]

    def best(self, key: str, value: float) -> Function | None:
        """The function of a key with the smallest error at a value [SI]; None when no meter reads it at
        all."""
        able = [function for function in self.functions if function.key == key]
        return min(able, key=lambda function: function.limit_of_error(value), default=None)

    def accuracy(self, key: str, value: float) -> float:
        """Standard uncertainty of the best meter at a value [SI]: limit of error over the square root of
        three.

        ``inf`` above its ranges. Raises InstrumentError when no meter reads the function.
        """
        function = self.best(key, value)
        if function is None:
            raise InstrumentError(
                "instruments",
                f"nothing here reads {key}",
                ", ".join(self.can_read()),
                "add the meter to the instruments file",
            )
        return rectangular(function.limit_of_error(value))

    def can_read(self) -> tuple[str, ...]:
        """Function keys that can be asked for, in the order of FUNCTIONS."""
        have = {function.key for function in self.functions}
        return tuple(key for key in FUNCTIONS if key in have)

    def highest(self, key: str) -> float:
        """Highest value a function shows before OL [SI]; 0 when no meter reads it."""
        return max((f.ranges[-1].full_scale for f in self.functions if f.key == key), default=0.0)


def load(path: Path = SHIPPED) -> Instruments:
    """Read an instruments file. Raises InstrumentError with all faults of the file in one line."""
    content, _ = read_toml(path, InstrumentError, path.name)
    faults: list[str] = []
    functions = []
    records = content.get("instrument")
    if not isinstance(records, list) or not records:
        raise InstrumentError(path.name, "holds no [[instrument]]", "at least one")
    for number, record in enumerate(records, start=1):
        name = str(record.get("name", f"instrument {number}")) if isinstance(record, dict) else f"instrument {number}"
        rows = record.get("function", []) if isinstance(record, dict) else []
        for row in rows if isinstance(rows, list) else []:
            function = _function(name, row, faults)
            if function is not None:
                functions.append(function)
    if faults:
        raise InstrumentError(path.name, "; ".join(faults), advice="see the head of the shipped instruments.toml")
    return Instruments(tuple(functions))


def _function(name: str, row: Mapping[str, Any], faults: list[str]) -> Function | None:
    """One function of a record; what is wrong with it goes to ``faults``."""
    key = row.get("key") if isinstance(row, dict) else None
    if not isinstance(key, str) or key not in FUNCTIONS:
        faults.append(f"{name}, key {key!r}: expected one of {', '.join(FUNCTIONS)}")
        return None
    where, before = f"{name}, {key}", len(faults)
    scales = _numbers(row, "ranges", where, faults)
    if scales != sorted(set(scales)) or any(scale <= 0.0 for scale in scales):
        faults.append(f"{where}: ranges must be above 0 and rise")
    share, counts, size = (_column(row, column, len(scales), where, faults) for column in ("percent", "counts", "count_size"))
    current = _column(row, "test_current_A", len(scales), where, faults) if "test_current_A" in row else []
    for column in ("offset", "test_voltage_V", "frequency_Hz"):
        if not _is_number(row.get(column, 0.0)):
            faults.append(f"{where}: {column} must be a number")
        elif column != "offset" and column in row and row[column] <= 0.0:
            faults.append(f"{where}: {column} must be above 0")
    for flag in ("constant_current", "series_value"):
        if not isinstance(row.get(flag, False), bool):
            faults.append(f"{where}: {flag} must be true or false")
    if row.get("constant_current") is True and not all(value > 0.0 for value in current or [0.0]):
        faults.append(f"{where}: constant_current needs test_current_A above 0")
    if len(faults) > before:
        return None
    ranges = tuple(
        Range(scale, share[i] / 100.0, counts[i], size[i], current[i] if current else None) for i, scale in enumerate(scales)
    )
    source = Source(
        str(row.get("document", "instruments file")),
        str(row.get("clause", "")),
        str(row.get("confidence", "from memory")),
    )
    return Function(
        name,
        key,
        ranges,
        float(row.get("offset", 0.0)),
        row.get("test_voltage_V"),
        source,
        row.get("constant_current", False),
        row.get("series_value", False),
        row.get("frequency_Hz"),
    )


def _column(row: Mapping[str, Any], column: str, count: int, where: str, faults: list[str]) -> list[float]:
    """A value for each range; a single value holds for all."""
    values = _numbers(row, column, where, faults)
    if any(value < 0.0 for value in values):
        faults.append(f"{where}: {column} must not be below 0")
    if len(values) == 1:
        return values * count
    if values and len(values) != count:
        faults.append(f"{where}: {column} needs 1 or {count} values, has {len(values)}")
    return values


def _numbers(row: Mapping[str, Any], column: str, where: str, faults: list[str]) -> list[float]:
    values = row.get(column)
    if not isinstance(values, list) or not values or not all(_is_number(v) for v in values):
        faults.append(f"{where}: {column} must be a list of numbers")
        return []
    return [float(value) for value in values]


def _is_number(value: object) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and math.isfinite(value)


def missing(instruments: Instruments, keys: Iterable[str]) -> tuple[str, ...]:
    """Those of some function keys that no meter of the shop reads."""
    have = set(instruments.can_read())
    return tuple(key for key in keys if key not in have)
