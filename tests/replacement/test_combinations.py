"""Several parts in place of one: the sharing by hand, and that no safety part is ever combined."""

import pytest

from tests.replacement.boards import SECOND, board, part, stress
from triage.replacement.catalog import Catalog
from triage.replacement.combinations import SwitchingRipple, combinations, film_share, series_shares
from triage.replacement.demand import Demand, demand
from triage.replacement.drawers import Drawers, StockItem
from triage.replacement.positions import positions

CATALOG = Catalog()


def _startup(resistance: float = 330e3, power: float = 0.25) -> Demand:
    dead = part("R1", "resistor", "startup resistor", resistance=resistance)
    return demand(board(dead), "R1", stress("R1", peak_voltage=375.0, power=power), CATALOG)


def test_two_equal_resistors_share_by_their_tolerance() -> None:
    """By hand: 1.05 / (1.05 + 0.95) = 0.525 for 5 %; three of 1 %: 1.01 / (1.01 + 1.98) = 0.3378."""
    assert series_shares([100e3, 100e3], [0.05, 0.05]) == pytest.approx((0.525, 0.525))
    assert series_shares([1.0] * 3, [0.01] * 3) == pytest.approx([1.01 / 2.99] * 3)


def test_unequal_resistors_share_by_their_value() -> None:
    """By hand, ideal values: 330k of 1010k takes 32.67 %."""
    assert series_shares([330e3, 680e3], [0.0, 0.0]) == pytest.approx((330 / 1010, 680 / 1010))


def test_film_beside_an_electrolytic() -> None:
    """By hand: 1/(2 pi 65 kHz 220 nF) = 11.13 ohm against 10 ohm: 11.13 / sqrt(100 + 123.9) = 0.744."""
    assert film_share(10.0, 220e-9, 65e3) == pytest.approx(0.744, abs=5e-4)
    assert film_share(0.05, 220e-9, 65e3) > 0.999


def test_the_reference_example_of_a_start_up_resistor() -> None:
    """Published in the reference data: 330k from 375 V takes 0.43 W; one 1/4 W 250 V part fails both limits, two 1/2 W do.

    Voltage 375 V / 0.75 = 500 V shared by two of 1 %: 252.5 V each, below 350 V; power 0.426 W / 0.5 = 0.852 W: 0.43 W each.
    """
    asked = _startup(power=0.426)
    made = combinations(CATALOG, asked, limit=200)
    pair = next(one for one in made if one.text.startswith("2 x 165k metal film 0.5 W 350 V in series"))
    assert pair.value == pytest.approx(330e3)
    assert any("50.5% of 500 V = 252.5 V, rated 350 V" in line for line in pair.arithmetic)
    assert any("0.4303 W, rated 0.5 W" in line for line in pair.arithmetic)
    assert not any(one.text.startswith("2 x 165k metal film 0.25 W") for one in made)


def test_every_combination_stays_in_its_ratings() -> None:
    """Re-computed plainly: voltage and power of each resistor at its worst share."""
    for power in (0.05, 0.25, 0.8):
        asked = _startup(power=power)
        found = combinations(CATALOG, asked, limit=500)
        assert found
        for one in found:
            values = [p.numbers["r_ohm"] for p in one.parts]
            tolerances = [p.numbers.get("tol_percent", 10.0) / 100 for p in one.parts]
            for place, single in enumerate(one.parts):
                rest = [i for i in range(len(values)) if i != place]
                if one.arrangement == "series":
                    top = values[place] * (1 + tolerances[place])
                    share = top / (top + sum(values[i] * (1 - tolerances[i]) for i in rest))
                    assert single.numbers["v_lim_V"] >= 375.0 / 0.75 * share - 1e-9
                else:
                    top = (1 + tolerances[place]) / values[place]
                    share = top / (top + sum((1 - tolerances[i]) / values[i] for i in rest))
                    assert single.numbers["v_lim_V"] >= 375.0 / 0.75
                assert single.numbers["p_W"] >= power / 0.5 * share - 1e-9
            assert one.value * (1 + 1e-6) >= 0.9 * 330e3 and one.value <= 1.1 * 330e3 * (1 + 1e-6)


def test_the_drawers_come_first_and_counts_are_kept() -> None:
    """A pair out of the drawers before one to be ordered; one piece in stock is no pair."""
    asked = _startup(1e6)
    stock = Drawers([StockItem("330k metal film 0.5 W 350 V", 1), StockItem("680k metal film 0.5 W 350 V", 1)])
    made = combinations(CATALOG, asked, stock)
    assert made[0].in_stock
    assert {p.type for p in made[0].parts} == {"330k metal film 0.5 W 350 V", "680k metal film 0.5 W 350 V"}
    assert not any(one.in_stock and len({p.type for p in one.parts}) == 1 for one in made)


def test_parallel_capacitors_carry_the_ripple_together() -> None:
    """Impedances 30 % apart: 1.3 / (1.3 + 0.7) = 65 % of the ripple may go through one of two."""
    dead = part("C1", "electrolytic", "output capacitor", "", SECOND, capacitance=470e-6, esr=0.1)
    asked = demand(board(dead), "C1", stress("C1", peak_voltage=5.5, ripple_current=1.5), CATALOG)
    made = combinations(CATALOG, asked, limit=50)
    assert made
    for one in made:
        assert one.value * 1.000001 >= 0.8 * 470e-6 and one.value <= 1.5 * 470e-6 * 1.000001
        if len({p.type for p in one.parts}) == 1 and len(one.parts) == 2:
            assert one.shares == pytest.approx((0.65, 0.65))
            assert one.parts[0].numbers["ripple_100kHz_A"] >= 0.65 * 1.5 / 0.8


def test_a_film_capacitor_helps_only_where_its_reactance_is_low_enough() -> None:
    """A bulk capacitor of 10 ohm at 65 kHz, most of its ripple there: 10 uF alone lacks ripple, with a film it passes."""
    dead = part("C1", "electrolytic", "bulk capacitor", capacitance=10e-6, rated_voltage=400.0, rated_temperature=105.0)
    asked = demand(board(dead), "C1", stress("C1", peak_voltage=357.0, ripple_current=0.1), CATALOG)
    switching = SwitchingRipple(share=0.9, frequency=65e3, resistance=10.0)
    made = combinations(CATALOG, asked, limit=50, switching=switching)
    pairs = [one for one in made if "film" in one.text]
    assert any("10u 400V bulk" in one.text and "224J 400V" in one.text for one in pairs)
    assert combinations(CATALOG, asked, limit=50) == tuple(one for one in made if one not in pairs)
    low = SwitchingRipple(share=0.9, frequency=65e3, resistance=0.1)
    assert not [one for one in combinations(CATALOG, asked, limit=50, switching=low) if "film" in one.text]


def test_no_safety_part_is_combined() -> None:
    """Whatever the stress and the drawers."""
    stock = Drawers([StockItem("4.7 fusible 1 W 300 V", 9, checked=True), StockItem("Y1 102 400Vac", 9, checked=True)])
    kinds = {"fusible input resistor": "fusible_resistor", "X discharge resistor": "resistor", "Y1 capacitor": "y_capacitor"}
    for role, kind in kinds.items():
        dead = part("X1", kind, role, resistance=9.4, capacitance=2e-9, rated_power=1.0)
        asked = demand(board(dead), "X1", stress("X1", power=0.1), CATALOG)
        assert asked.safety
        assert combinations(CATALOG, asked, stock) == ()
    assert sum(position.safety for position in positions()) >= 8
