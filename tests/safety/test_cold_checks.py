"""The shorts to look for before power."""

import pytest

from tests.safety.boards import brick, charger, iron
from triage.board.fault import Fault
from triage.board.probe import Probe
from triage.safety.cold_checks import short_checks, status


def test_switch_and_bulk_capacitor_share_a_check_through_the_winding() -> None:
    check = next(c for c in short_checks(charger()) if Fault("C1", "short") in c.faults)
    assert check.faults == (Fault("C1", "short"), Fault("Q1", "ce_short"))
    assert check.probe == Probe("ohms", "bulk", "pgnd")


def test_cube_asks_for_rectifier_bulk_and_output() -> None:
    assert [c.key for c in short_checks(charger())] == ["rect to bulk", "bulk to pgnd", "sec to out"]


def test_output_capacitor_is_seen_through_the_secondary_winding() -> None:
    """Reasoned: the winding joins sec with sgnd, so rectifier and capacitor lie across the same pair."""
    last = short_checks(charger())[-1]
    assert last.faults == (Fault("D5", "short"), Fault("C5", "short"))


def test_line_side_of_the_brick_is_one_check() -> None:
    first = short_checks(brick())[0]
    assert {fault.ref for fault in first.faults} == {"RV1", "CX1", "BD1"}


def test_iron_transformer_primary_is_no_short() -> None:
    assert [c.key for c in short_checks(iron())] == ["out to sgnd"]


@pytest.mark.parametrize(
    ("readings", "refused", "chance", "expected"),
    [
        ({}, frozenset(), None, "open"),
        ({Probe("ohms", "bulk", "pgnd"): 3.0}, frozenset(), None, "short"),
        ({Probe("ohms", "pgnd", "bulk"): float("inf")}, frozenset(), None, "clear"),
        (
            {Probe("ohms", "pgnd", "bulk"): 500e3, Probe("ohms", "bulk", "pgnd"): 2.0},
            frozenset(),
            None,
            "short",
        ),
        ({}, frozenset({Probe("ohms", "bulk", "pgnd")}), None, "refused"),
        ({}, frozenset(), {Fault("C1", "short"): 0.004, Fault("Q1", "ce_short"): 0.005}, "ruled out"),
        ({}, frozenset(), {Fault("C1", "short"): 0.006, Fault("Q1", "ce_short"): 0.005}, "open"),
    ],
)
def test_status_of_a_check(readings, refused, chance, expected) -> None:
    check = short_checks(charger())[1]
    assert status(check, readings, refused, chance) == expected
