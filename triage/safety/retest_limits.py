"""The limits of the retest lines, computed for one board: each a lower and an upper bound with its source."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date

from triage.board.part import Board
from triage.safety import output
from triage.safety.energy import board_limits, region_of
from triage.safety.insulation import barrier
from triage.safety.limits import Source, source_of, table
from triage.safety.touch_current import touch_current


@dataclass(frozen=True, slots=True)
class Bounds:
    """What a reading must lie between."""

    low: float | None
    """[SI] None: no lower limit."""
    high: float | None
    """[SI] None: no upper limit."""
    source: Source
    note: str = ""
    """What else the technician should know about the limit."""


@dataclass(frozen=True, slots=True)
class RetestCase:
    """The board and what the limits depend on besides it."""

    board: Board
    connector: str
    """Connector kind of ``triage.safety.output``."""
    today: date


def _protective_conductor(case: RetestCase, condition: str) -> Bounds:
    record = table("retest")["protective_conductor"]
    return Bounds(None, record["ohm"], source_of(record), "up to 5 m of cord")


def _insulation(case: RetestCase, condition: str) -> Bounds:
    record = table("retest")["insulation"]
    own = record["class_I_ohm" if case.board.label.insulation_class == "I" else "class_II_ohm"]
    return Bounds(
        max(own, record["mains_to_output_ohm"]),
        None,
        source_of(record),
        f"at {record['test_V']:.0f} V dc; a sound adapter reads above 20 Mohm",
    )


def _electric_strength(case: RetestCase, condition: str) -> Bounds:
    """No limit for the bench; the type-test voltage of the adapter's own standard is told, for who may do
    it."""
    standard = barrier(case.board).standard
    rows = table("insulation")["electric_strength"]
    row = next((row for row in rows if row["standard"] == standard), rows[0])
    alternating = f"{row['reinforced_ac_V']:.0f} V ac or " if "reinforced_ac_V" in row else ""
    note = f"type test of {row['standard']}, mains to output: {alternating}{row['reinforced_dc_V']:.0f} V dc"
    return Bounds(None, None, source_of(row), note)


def _touch_current(case: RetestCase, condition: str) -> Bounds:
    found = touch_current(case.board)
    expected = f"; the Y capacitors alone give up to {found.expected * 1e3:.2g} mA" if found.expected else ""
    return Bounds(None, found.limit, found.source, f"at {found.voltage:.0f} V{expected}")


def _no_load_power(case: RetestCase, condition: str) -> Bounds:
    """The limit of the marked year; where the year is unknown or nothing held, that of today is told but not
    held."""
    then, now = board_limits(case.board, case.today, region_of(case.board))
    today = f"today {now.no_load:g} W ({now.level})" if now else "no limit today"
    if then is None:
        known = "no limit held when it was marked" if case.board.label.marked_year else "marked year unknown"
        source = now.source if now else Source("common practice", "no limit in force")
        return Bounds(None, None, source, f"{known}; {today}")
    return Bounds(None, then.no_load, then.source, f"{then.level} when marked; {today}")


def _output(case: RetestCase, condition: str) -> Bounds:
    found = output.window(case.connector, case.board.label.output_voltage, condition)
    return Bounds(found.low, found.high, found.source, case.connector)


def _load_regulation(case: RetestCase, condition: str) -> Bounds:
    share, volts = output.load_regulation_limit(case.connector), case.board.label.output_voltage
    return Bounds(
        None, share * volts, source_of(table("output")["load_regulation"]), f"{share:.0%} of the label; take the cable's drop off"
    )


def _ripple(case: RetestCase, condition: str) -> Bounds:
    found = output.window(case.connector, case.board.label.output_voltage, condition)
    return Bounds(None, found.ripple, found.source)


def _temperature(case: RetestCase, condition: str) -> Bounds:
    """The lowest rating among the electrolytics less a margin, since the case of one of them is read."""
    record = table("retest")["temperature"]
    rated = [
        part.ratings["temperature"] for part in case.board.parts if part.kind == "electrolytic" and "temperature" in part.ratings
    ]
    high = min(rated, default=record["unrated_degC"]) - record["below_rating_K"]
    return Bounds(None, high, source_of(record), "" if rated else "no rating read off: taken as 85 degC parts")


LIMITS: Mapping[str, Callable[[RetestCase, str], Bounds]] = {
    "protective conductor": _protective_conductor,
    "insulation": _insulation,
    "electric strength": _electric_strength,
    "touch current": _touch_current,
    "no-load power": _no_load_power,
    "output": _output,
    "load regulation": _load_regulation,
    "ripple": _ripple,
    "temperature": _temperature,
}
"""Key of a limit in retest.toml -> its computation."""
