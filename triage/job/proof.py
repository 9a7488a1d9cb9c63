"""The proof after a repair, as a job sees it: the lines of the safety room, and what the log says on each.

The limits are those in force when the job was opened, so that a job is judged alike whenever it is read.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from triage.board.part import Board
from triage.errors import EntryError
from triage.job.display import plain
from triage.job.views import RetestView
from triage.job.workshop import shop_instruments
from triage.quantities import engineering, parse_reading
from triage.safety.retest import LOOK, RetestLine, gate_verdict, judge, lines
from triage.safety.uncertainty import rectangular
from triage.units import UNITS

_ANSWERS = {"yes": 1.0, "no": 0.0, "ok": 1.0, "pass": 1.0, "fail": 0.0}
"""What may be typed for a line that is looked at."""

BORROWED_ERROR = 0.05
"""Limit of error taken for an instrument that is not in the shop's list [-]; common practice, no source."""


@dataclass(frozen=True, slots=True)
class Answer:
    """What a line of the retest has come to."""

    value: float
    """[SI]; 1 or 0 for a look."""
    verdict: str
    """``pass``, ``fail`` or ``too close to call``, by the meter's accuracy."""
    counts_as: str
    """The same as the gates take it: too close to call passes a line that only touches performance."""
    instrument: str


def lines_of(board: Board, opened: str) -> tuple[RetestLine, ...]:
    """The retest of a board. opened: when the job was opened, ISO 8601; today where it does not say."""
    try:
        day = date.fromisoformat(opened[:10])
    except ValueError:
        day = date.today()
    return lines(board, shop_instruments(), day)


def answer(all_lines: tuple[RetestLine, ...], key: str, text: str) -> Answer:
    """What a typed answer says about a line. Raises EntryError naming the lines, or what may be typed."""
    line = next((one for one in all_lines if one.key == key), None)
    if line is None:
        raise EntryError("retest", f"{plain(key, 40)!r}", "one of " + ", ".join(one.key for one in all_lines))
    if line.function == LOOK:
        if text.strip().lower() not in _ANSWERS:
            raise EntryError(f"retest {key}", f"{plain(text, 40)!r}", "yes (in order) or no")
        value = _ANSWERS[text.strip().lower()]
    else:
        value = parse_reading(text, line.unit)
    if line.function == LOOK or line.function in shop_instruments().can_read():
        result = judge(line, value, shop_instruments())
        instrument = result.instrument
    else:
        error = rectangular(BORROWED_ERROR * abs(value)) if math.isfinite(value) else math.inf
        result, instrument = judge(line, value, shop_instruments(), error), "borrowed instrument"
    return Answer(value, result.verdict, gate_verdict(line, result.verdict), instrument)


def shown(all_lines: tuple[RetestLine, ...], results: Mapping[str, str]) -> tuple[RetestView, ...]:
    """The lines with their limits in words and their results. results: line key -> last result."""
    return tuple(
        RetestView(
            one.key,
            plain(one.title),
            one.function,
            one.condition,
            one.unit,
            limit_text(one),
            one.required,
            plain(str(one.source)),
            plain(one.note),
            results.get(one.key, ""),
        )
        for one in all_lines
    )


def limit_text(line: RetestLine) -> str:
    """The limits of a line in words."""
    if line.function == LOOK:
        return "in order"

    def show(value: float) -> str:
        return engineering(value, line.unit) if line.unit in UNITS else f"{value:.4g} {line.unit}"

    low = line.low if line.low is not None and math.isfinite(line.low) else None
    high = line.high if line.high is not None and math.isfinite(line.high) else None
    if low is not None and high is not None:
        return f"{show(low)} to {show(high)}"
    if low is not None:
        return f"at least {show(low)}"
    return f"at most {show(high)}" if high is not None else "to be recorded"
