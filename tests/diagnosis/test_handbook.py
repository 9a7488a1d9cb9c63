"""Weights of faults from rates, mode shares and wear-out: what must hold whatever the figures are."""

import pytest

from triage.board.fault import Fault
from triage.board.part import Board, Label, Mains, Part
from triage.board.stress import Stress
from triage.diagnosis.handbook import USUAL_HOURS_PER_DAY, USUAL_YEARS, fault_weights
from triage.diagnosis.priors import prior_of
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
