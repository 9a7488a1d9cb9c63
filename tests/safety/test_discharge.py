"""Stored energy, its way out through the board, and the bleed resistor."""

import math

import pytest

from tests.safety.boards import brick, charger, iron
from triage.safety import discharge
from triage.safety.leak_path import discharge_resistance, resistance_seen

CREST = math.sqrt(2) * 253.0


def test_charger_empties_through_startup_resistor_and_base_junction() -> None:
    """Reasoned: R1 into the forward base-emitter junction, beside the capacitor's own leakage."""
    (store,) = discharge.stores(charger())
    resistance = 1.0 / (1 / 1e6 + 1 / 1.8e7)
    assert store.voltage == pytest.approx(CREST)
    assert store.energy == pytest.approx(0.5 * 4.7e-6 * 1.2 * CREST**2)
    assert store.board_time == pytest.approx(resistance * 4.7e-6 * 1.2 * math.log(CREST / 60.0), rel=1e-3)


def test_the_worst_time_is_the_one_without_the_startup_resistor() -> None:
    """Reasoned: with R1 open only the 18 Mohm leakage is left."""
    (store,) = discharge.stores(charger())
    assert store.worst_ref == "R1"
    assert store.worst_time == pytest.approx(1.8e7 * 4.7e-6 * 1.2 * math.log(CREST / 60.0), rel=1e-3)


def test_brick_lists_bulk_and_line_capacitor_largest_first() -> None:
    refs = [store.ref for store in discharge.stores(brick())]
    assert refs == ["C1", "CX1"]


def test_line_capacitor_is_not_helped_by_the_bridge() -> None:
    """Derived example 0.47 uF, 1 Mohm, 264 V: 0.859 s to 60 V (exponential, computed by the reference
    file)."""
    line = discharge.stores(brick())[1]
    assert line.board_time == pytest.approx(0.859243722, rel=1e-3)
    assert line.worst_ref == "R9"
    assert math.isinf(line.worst_time)


def test_bulk_without_any_path_never_empties() -> None:
    bulk = discharge.bulk_store(brick())
    assert bulk is not None
    assert math.isinf(bulk.board_time)
    assert bulk.worst_ref == ""


def test_iron_transformer_stores_nothing_at_mains_voltage() -> None:
    assert discharge.stores(iron()) == ()
    assert discharge.bulk_store(iron()) is None


def test_reverse_junction_does_not_conduct_and_forward_one_does() -> None:
    branch = [("a", "m", 1e-3), ("z", "b", 1e-3)]
    assert resistance_seen(branch, [("m", "z")], "a", "b") == pytest.approx(2000.0, rel=1e-4)
    assert math.isinf(resistance_seen(branch, [("z", "m")], "a", "b"))


def test_two_resistors_across_one_another_halve() -> None:
    assert resistance_seen([("a", "b", 1e-4), ("a", "b", 1e-4)], [], "a", "b") == pytest.approx(5000.0)


def test_leaving_a_part_out_opens_its_path() -> None:
    board = charger()
    assert discharge_resistance(board, "bulk", "pgnd") < discharge_resistance(board, "bulk", "pgnd", "R1")


@pytest.mark.parametrize("board", [charger(), brick(), brick(None)], ids=["cube", "brick", "brick no R9"])
def test_every_proposal_keeps_its_own_rules(board) -> None:
    assert discharge.stores(board)
    for store in discharge.stores(board):
        bleeder = discharge.propose_bleeder(store)
        assert bleeder is not None
        kind = bleeder.resistor
        assert bleeder.peak_current <= 0.2
        assert bleeder.time_to(60.0) <= 2.0
        assert bleeder.voltage / bleeder.count <= kind.voltage
        assert bleeder.peak_power / bleeder.count <= kind.power * kind.overload


def test_a_small_bulk_capacitor_needs_no_power_resistor() -> None:
    (store,) = discharge.stores(charger())
    bleeder = discharge.propose_bleeder(store)
    assert bleeder is not None
    assert bleeder.resistor.power <= 2.0


def test_only_what_the_technician_has_is_proposed() -> None:
    bulk = discharge.bulk_store(brick())
    assert bulk is not None
    small = discharge.ResistorKind("carbon film", 0.25, 250.0, 1.0)
    assert discharge.propose_bleeder(bulk, [small]) is None
    wire = discharge.ResistorKind("wirewound", 10.0, 700.0, 10.0)
    chosen = discharge.propose_bleeder(bulk, [small, wire])
    assert chosen is not None and chosen.resistor is wire


def test_grades_follow_the_energy() -> None:
    (cube,) = discharge.stores(charger())
    bulk = discharge.bulk_store(brick())
    assert cube.grade == "painful"
    assert bulk is not None and bulk.grade == "painful"
    assert bulk.energy == pytest.approx(8.36, rel=0.01)


def test_small_capacitors_may_hold_more_volts() -> None:
    """IEC 62368-1 table 7 (from memory): 60 V from 300 nF, 100 V at 91 nF, linear between 170 and 91 nF."""
    assert discharge.touch_safe_voltage(1e-6) == 60.0
    assert discharge.touch_safe_voltage(91e-9) == pytest.approx(100.0)
    assert discharge.touch_safe_voltage(130.5e-9) == pytest.approx(87.5)
    assert discharge.touch_safe_voltage(1e-12) == 5000.0
