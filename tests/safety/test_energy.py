"""Energy limits by nameplate, day and region."""

from datetime import date

import pytest

from tests.safety.boards import brick, charger
from triage.safety import energy


def test_cube_is_a_low_voltage_supply() -> None:
    assert energy.supply_class(5.0, 0.6) == "low voltage"
    assert energy.supply_class(5.0, 0.5) == "basic"
    assert energy.supply_class(6.0, 2.0) == "basic"


@pytest.mark.parametrize(
    ("day", "region", "level"),
    [
        (date(2009, 1, 1), "EU", None),
        (date(2010, 6, 1), "EU", "Level IV"),
        (date(2014, 1, 1), "EU", "Level V"),
        (date(2020, 3, 31), "EU", "Level V"),
        (date(2020, 4, 1), "EU", "EU 2019/1782"),
        (date(2014, 1, 1), "US", "Level IV"),
        (date(2016, 2, 10), "US", "DoE Level VI"),
    ],
)
def test_level_in_force(day, region, level) -> None:
    found = energy.limit_in_force("low voltage", 5.0, day, region)
    assert (found.level if found else None) == level


def test_board_is_judged_by_its_own_year_and_told_of_today() -> None:
    then, now = energy.board_limits(charger(2014), date(2026, 1, 1))
    assert then is not None and now is not None
    assert (then.no_load, now.no_load) == (0.3, 0.1)
    assert energy.board_limits(charger(None), date(2026, 1, 1))[0] is None


def test_every_level_gives_efficiencies_below_one_that_rise_with_power() -> None:
    for level in energy.levels():
        for supply in ("basic", "low voltage"):
            limits = [energy.level_limit(level, supply, p) for p in (0.5, 1.0, 2.0, 5.0, 10.0, 25.0, 45.0)]
            values = [limit.average for limit in limits if limit is not None]
            assert values == sorted(values)
            assert all(0.0 < value < 0.9 for value in values)


def test_above_the_table_nothing_is_claimed() -> None:
    assert energy.level_limit("EU 2019/1782", "basic", 300.0) is None


def test_region_by_mains() -> None:
    assert energy.region_of(brick()) == "EU"
