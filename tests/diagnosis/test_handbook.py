"""Weights of faults from rates, mode shares and wear-out: what must hold whatever the figures are."""

import pytest

from triage.board.fault import Fault
from triage.board.part import Board, Label, Mains, Part
from triage.board.stress import Stress
from triage.diagnosis.handbook import USUAL_HOURS_PER_DAY, USUAL_YEARS, fault_weights
from triage.diagnosis.priors import Weight, prior_of
from triage.physics.failure_rate import part_rate

PARTS = (
    Part(
        "C1",
        "electrolytic",
        "bulk capacitor",
        {"plus": "b", "minus": "g"},
        {"capacitance": 4.7e-6, "esr": 1.5},
        ratings={"voltage": 400.0},
    ),
    Part("R1", "resistor", "startup resistor", {"a": "b", "b": "q"}, {"resistance": 1e6}, ratings={"power": 0.5}),
    Part(
        "Q1",
        "bipolar_transistor",
        "main switch",
        {"collector": "c", "base": "q", "emitter": "g"},
        {"gain": 25.0},
        ratings={"voltage": 700.0, "power": 1.4},
    ),
)
BOARD = Board(
    "x",
    "x",
    "ringing_choke_zener",
    Label("230 V", 5.0, 0.6),
    Mains(50.0, 198.0, 230.0, 253.0),
    PARTS,
    {"primary": ("b", "g", "q", "c")},
    {"primary": "g"},
)


def test_every_mode_of_every_part_has_a_weight_and_a_derivation() -> None:
    weights = fault_weights(BOARD, ())
    assert {f.ref for f in weights} == {"C1", "R1", "Q1"}
    assert all(w.value > 0 and "MIL-HDBK-217F" in w.text for w in weights.values())


def test_modes_of_a_part_add_up_to_its_rate() -> None:
    weights = fault_weights(BOARD, (), years=1.0, hours_per_day=24.0)
    total = sum(w.value for f, w in weights.items() if f.ref == "Q1")
    rate = float(part_rate("bipolar_transistor", "main switch", power_rating=1.4))
    assert total == pytest.approx(rate * 365.25 * 24 * 1e-6, rel=1e-9)


def test_more_stress_and_heat_make_a_part_more_suspect() -> None:
    cool = fault_weights(BOARD, (Stress("Q1", "peak_voltage", 350.0, 700.0), Stress("Q1", "temperature", 60.0)))
    hot = fault_weights(BOARD, (Stress("Q1", "peak_voltage", 690.0, 700.0), Stress("Q1", "temperature", 110.0)))
    assert hot[Fault("Q1", "ce_short")].value > 3 * cool[Fault("Q1", "ce_short")].value
    assert hot[Fault("R1", "open")] == cool[Fault("R1", "open")]


def test_a_worn_out_capacitor_dries_up_and_does_not_short() -> None:
    short_life = fault_weights(BOARD, (Stress("C1", "life", 5e3),))
    long_life = fault_weights(BOARD, (Stress("C1", "life", 5e6),))
    assert short_life[Fault("C1", "high_esr")].value > 10 * long_life[Fault("C1", "high_esr")].value
    assert short_life[Fault("C1", "short")] == long_life[Fault("C1", "short")]
    worn = sum(short_life[Fault("C1", m)].value for m in ("high_esr", "low_capacitance"))
    assert 0.9 < worn < 1.1, "service far beyond the median life: all worn out"


def test_half_are_worn_out_at_the_median_life() -> None:
    hours = USUAL_YEARS * 365.25 * USUAL_HOURS_PER_DAY
    weights = fault_weights(BOARD, (Stress("C1", "life", hours),))
    without = fault_weights(BOARD, ())
    gain = sum(weights[f].value - without[f].value for f in without if f.ref == "C1")
    assert gain == pytest.approx(0.5, abs=1e-9)


def test_the_prior_names_the_derivation() -> None:
    prior = prior_of(fault_weights(BOARD, ()), {})
    assert "MIL-HDBK-217F" in prior.why[Fault("C1", "short")] and "% of the single faults" in prior.why[Fault("C1", "short")]


def test_an_adapter_of_unknown_age_is_six_years_old_and_half_its_time_plugged_in() -> None:
    """Median age of failed adapters in public repair records (Open Repair Data, data to July 2025); hours by common practice."""
    usual, said = fault_weights(BOARD, ()), fault_weights(BOARD, (), years=6.0, hours_per_day=12.0)
    assert {fault: weight.value for fault, weight in usual.items()} == {fault: weight.value for fault, weight in said.items()}


def test_what_was_not_computed_takes_usual_heat_and_stress() -> None:
    """60 degC and half of the rating: the text says so; a computed figure is taken as it is, up to half more than the rating."""
    def short(*stresses: Stress) -> Weight:
        return fault_weights(BOARD, stresses)[Fault("Q1", "ce_short")]

    plain, told = short(), short(Stress("Q1", "peak_voltage", 350.0, 700.0), Stress("Q1", "temperature", 60.0))
    assert plain.value == pytest.approx(told.value) and "usual figure" in plain.text and "usual figure" not in told.text
    over, far = (short(Stress("Q1", "peak_voltage", volts, 700.0)).value for volts in (1050.0, 9e3))
    assert over == pytest.approx(far) and over > plain.value
    worst = fault_weights(BOARD, (Stress("Q1", "peak_voltage", 100.0, 700.0), Stress("Q1", "reverse_voltage", 690.0, 700.0)))
    alone = fault_weights(BOARD, (Stress("Q1", "reverse_voltage", 690.0, 700.0),))
    assert worst[Fault("Q1", "ce_short")].value == pytest.approx(alone[Fault("Q1", "ce_short")].value), "the worst of them counts"


def test_a_resistor_is_stressed_by_its_power_and_not_by_its_volts() -> None:
    volts = fault_weights(BOARD, (Stress("R1", "peak_voltage", 340.0, 350.0),))
    watts = fault_weights(BOARD, (Stress("R1", "power", 0.45, 0.5),))
    plain = fault_weights(BOARD, ())[Fault("R1", "open")].value
    assert volts[Fault("R1", "open")].value == plain < watts[Fault("R1", "open")].value


def test_half_of_the_electrolytics_are_worn_out_at_their_life() -> None:
    """Weibull with its median at the computed life; capacitance and series resistance share it as the modes do."""
    hours = 6.0 * 365.25 * 12.0
    worn = fault_weights(BOARD, (Stress("C1", "life", hours),))
    fresh = fault_weights(BOARD, ())
    more = {mode: worn[Fault("C1", mode)].value - fresh[Fault("C1", mode)].value for mode in ("low_capacitance", "high_esr")}
    assert sum(more.values()) == pytest.approx(0.5, rel=1e-6)
    assert "worn out" in worn[Fault("C1", "high_esr")].text
    others = [fault for fault in fresh if fault.ref != "C1" or fault.mode not in more]
    assert all(worn[fault].value == pytest.approx(fresh[fault].value) for fault in others)
    twice = fault_weights(BOARD, (Stress("C1", "life", hours / 2.0),))
    gone = sum(twice[Fault("C1", mode)].value - fresh[Fault("C1", mode)].value for mode in more)
    assert gone == pytest.approx(1.0 - 0.5 ** (2.0**3)), "shape 3"
    dead = fault_weights(BOARD, (Stress("C1", "life", 0.0),))
    assert sum(dead[Fault("C1", mode)].value - fresh[Fault("C1", mode)].value for mode in more) == pytest.approx(1.0)
