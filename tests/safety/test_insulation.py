"""Distances: shape of the tables, and the barrier of a board. Printed figures are in tests/reference."""

import itertools
from dataclasses import replace

import pytest

from tests.safety.boards import brick, charger
from triage.safety import insulation
from triage.safety.limits import table


@pytest.mark.parametrize("degree", [2, 3])
@pytest.mark.parametrize("group", insulation.GROUPS)
def test_creepage_rises_with_voltage_and_rounds_up(degree, group) -> None:
    rows = table("insulation")["creepage"][f"PD{degree}"]["working_V"]
    for low, high in itertools.pairwise(rows):
        middle = insulation.creepage(0.5 * (low + high), group, degree)
        assert middle >= insulation.creepage(low, group, degree)
        assert middle <= insulation.creepage(high, group, degree) + 1e-4


def test_worse_material_and_dirt_never_need_less() -> None:
    for volts in (100.0, 230.0, 400.0):
        by_group = [insulation.creepage(volts, group) for group in insulation.GROUPS]
        assert by_group == sorted(by_group)
        assert insulation.creepage(volts, pollution_degree=3) >= insulation.creepage(volts)


def test_reinforced_is_never_below_basic() -> None:
    for impulse in (500.0, 1500.0, 2500.0, 4000.0, 1000.0):
        assert insulation.clearance(impulse, grade="reinforced") >= insulation.clearance(impulse)


def test_altitude_stretches_the_clearance_only_above_2000_m() -> None:
    assert insulation.clearance(2500.0, altitude=1500.0) == insulation.clearance(2500.0)
    assert insulation.clearance(2500.0, altitude=5000.0) == pytest.approx(1.48 * insulation.clearance(2500.0))


def test_outside_the_table_is_said_with_its_range() -> None:
    with pytest.raises(insulation.InsulationRangeError, match="1200 is outside the printed table; expected 10 to 1000"):
        insulation.creepage(1200.0)


def test_barrier_of_an_old_and_a_new_adapter() -> None:
    old, new = insulation.barrier(charger(2014)), insulation.barrier(charger(2022))
    assert (old.standard, new.standard) == ("IEC 60950-1", "IEC 62368-1")
    assert (old.clearance, new.clearance) == (pytest.approx(4e-3), pytest.approx(3e-3))
    assert old.creepage == new.creepage == pytest.approx(5e-3)


def test_unknown_year_takes_the_longer_clearance() -> None:
    assert insulation.barrier(charger(None)).clearance == pytest.approx(4e-3)


def test_low_mains_needs_less_and_high_tolerance_does_not_count() -> None:
    board = charger()
    american = replace(
        board,
        label=replace(board.label, input="120 V~ 60 Hz"),
        mains=replace(board.mains, nominal=120.0, high=132.0),
    )
    assert insulation.barrier(american).creepage < insulation.barrier(board).creepage
    assert insulation.rated_voltage(brick()) == 240.0


def test_creepage_is_never_below_clearance() -> None:
    for grade in insulation.GRADES:
        need = insulation.barrier(brick(), grade)
        assert need.creepage >= need.clearance
        assert need.rework_creepage >= need.creepage
