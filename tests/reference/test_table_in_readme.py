"""README's table of outside checks against its own sums and against what this run has checked; runs after all other tests.

Make it anew with the two commands at the head of ``write_table.py``.
"""

import datetime
import re

import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.write_table import AREAS, BEGIN, END, HEAD, README, Area, condense

TABLE = README.read_text("utf-8").partition(BEGIN)[2].partition(END)[0]
ROWS = [[cell.strip() for cell in line.strip("|").split("|")] for line in TABLE.splitlines() if line.startswith("|")]
CHECKS = {row[0]: int(row[2]) for row in ROWS[2:]}
GROWTH, FEW = 1.25, 10
"""The table is stale when an area has grown by more than a quarter and ten checks: it need not follow every single one. As few
may belong to no area."""


@pytest.fixture
def ran(outside_check: OutsideChecks) -> dict[str, Area]:
    """What this run has checked, by area."""
    if not outside_check.rows:
        pytest.skip("no outside check ran before")
    return condense("\n".join("|".join(line) for line in outside_check.lines()))


def test_its_lines_are_the_areas_with_their_sums_and_a_date() -> None:
    assert tuple(ROWS[0]) == HEAD
    order = [name for name, _ in AREAS]
    assert list(CHECKS) == sorted(CHECKS, key=order.index)
    told = re.search(r"(\d+) checks against (\d+) sources, 0 failed; .* Made on (\S+)\.\n", TABLE)
    assert told and int(told[1]) == sum(CHECKS.values())
    assert datetime.date.fromisoformat(told[3]) >= datetime.date(2026, 12, 1)
    assert int(told[1]) >= 250 and int(told[2]) >= 20


def test_every_area_of_this_run_stands_in_it(ran: dict[str, Area]) -> None:
    missing = {name: area.checks for name, area in ran.items() if name not in CHECKS and (name != "other" or area.checks > FEW)}
    assert not missing, "give the subject an area, or make README's table anew, see write_table.py"


def test_it_tells_about_as_many_checks_as_there_are(ran: dict[str, Area]) -> None:
    """A run without the long checks has fewer; a table that tells many more than a whole run is stale as well."""
    grown = {name: (area.checks, CHECKS.get(name, 0)) for name, area in ran.items()
             if name in CHECKS and area.checks > GROWTH * CHECKS[name] + FEW}
    assert not grown, "make README's table anew, see write_table.py"
    if set(ran) == set(CHECKS):
        assert sum(CHECKS.values()) <= GROWTH * sum(area.checks for area in ran.values())
