"""Repair, replace or scrap: expected costs, vetoes on top, over-stressed designs stated."""

import math
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.safety.boards import brick, charger
from triage.board.stress import Stress
from triage.safety import decision
from triage.safety.decision import Case, DecisionError, Shop, decide, work

SHOP = Shop(rate=40.0)
VOLUNTEERS = Shop(rate=0.0)


def cost(found, choice):
    return next(option.cost for option in found.options if option.choice == choice)


def test_repair_cost_is_parts_work_and_the_share_that_does_not_hold() -> None:
    """Reasoned: one part of 2.00 and 12 min, 30 min around it, 90 % holds, fallback 20.00 + 10 min + 1.00."""
    found = decide(Case((decision.Work("x", 2.0, 12.0, 1.0),), 0.9, 20.0), SHOP)
    fallback = 20.0 + 40.0 * 10.0 / 60.0 + 1.0
    assert cost(found, "replace") == pytest.approx(fallback)
    assert cost(found, "repair") == pytest.approx(2.0 + 40.0 * 42.0 / 60.0 + 0.1 * fallback)
    assert found.choice == "replace"


def test_a_spare_that_is_not_to_be_had_costs_the_search_and_the_fallback() -> None:
    found = decide(Case((replace(work("transformer"), available=0.0),), 1.0, 20.0), SHOP)
    assert cost(found, "repair") == pytest.approx(40.0 * 15.0 / 60.0 + cost(found, "replace"))
    assert found.choice == "replace"


def test_the_same_fault_is_worth_repair_in_a_dear_adapter_and_for_volunteers() -> None:
    works = (work("electrolytic"),)
    assert decide(Case(works, 0.9, 8.0), SHOP).choice == "replace"
    assert decide(Case(works, 0.9, 80.0), SHOP).choice == "repair"
    assert decide(Case(works, 0.9, 8.0), VOLUNTEERS).choice == "repair"


def test_a_veto_bars_the_cheapest_repair() -> None:
    case = Case((work("joint"),), 1.0, 80.0)
    assert decide(case, VOLUNTEERS).choice == "repair"
    barred = decide(replace(case, vetoes=("carbon across the barrier",)), VOLUNTEERS)
    assert barred.choice == "replace"
    assert math.isinf(cost(barred, "repair"))
    assert "barred by carbon across the barrier" in barred.reason


def test_without_a_new_adapter_the_veto_leaves_scrap() -> None:
    found = decide(Case((work("joint"),), 1.0, None, ("veto",), worth=30.0), SHOP)
    assert found.choice == "scrap"


@given(
    holds=st.floats(0, 1),
    better=st.floats(0, 1),
    price=st.floats(1, 200),
    rate=st.floats(0, 100),
    kind=st.sampled_from(["resistor", "electrolytic", "transformer", "mosfet"]),
)
def test_a_surer_repair_never_costs_more(holds, better, price, rate, kind) -> None:
    low, high = sorted((holds, better))
    shop = Shop(rate=rate)
    worse, surer = (decide(Case((work(kind),), p, price), shop) for p in (low, high))
    assert cost(surer, "repair") <= cost(worse, "repair") + 1e-9


@given(rate=st.floats(0, 100), price=st.floats(1, 200), holds=st.floats(0, 1))
def test_the_choice_is_the_cheapest_of_those_proposed(rate, price, holds) -> None:
    found = decide(Case((work("diode"),), holds, price), Shop(rate=rate))
    assert cost(found, found.choice) == min(option.cost for option in found.options if option.proposed)
    assert found.choice != "repair" or holds >= 0.5


def test_a_repair_that_mostly_fails_is_shown_but_not_proposed() -> None:
    found = decide(Case((work("transformer"),), 0.9, 60.0), VOLUNTEERS)
    repair = found.options[0]
    assert not repair.proposed and math.isfinite(repair.cost)
    assert "make sure of the spare" in repair.text
    assert found.choice == "replace"
    assert decide(Case((work("transformer", available=1.0),), 0.9, 60.0), VOLUNTEERS).choice == "repair"


def test_nothing_found_is_nothing_to_mend() -> None:
    assert decide(Case((), 1.0, 20.0), VOLUNTEERS).choice == "replace"


OVER = Stress("C5", "ripple_current", 1.1, 0.8, 0.8, "practice", "253 V, full load")
NEAR = Stress("D5", "reverse_voltage", 55.0, 60.0, 0.8, "practice")
FINE = Stress("R1", "power", 0.1, 0.5, 0.5, "practice")


def test_over_stressed_design_is_stated_with_its_cure() -> None:
    found = decision.upgrades(charger(), [NEAR, FINE, OVER], SHOP)
    assert [u.ref for u in found] == ["C5", "D5"]
    assert found[0].over_rating and not found[1].over_rating
    assert found[0].needed_rating == pytest.approx(1.1 / 0.8)
    assert "1.1 A of 0.8 A rated at 253 V, full load: over rating; fit one rated 1.38 A or more" in found[0].text
    assert found[0].cost == pytest.approx(work("electrolytic").price + SHOP.labour(8.0))


def test_temperature_is_cured_by_cooling_not_by_a_number() -> None:
    (hot,) = decision.upgrades(charger(), [Stress("Q1", "temperature", 160.0, 150.0, 0.8)], SHOP)
    assert hot.needed_rating is None
    assert "cooling" in hot.text


def test_short_life_alone_is_no_upgrade() -> None:
    assert decision.upgrades(charger(), [Stress("C1", "life", 9e4, 2e3, 1.0)], SHOP) == ()


def test_a_part_left_over_its_rating_halves_the_chance_and_its_upgrade_restores_it() -> None:
    over = decision.upgrades(charger(), [OVER], SHOP)
    left = decision.board_case(charger(), ["R1"], 0.9, over)
    cured = decision.board_case(charger(), ["R1"], 0.9, over, fitted_upgrades=["C5"])
    assert (left.holds, cured.holds) == (pytest.approx(0.45), pytest.approx(0.9))
    assert len(cured.works) == len(left.works) + 1


def test_drawers_and_price_of_the_board() -> None:
    case = decision.board_case(brick(), ["T1"], 0.8, in_drawers=["T1"])
    assert case.works[0].available == 1.0
    assert case.new_price == pytest.approx(32.0, rel=0.02)
    assert decision.usual_new_price(1.0) == 8.0
    assert decision.usual_new_price(500.0) == 160.0


@pytest.mark.parametrize(
    "case",
    [Case((work("diode"),), 1.2, 8.0), Case((work("diode"),), 0.5, -1.0), Case((work("diode"),), 0.5, None)],
)
def test_what_cannot_be_reckoned_with_is_told(case) -> None:
    with pytest.raises(DecisionError):
        decide(case, SHOP)


def test_unknown_work_lists_the_known() -> None:
    with pytest.raises(DecisionError, match="'magic'; expected resistor"):
        work("magic")
