"""What the technician changes on an estimated board: values, parts, turns."""

import math

import numpy as np
import pytest

from triage.board.circuit import circuit
from triage.board.estimate.assemble import estimate
from triage.board.estimate.revise import add_part, move_pin, strike, with_value
from triage.board.estimate.template import template_of
from triage.board.estimate.turns import turn_checks, with_turns
from triage.board.part import Board, Label
from triage.board.profile import board_from_dict, board_to_dict, load_profile
from triage.errors import EntryError, ProfileError
from triage.families.cold import specimens
from triage.physics.netlist import compile_netlist
from triage.safety.discharge import bulk_store


@pytest.fixture
def board() -> Board:
    return estimate(template_of("ringing_choke_zener"), Label("198-253 V~ 50 Hz", 5.0, 0.6))


def test_a_measured_value_narrows_its_spread_and_leaves_the_others(board):
    known = with_value(board, "c1", "capacitance", 4.7e-6).part("C1")
    assert known.value["capacitance"] == 4.7e-6 and known.origin == "measured"
    assert "capacitance" not in known.spread and known.tolerance["capacitance"] == 0.03
    assert known.spread["esr"] == board.part("C1").spread["esr"]


def test_a_minor_value_does_not_make_the_part_known(board):
    assert with_value(board, "C1", "esr", 1.5).part("C1").origin == "estimated"


def test_a_marked_value_takes_the_tolerance_of_the_print_or_the_kind(board):
    assert with_value(board, "R1", "resistance", 1e6, "marking").part("R1").tolerance == {"resistance": 0.05}
    assert with_value(board, "R1", "resistance", 1e6, "marking", 0.01).part("R1").tolerance == {"resistance": 0.01}


def test_a_rating_is_taken_as_it_is(board):
    assert with_value(board, "C1", "voltage", 450.0).part("C1").ratings["voltage"] == 450.0


@pytest.mark.parametrize(("ref", "key", "value"), [("R99", "resistance", 1.0), ("R1", "beauty", 1.0), ("R1", "resistance", 0.0),
                                                   ("R1", "resistance", math.inf), ("R1", "resistance", -4.0)])  # fmt: skip
def test_impossible_values_are_refused(board, ref, key, value):
    with pytest.raises(EntryError):
        with_value(board, ref, key, value)


def test_specimens_of_an_estimate_lie_inside_its_spread_nine_times_in_ten(board):
    """Reasoned: the spread is a 90 % statement, and a tolerance is a bound."""
    known = with_value(board, "C1", "capacitance", 4.7e-6)
    draws = specimens(known, 2000)
    part = known.part("R1")
    values = np.array([draw.values["R1", "resistance"] for draw in draws])
    inside = np.abs(np.log(values / part.value["resistance"])) <= math.log(part.spread["resistance"])
    assert inside.mean() == pytest.approx(0.9, abs=0.02)
    narrowed = np.array([draw.values["C1", "capacitance"] for draw in draws])
    assert np.all(np.abs(narrowed / 4.7e-6 - 1.0) <= 0.03 + 1e-9)


def test_the_stored_charge_is_taken_at_the_upper_end_of_an_estimate(board):
    """A guessed bulk capacitor may be twice as large: the discharge is reckoned with that, until it is read."""
    guessed = bulk_store(board)
    known = bulk_store(with_value(board, "C1", "capacitance", board.part("C1").value["capacitance"], "marking"))
    assert guessed.energy / known.energy == pytest.approx(board.part("C1").spread["capacitance"] / 1.2, rel=0.01)


def test_few_specimens_reach_every_part_of_a_tolerance():
    """Latin hypercube sampling (McKay, Beckman, Conover, Technometrics 21, 1979, section 2.3): one draw in every stratum."""
    profile = load_profile("harbour-handset-charger")
    draws = specimens(profile, 24)
    for part in profile.parts:
        for key in (key for key in part.tolerance if key in part.value):
            values = np.array([draw.values[part.ref, key] for draw in draws])
            place = (values / part.value[key] - 1.0 + part.tolerance[key]) / (2.0 * part.tolerance[key])
            assert sorted((place * 24.0).astype(int)) == list(range(24)), (part.ref, key)
    leak = next(key for key in draws[0].severity if key[1] == "leaky")
    sizes = sorted(math.log(draw.severity[leak]) for draw in draws)
    assert sizes[0] < -1.7 * 1.3 and sizes[-1] > 1.7 * 1.3, "also of the sizes of faults: beyond 1.7 standard deviations"
    assert specimens(profile, 24) == draws


def test_striking_a_series_part_joins_its_nodes(board):
    without = strike(board, "RF1")
    assert without.side_of("rect") is None
    assert without.part("D1").pins["anode"] == "mains_l"
    compile_netlist(circuit(without))


