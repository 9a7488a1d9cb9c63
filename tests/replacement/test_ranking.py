"""Which of the parts that may be fitted comes first, and what is said of it."""

from dataclasses import replace

import pytest

from tests.replacement.boards import SECOND, board, part, stress
from triage.errors import CatalogError
from triage.replacement.catalog import Catalog
from triage.replacement.demand import Demand, demand
from triage.replacement.drawers import Drawers, StockItem
from triage.replacement.ranking import ask, candidates, judge, to_confirm
from triage.replacement.supplier import SupplierLine, SupplierList

CATALOG = Catalog()


def _output(**values: float) -> Demand:
    dead = part("D5", "diode", "output rectifier", "SB340", SECOND)
    return demand(board(dead), "D5", stress("D5", **values), CATALOG)


def _types(asked: Demand, drawers: Drawers | None = None) -> list[str]:
    return [one.part.type for one in candidates(CATALOG, asked, drawers)]


def test_the_same_type_comes_first_among_equals() -> None:
    """What was fitted and was not overloaded is the first choice."""
    dead = part("D1", "diode", "mains rectifier", "1N4007")
    asked = demand(board(dead), "D1", stress("D1", reverse_voltage=711.0, average_current=0.016), CATALOG)
    assert _types(asked)[0] == "1N4007"


def test_stock_moves_a_part_up_and_is_said() -> None:
    """A part in the drawers before one that must be ordered."""
    dead = part("D1", "diode", "mains rectifier", "1N4007")
    asked = demand(board(dead), "D1", stress("D1", reverse_voltage=711.0), CATALOG)
    drawers = Drawers([StockItem("BY133", 12, "drawer 7", 0.05), StockItem("1N5399", 0, "empty")])
    first = candidates(CATALOG, asked, drawers)[0]
    assert first.part.type == "BY133" and first.stock is not None
    assert "12 in stock, drawer 7" in first.notes
    empty = next(one for one in candidates(CATALOG, asked, drawers) if one.part.type == "1N5399")
    assert not any("in stock" in note for note in empty.notes)


def test_too_much_is_not_rewarded() -> None:
    """A Schottky of far higher voltage than needed ranks behind one that fits, and the reason is told."""
    asked = _output(reverse_voltage=24.0, average_current=1.0)
    ranked = _types(asked)
    assert ranked[0] == "SB340"
    high = CATALOG.find("SB360")
    assert high is not None
    least = demand(
        board(part("D5", "diode", "output rectifier", "", SECOND)),
        "D5",
        stress("D5", reverse_voltage=12.0, average_current=1.0),
        CATALOG,
    )
    wide = judge(high, least)
    assert wide.accepted and any("forward voltage and heat" in note for note in wide.notes)
    assert wide.score < next(one.score for one in candidates(CATALOG, least, limit=200) if one.part.type == "1N5820")


def test_margins_and_score_are_bounded_and_sorted() -> None:
    """Score between 0 and 1, best first; every margin names both figures."""
    asked = _output(reverse_voltage=24.0, average_current=1.0)
    offered = candidates(CATALOG, asked, limit=100)
    scores = [one.score for one in offered]
    assert scores == sorted(scores, reverse=True)
    assert all(0.0 <= score <= 1.0 for score in scores)
    assert any("repetitive reverse voltage 40 V for 40 V" in margin for margin in offered[0].margins)


def test_a_value_nearer_the_old_one_is_better() -> None:
    """470 uF for 470 uF before 680 uF of the same grade."""
    dead = part("C5", "electrolytic", "output capacitor", "", SECOND, capacitance=470e-6, esr=0.1, rated_temperature=105.0)
    asked = demand(board(dead), "C5", stress("C5", peak_voltage=5.5, ripple_current=0.4), CATALOG)
    offered = {one.part.type: one.score for one in candidates(CATALOG, asked, limit=100)}
    assert offered["470u 16V low impedance 8x15"] > offered["680u 16V low impedance 8x20"]


def test_ask_answers_for_any_part_and_refuses_unknown_ones() -> None:
    """The judgement with every rule; an unknown type is an error that says what to do."""
    asked = _output(reverse_voltage=24.0, average_current=1.0)
    judged = ask(CATALOG, asked, "1n4007")
    assert not judged.accepted and judged.score == 0.0
    assert {refusal.rule for refusal in judged.refusals} >= {"class"}
    with pytest.raises(CatalogError, match="not in the catalog"):
        ask(CATALOG, asked, "ZZ9999")


