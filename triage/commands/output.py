"""Prints answers: columns for a person, one JSON document for a script.

JSON has no infinity: an open end, or OL, is ``null`` there, and the ``text`` beside it says which. Text has
gone through ``plain`` already, and JSON escapes what is not ASCII, so that nothing on a terminal is moved or
coloured by a file.
"""

import csv
import json
import math
import sys
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import asdict, is_dataclass
from typing import Any

_FORMULA = ("=", "+", "-", "@")
"""What a spreadsheet takes a cell for a formula by."""


def print_json(answer: Any) -> None:
    """Write an answer (records, lists, tables) as one JSON document."""
    sys.stdout.write(json.dumps(_finite(answer), indent=1, allow_nan=False) + "\n")


def _finite(answer: Any) -> Any:
    if is_dataclass(answer) and not isinstance(answer, type):
        return _finite(asdict(answer))
    if isinstance(answer, dict):
        return {key: _finite(value) for key, value in answer.items()}
    if isinstance(answer, list | tuple):
        return [_finite(value) for value in answer]
    if isinstance(answer, float) and not math.isfinite(answer):
        return None
    return answer


def print_csv(rows: Sequence[Mapping[str, Any]]) -> None:
    """Write rows as CSV. A cell that a spreadsheet would take for a formula gets an apostrophe in front."""
    writer = csv.writer(sys.stdout, lineterminator="\n")
    if rows:
        writer.writerow(rows[0])
    for row in rows:
        cells = [str(value) for value in row.values()]
        writer.writerow(["'" + cell if cell.lstrip()[:1] in _FORMULA else cell for cell in cells])


def print_lines(lines: Iterable[str]) -> None:
    """Write lines of text."""
    sys.stdout.write("".join(f"{line}\n" for line in lines))


def columns(heads: Sequence[str], rows: Sequence[Sequence[str]]) -> list[str]:
    """Rows in aligned columns under their heads; the last column runs free."""
    table = [tuple(heads), *(tuple(row) for row in rows)]
    widths = [max(len(row[place]) for row in table) for place in range(len(heads))]
    return ["  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip() for row in table]


def percent(share: float) -> str:
    """A probability for the eye: ``97.3 %``, ``<0.1 %``."""
    return "<0.1 %" if 0 < share < 0.001 else f"{100 * share:.1f} %"