def test_striking_a_shunt_part_leaves_its_nodes_apart(board):
    without = strike(board, "R2")
    assert without.side_of("clamp") == "primary" and without.part("C2").pins == board.part("C2").pins
    without = strike(strike(board, "LED1"), "R5")
    assert without.side_of("led") is None


def test_a_board_keeps_mains_output_and_ground(board):
    with pytest.raises(EntryError, match="mains_l"):
        strike(board, "RF1", link=False)
    with pytest.raises(EntryError, match="two pins"):
        strike(board, "Q1", link=True)


def test_adding_a_part_in_series(board):
    """A fuse before the fusible resistor: the new part, a new node, the old pin moved over."""
    fused = move_pin(add_part(board, "mains fuse", {"a": "mains_l", "b": "fused"}), "RF1", "a", "fused")
    assert fused.part("F1").origin == "estimated" and fused.part("F1").ratings["current"] > 0.0
    assert fused.side_of("fused") == "primary"
    assert board_from_dict(board_to_dict(fused), "fused") == fused
    compile_netlist(circuit(fused))


@pytest.mark.parametrize(("role", "pins", "ref"), [
    ("flux capacitor", {"a": "bulk", "b": "pgnd"}, ""),
    ("X2 capacitor", {"a": "mains_l"}, ""),
    ("X2 capacitor", {"a": "mains_l", "b": "pgnd", "c": "bulk"}, ""),
    ("X2 capacitor", {"a": "nowhere", "b": "elsewhere"}, ""),
    ("X2 capacitor", {"a": "mains_l", "b": "\x1b[2J"}, ""),
    ("X2 capacitor", {"a": "mains_l", "b": "pgnd"}, "C1"),
])  # fmt: skip
def test_parts_that_cannot_be_added_are_refused(board, role, pins, ref):
    with pytest.raises(EntryError):
        add_part(board, role, pins, ref)


def test_a_role_of_another_family_is_refused_with_its_reason(board):
    with pytest.raises(ProfileError, match="reservoir"):
        add_part(board, "reservoir capacitor", {"plus": "out", "minus": "sgnd"})


def test_counted_turns_are_known_to_a_turn(board):
    counted = with_turns(board, "T1", {"primary": 220, "secondary": 19, "feedback": 21}).part("T1")
    assert counted.value["primary_turns"] == 220.0
    assert counted.tolerance["secondary_turns"] == pytest.approx(1.0 / 19.0)
    assert "primary_turns" not in counted.spread


def test_turn_checks_by_hand(board):
    """Worked by hand: 220 : 19 turns, 5.5 V behind the rectifier, 253 V mains."""
    counted = with_turns(board, "T1", {"primary": 220, "secondary": 19, "feedback": 21})
    found = {check.text: check for check in turn_checks(counted, "T1", core_area=19e-6)}
    assert found["reflected voltage"].value == pytest.approx(5.5 * 220 / 19)
    assert found["Q1 after turn-off, without spike"].value == pytest.approx(math.sqrt(2) * 253 + 5.5 * 220 / 19)
    assert found["D5 reverse voltage, without ringing"].value == pytest.approx(5.0 + math.sqrt(2) * 253 * 19 / 220)
    assert found["feedback winding during the flyback"].value == pytest.approx(5.5 * 21 / 19)
    assert all(check.fits for check in found.values())


def test_a_miscount_does_not_fit(board):
    checks = turn_checks(with_turns(board, "T1", {"primary": 60, "secondary": 19}), "T1", core_area=19e-6)
    doubtful = {check.text for check in checks if not check.fits}
    assert "reflected voltage" in doubtful
    assert any(text.startswith("flux density") for text in doubtful)


def test_turns_of_an_iron_transformer():
    """Worked by hand: B = 253 / (4.44 * 50 * 2000 * 3.8e-4) = 1.50 T; the sine factor sqrt(2) pi is 4.443."""
    board = estimate(template_of("linear_regulated"), Label("230 V~ 50 Hz", 9.0, 0.5))
    board = with_turns(board, "T1", {"primary": 2000, "secondary": 130})
    found = {check.text: check for check in turn_checks(board, "T1", core_area=3.8e-4)}
    assert found["secondary voltage without load, nominal mains"].value == pytest.approx(230.0 * 130 / 2000)
    assert found["flux density at the highest mains"].value == pytest.approx(1.499, abs=0.002)


@pytest.mark.parametrize(("ref", "counts"), [("R1", {"primary": 10}), ("T1", {"tertiary": 10}), ("T1", {"primary": 0}),
                                             ("T1", {"primary": math.nan})])  # fmt: skip
def test_turns_that_cannot_be_are_refused(board, ref, counts):
    with pytest.raises(EntryError):
        with_turns(board, ref, counts)
