"""Reads the keys of a file and collects what is wrong with them, so that one run shows all faults of it."""

import math
from collections.abc import Mapping, Sequence
from typing import Any

from triage.errors import ProfileError, QuantityError
from triage.quantities import parse

MAX_TEXT = 4000


class Check:
    """Reads keys and collects what is wrong with them, so that one run shows all faults of a file."""

    def __init__(self, where: str) -> None:
        self.where = where
        self.faults: list[str] = []

    def fault(self, key: str, found: object, expected: str) -> None:
        """Note one fault."""
        shown = "".join(c if c.isprintable() else "?" for c in repr(found)[:60])
        self.faults.append(f"{key}: found {shown}, expected {expected}")

    def finish(self) -> None:
        """Raise everything that was noted."""
        if self.faults:
            more = f" (and {len(self.faults) - 8} more)" if len(self.faults) > 8 else ""
            raise ProfileError(self.where, "; ".join(self.faults[:8]) + more)

    def table(self, content: Mapping[str, Any], key: str, at: str = "") -> Mapping[str, Any]:
        """A table, empty when it is missing or something else."""
        value = content.get(key)
        if isinstance(value, Mapping):
            return value
        self.fault(f"{at} {key}".strip(), value, "a table")
        return {}

    def rows(self, content: Mapping[str, Any], key: str, most: int) -> Sequence[Mapping[str, Any]]:
        """A list of tables of limited length."""
        value = content.get(key)
        if not isinstance(value, list) or not value or not all(isinstance(row, Mapping) for row in value):
            self.fault(key, type(value).__name__, f"one or more [[{key}]] tables")
            return []
        if len(value) > most:
            self.fault(key, f"{len(value)} entries", f"at most {most}")
        return value[:most]

    def text(self, content: Mapping[str, Any], key: str, at: str = "", default: str | None = None) -> str:
        """A text of sensible length."""
        value = content.get(key, default)
        if isinstance(value, str) and len(value) <= MAX_TEXT and (value or default is not None):
            return value
        self.fault(f"{at} {key}".strip(), value, f"a text of 1 to {MAX_TEXT} characters")
        return ""

    def quantity(self, content: Mapping[str, Any], key: str, unit: str, at: str = "",
                 default: float | None = None, lowest: float = 0.0) -> float:
        """A finite number in SI, above ``lowest``; strings are read with their unit."""
        value = content.get(key, default)
        number = math.nan
        if isinstance(value, str):
            try:
                number = parse(value, unit or "1")
            except QuantityError:
                number = math.nan
        elif isinstance(value, int | float) and not isinstance(value, bool):
            number = float(value)
        if not math.isfinite(number) or number <= lowest:
            self.fault(f"{at} {key}".strip(), value, f"a value above {lowest:g} in {unit or 'plain numbers'}")
            return 1.0
        return number