def test_values_from_memory_never_decide_alone_in_a_safety_position() -> None:
    """Offered only for confirming; accepted once its owner has read the sheet."""
    dead = part("RF1", "fusible_resistor", "fusible input resistor", resistance=10.0, rated_power=1.0)
    asked = demand(board(dead), "RF1", (), CATALOG)
    assert candidates(CATALOG, asked) == ()
    waiting = to_confirm(CATALOG, asked)
    assert [one.part.type for one in waiting] == ["10 fusible 1 W 300 V"]
    assert waiting[0].to_confirm and not waiting[0].accepted and waiting[0].score > 0
    checked = Drawers([StockItem("10 fusible 1 W 300 V", 2, checked=True)])
    assert _types(asked, checked) == ["10 fusible 1 W 300 V"]


def test_memory_is_said_in_any_other_position() -> None:
    """Where it is no safety part the value may decide, but is told to be from memory."""
    asked = demand(board(part("D2", "diode", "auxiliary rectifier", "1N4148")), "D2", (), CATALOG)
    remembered = [one for one in candidates(CATALOG, asked, limit=100) if one.part.confidence == "memory"]
    assert remembered
    assert all("ratings from memory: compare with the sheet" in one.notes for one in remembered)


def test_an_unknown_rating_passes_no_rule_that_needs_it() -> None:
    """Each figure taken out of an accepted part in turn brings a refusal."""
    asked = _output(reverse_voltage=24.0, average_current=1.0)
    accepted = candidates(CATALOG, asked)[0].part
    for key in ("vrrm_V", "if_av_A", "vf_max_V"):
        stripped = replace(accepted, numbers={k: v for k, v in accepted.numbers.items() if k != key})
        refusals = judge(stripped, asked).refusals
        assert [(refusal.rule, refusal.key) for refusal in refusals] == [("unknown", key)]


def test_a_turned_part_comes_with_its_drawing() -> None:
    """2N3904 (EBC) for BC548 (CBE): half a turn, drawn, and behind the parts that need none."""
    dead = part("Q2", "bipolar_transistor", "small-signal transistor", "BC548", gain=200.0)
    asked = demand(board(dead), "Q2", stress("Q2", peak_voltage=5.0, peak_current=0.01, power=0.05), CATALOG)
    judged = ask(CATALOG, asked, "2N3904")
    assert judged.accepted, judged.refusals
    assert "printed side" in judged.drawing
    assert any("half a turn" in note for note in judged.notes)
    assert _types(asked).index("2N3904") > _types(asked).index("BC548")


def test_a_supplier_tells_the_price_and_nothing_else() -> None:
    """The cheapest line counts; a type the catalog does not know is not offered for being on a list."""
    asked = _output(reverse_voltage=24.0, average_current=1.0)
    plain = {one.part.type for one in candidates(CATALOG, asked, limit=100)}
    lists = (
        SupplierList("north.csv", [SupplierLine("SB340", 0.20), SupplierLine("MAGIC9000", 0.01)], 0),
        SupplierList("south.csv", [SupplierLine("sb-340", 0.15, order="17")], 0),
    )
    offered = candidates(CATALOG, asked, limit=100, suppliers=lists)
    assert {one.part.type for one in offered} == plain
    first = next(one for one in offered if one.part.type == "SB340")
    assert first.price == 0.15 and "0.15 in south.csv, order 17" in first.notes


def test_a_place_without_a_rule_takes_only_its_own_type() -> None:
    """Whatever the figures: another type is refused by name."""
    asked = demand(board(part("U9", "pwm_controller", "current-mode PWM controller", "UC3842")), "U9", (), CATALOG)
    judged = ask(CATALOG, asked, "1N4007")
    assert not judged.accepted and [one.rule for one in judged.refusals] == ["class"]
    assert "only UC3842 itself" in judged.refusals[0].text
    unread = demand(board(part("U9", "pwm_controller", "current-mode PWM controller")), "U9", (), CATALOG)
    assert "only the original type itself" in ask(CATALOG, unread, "1N4007").refusals[0].text
