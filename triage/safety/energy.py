"""No-load power and average efficiency that an adapter must keep, by its nameplate and the day it was sold.

Two questions: what held when the adapter was marked, by which it is judged, and what holds today, which is
told beside it. A marked year alone counts from its first day, in favour of the adapter.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date
from typing import Any

from triage.board.part import Board
from triage.safety.limits import Source, source_of, table
from triage.safety.power_up import rated_power

REGIONS = ("EU", "US")


@dataclass(frozen=True, slots=True)
class EnergyLimit:
    """The limits of one level for one nameplate."""

    level: str
    supply_class: str
    """``basic``, ``low voltage``, ``ac output``, ``multiple`` or ``all``."""
    no_load: float
    """Highest input power with nothing connected [W]."""
    average: float
    """Least mean of the efficiencies at 25, 50, 75 and 100 % of rated current [-]."""
    source: Source


def supply_class(output_voltage: float, output_current: float) -> str:
    """``low voltage`` below 6 V [V] with at least 0.55 A [A], else ``basic``. Source: (EU) 2019/1782,
    article 2."""
    rule = table("energy")["low_voltage"]
    low = output_voltage < rule["volts_below"] and output_current >= rule["amps_from"]
    return "low voltage" if low else "basic"


def level_limit(level: str, supply: str, power: float) -> EnergyLimit | None:
    """Limits of a level for a class and nameplate power [W]; None where the level says nothing about it.

    >>> round(level_limit("EU 2019/1782", "low voltage", 5.0).average, 4)
    0.7362
    """
    row = next(
        (row for row in table("energy")["level"] if row["name"] == level and row["class"] in (supply, "all")),
        None,
    )
    return None if row is None else _limit(row, supply, power)


def levels() -> tuple[str, ...]:
    """Names of all levels, newest first as in the table."""
    return tuple(dict.fromkeys(row["name"] for row in table("energy")["level"]))


def limit_in_force(supply: str, power: float, day: date, region: str = "EU") -> EnergyLimit | None:
    """The limits that held for an adapter first sold on a day in a region (REGIONS); None where none did."""
    dated = [
        (step["day"], row)
        for row in table("energy")["level"]
        for step in row["in_force"]
        if step["region"] == region and step["day"] <= day and row["class"] in (supply, "all")
    ]
    if not dated:
        return None
    return _limit(max(dated, key=lambda pair: pair[0])[1], supply, power)


def board_limits(board: Board, today: date, region: str = "EU") -> tuple[EnergyLimit | None, EnergyLimit | None]:
    """What held when a board's adapter was marked (None: unknown year, or nothing held), and what holds
    today."""
    label = board.label
    supply, power = supply_class(label.output_voltage, label.output_current), rated_power(board)
    then = None
    if label.marked_year is not None:
        then = limit_in_force(supply, power, date(label.marked_year, 1, 1), region)
    return then, limit_in_force(supply, power, today, region)


def region_of(board: Board) -> str:
    """Whose limits to judge by: US for a supply made for 120 V mains alone, else EU."""
    return "US" if board.mains.high < 200.0 else "EU"


def _limit(row: Mapping[str, Any], supply: str, power: float) -> EnergyLimit | None:
    idle = next((step["watts"] for step in row["no_load"] if power <= step["watts_max"]), None)
    step = next((step for step in row["average"] if power <= step["watts_max"]), None)
    if idle is None or step is None:
        return None
    average = step["linear"] * power + step["log"] * math.log(power) + step["constant"]
    return EnergyLimit(row["name"], supply, idle, average, source_of(row))
