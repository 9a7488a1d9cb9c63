"""The proof after a repair: what to do and measure, the limits for this adapter, and what the readings say.

A verdict takes the instrument's accuracy into account: pass, fail, or too close to call. Required lines must
pass before a job can be closed as repaired; a line that only touches performance may also be too close to
call, a safety line may not. What was not done is listed for the report.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import date
from typing import Any

from triage.board.part import Board
from triage.errors import TriageError
from triage.safety import uncertainty
from triage.safety.instruments import FUNCTIONS, Instruments
from triage.safety.insulation import is_isolated
from triage.safety.limits import Source, source_of, table
from triage.safety.output import guessed_kind
from triage.safety.retest_limits import LIMITS, Bounds, RetestCase

LOOK = "look"
"""Function of a line that is answered with yes (1) or no (0)."""


class RetestError(TriageError):
    """A retest line that is not of this board, or a reading that does not answer it."""


@dataclass(frozen=True, slots=True)
class RetestLine:
    """One line of the retest."""

    key: str
    title: str
    function: str
    """``look``, or a function of ``triage.safety.instruments``."""
    unit: str
    condition: str
    """``cold``, ``noload``, ``half`` or ``full``."""
    low: float | None
    """[SI]"""
    high: float | None
    """[SI]"""
    required: bool
    """True when the job cannot be closed as repaired without it."""
    before_power: bool
    """True when it must pass before the repaired adapter is powered."""
    safety: bool
    """True when too close to call does not count as passed."""
    note: str
    source: Source

    @property
    def live(self) -> bool:
        """True when the adapter is powered for it."""
        return self.condition != "cold"


@dataclass(frozen=True, slots=True)
class RetestResult:
    """What one reading of a line says."""

    key: str
    value: float
    """[SI]; 1 or 0 for a look."""
    uncertainty: float
    """Standard uncertainty [SI]; 0 for a look."""
    instrument: str
    """Name of the instrument; empty for a look."""
    verdict: str
    """``pass``, ``fail`` or ``too close to call``."""
    within: float
    """Probability that the true value lies within the limits [0..1]."""


def lines(board: Board, instruments: Instruments, today: date, connector: str = "") -> tuple[RetestLine, ...]:
    """The retest of a board with its limits, in the order to be done.

    ``connector``: kind of ``triage.safety.output``; empty: guessed from the label. Lines that only class I
    needs are left out of class II; lines whose meter the shop lacks stay, not required, so that the report
    can say they were not done.
    """
    case = RetestCase(board, connector or guessed_kind(board), today)
    have = set(instruments.can_read())
    return tuple(_line(row, case, have) for row in table("retest")["line"] if _applies(row, board))


def _applies(row: Mapping[str, Any], board: Board) -> bool:
    """Whether a line is meant for such an adapter: earthed or not, insulated from the mains or not."""
    barrier = "isolated" if is_isolated(board) else "not isolated"
    return (row["required"] != "class I" or board.label.insulation_class == "I") and row.get("when", barrier) == barrier


def _line(row: Mapping[str, Any], case: RetestCase, have: set[str]) -> RetestLine:
    condition = row.get("condition", "cold")
    bounds = LIMITS[row["limit"]](case, condition) if "limit" in row else Bounds(None, None, source_of(row))
    limited = row["kind"] == LOOK or bounds.low is not None or bounds.high is not None
    required = {"always": True, "class I": True, "never": False, "with meter": row["kind"] in have}[row["required"]]
    return RetestLine(
        row["key"],
        row["title"],
        row["kind"],
        FUNCTIONS.get(row["kind"], ""),
        condition,
        bounds.low,
        bounds.high,
        required and limited,
        row.get("before_power", False),
        row.get("safety", False),
        bounds.note,
        bounds.source,
    )


def judge(line: RetestLine, value: float, instruments: Instruments, standard_uncertainty: float | None = None) -> RetestResult:
    """What a reading [SI] says about its line; a look takes 1 (in order) or 0.

    ``standard_uncertainty`` [SI] overrides the shop's meter, for a reading taken elsewhere. A reading above
    the highest range (``inf``) passes a line that has only a lower limit when that range reaches the limit.
    Raises RetestError for a value that is no reading, InstrumentError when no meter reads the function.
    """
    if math.isnan(value) or (line.function == LOOK and value not in (0.0, 1.0)):
        raise RetestError(line.key, f"{value!r} is no answer", "1 or 0" if line.function == LOOK else "a reading")
    if line.function == LOOK:
        return RetestResult(line.key, value, 0.0, "", "pass" if value else "fail", value)
    name = "given with the reading"
    if standard_uncertainty is None:
        meter = instruments.best(line.function, value)
        standard_uncertainty = instruments.accuracy(line.function, value if math.isfinite(value) else 0.0)
        name = meter.instrument if meter else ""
        if math.isinf(value) and line.low is not None and instruments.highest(line.function) < line.low:
            return RetestResult(line.key, value, math.inf, name, "too close to call", 0.5)
    said = uncertainty.verdict(value, standard_uncertainty, line.low, line.high)
    within = uncertainty.conformity(value, standard_uncertainty, line.low, line.high)
    return RetestResult(line.key, value, standard_uncertainty, name, said, within)


def load_regulation(idle: RetestResult, full: RetestResult) -> tuple[float, float]:
    """Drop from no load to full load [V] and its standard uncertainty [V], from two output readings.

    The accuracy of one meter is the same error twice, so that the counts alone count; taken as independent
    here, which is the larger figure. JCGM 100:2008, 5.1.2.
    """
    inputs = (uncertainty.Contribution(idle.uncertainty), uncertainty.Contribution(full.uncertainty, -1.0))
    return idle.value - full.value, uncertainty.combined(inputs)


def counts_as_passed(line: RetestLine, verdict: str) -> bool:
    """True for a pass, and for too close to call on a line that only touches performance."""
    return verdict == "pass" or (verdict == "too close to call" and not line.safety)


def gate_verdict(line: RetestLine, verdict: str) -> str:
    """The verdict as the gates take it: ``pass`` where it counts as passed, else as it is."""
    return "pass" if counts_as_passed(line, verdict) else verdict


def still_required(all_lines: Iterable[RetestLine], verdicts: Mapping[str, str]) -> tuple[str, ...]:
    """Keys of the required lines that are not done or not passed, in order. ``verdicts``: line key -> last
    verdict."""
    return tuple(line.key for line in all_lines if line.required and not counts_as_passed(line, verdicts.get(line.key, "")))


def not_done(all_lines: Iterable[RetestLine], verdicts: Mapping[str, str]) -> tuple[str, ...]:
    """Titles of the lines that were not done, for the report."""
    return tuple(line.title for line in all_lines if line.key not in verdicts)


def gate_keys(all_lines: Iterable[RetestLine]) -> tuple[frozenset[str], frozenset[str], frozenset[str]]:
    """(before power, required, live) line keys, as ``triage.safety.gate.facts_for`` takes them."""
    kept = tuple(all_lines)
    return (
        frozenset(line.key for line in kept if line.before_power and line.required),
        frozenset(line.key for line in kept if line.required),
        frozenset(line.key for line in kept if line.live),
    )
