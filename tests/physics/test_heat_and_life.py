"""Reasoned: heat, capacitor life, failure rates, mode shares and derating."""

import numpy as np
import pytest

from triage.board.kinds import kinds
from triage.physics import derating, electrolytic_life, failure_factors, failure_modes, failure_rate, thermal


def test_allowed_power_ambient_and_resistance_are_one_equation() -> None:
    power = thermal.allowed_power(150.0, 40.0, 2.0, 8.0)
    assert thermal.temperature_after(40.0, power, 2.0, 8.0) == pytest.approx(150.0)
    assert thermal.allowed_ambient(150.0, power, 2.0, 8.0) == pytest.approx(40.0)
    assert thermal.needed_resistance(150.0, 40.0, power, 2.0) == pytest.approx(8.0)
    assert thermal.allowed_power(150.0, 160.0, 10.0) == 0.0


def test_winding_and_resistor_and_transformer_rise() -> None:
    assert thermal.winding_rise(10.0, 10.0, 25.0, 25.0) == 0.0
    assert thermal.winding_rise(10.0, 10.0 * (1.0 + 40.0 / 259.5), 25.0, 25.0) == pytest.approx(40.0)
    assert thermal.resistor_hot_spot(70.0, 0.25, 0.25) == 155.0
    assert thermal.resistor_hot_spot(40.0, 0.0, 0.25, "wirewound") == 40.0
    assert thermal.transformer_rise(2.0, 0.01) == pytest.approx(2.0 * thermal.transformer_rise(1.0, 0.01))
    assert thermal.superposed_rise(np.array([10.0]), np.array([2.0])) == 20.0


def test_package_table() -> None:
    for record in thermal.PACKAGES.values():
        assert 0.0 < record.junction_case < record.junction_ambient <= 400.0
        assert record.confidence in {"data sheet", "from memory"} and record.source
    assert thermal.package_resistance("", "no such kind") is None
    assert thermal.package_resistance("unknown", "mosfet") == thermal.PACKAGES["TO-220"]


def test_ten_kelvin_halve_the_life() -> None:
    assert electrolytic_life.life(2000.0, 105.0, 1.0, 1.0) == pytest.approx(2000.0)
    hot, cool = electrolytic_life.life(2000.0, np.array([75.0, 65.0]), 0.7, 1.0)
    assert cool == pytest.approx(2.0 * hot)
    assert electrolytic_life.life_by_core(2000.0, 110.0) == pytest.approx(2000.0)
    assert electrolytic_life.equivalent_temperature(2000.0, electrolytic_life.life(2000.0, 77.0, 1.0, 1.0)) == pytest.approx(77.0)


def test_ripple_and_voltage_shorten_the_life_steadily() -> None:
    ripple = electrolytic_life.ripple_factor(np.linspace(0.0, 2.0, 41), 1.0)
    assert np.all(np.diff(ripple) < 0.0) and ripple[20] == pytest.approx(1.0)
    assert electrolytic_life.ripple_factor(2.0, 1.0, 5.0, 85.0) > electrolytic_life.ripple_factor(2.0, 1.0, 5.0, 105.0)
    volts = electrolytic_life.voltage_factor(np.array([0.3, 0.6, 0.8, 1.0]), 1.0)
    assert volts[0] == volts[1] and np.all(np.diff(volts[1:]) < 0.0) and volts[-1] == 1.0
    assert electrolytic_life.voltage_factor(0.7, 1.0, 0.0) == 1.0
    assert electrolytic_life.life_rubycon(2000.0, 75.0, 1.0, 1.0) == pytest.approx(16000.0)


def test_mixed_life_lies_between_its_parts_and_ripple_adds_by_heat() -> None:
    assert electrolytic_life.mixed_life(np.array([8.0, 16.0]), np.array([1e4, 1e4])) == pytest.approx(1e4)
    assert 1e4 < electrolytic_life.mixed_life(np.array([8.0, 16.0]), np.array([1e4, 3e4])) < 3e4
    assert electrolytic_life.equivalent_ripple(np.array([3.0, 4.0]), np.array([1.0, 1.0])) == pytest.approx(5.0)


def test_leakage_limit_of_low_and_high_voltage_parts() -> None:
    """RGA series data sheet: max(0.01 CV, 3) uA up to 100 V, 0.03 CV + 15 and 0.02 CV + 25 uA above."""
    got = electrolytic_life.highest_leakage(np.array([1e-6, 1000e-6, 2.2e-6, 10e-6]), np.array([16.0, 16.0, 400.0, 400.0]))
    np.testing.assert_allclose(got, np.array([3.0, 160.0, 41.4, 105.0]) * 1e-6)


def test_electrolyte_gone_is_an_open_capacitor() -> None:
    assert electrolytic_life.aged_esr(0.1, 0.0, 1e4) == 0.1
    assert electrolytic_life.aged_esr(0.1, 1e4, 1e4) == np.inf


def test_failure_rates_rise_with_heat_and_stress() -> None:
    heat = np.linspace(25.0, 125.0, 11)
    for rates in (failure_rate.diode_rate("switching", 0.5, heat), failure_rate.bipolar_rate(1.0, 0.5, heat),
                  failure_rate.fet_rate(10.0, heat), failure_rate.capacitor_rate("CE", 1e-5, 0.5, heat),
                  failure_rate.resistor_rate("RL", 0.25, 0.5, heat), failure_rate.optoelectronic_rate("led", heat),
                  failure_rate.microcircuit_rate(100.0, 3.0, heat), failure_rate.transformer_rate("low_power_pulse", heat)):
        assert np.all(np.diff(rates) > 0.0)
    stress = np.linspace(0.35, 1.0, 14)
    for rates in (failure_rate.diode_rate("switching", stress, 50.0), failure_rate.bipolar_rate(1.0, stress, 50.0),
                  failure_rate.capacitor_rate("CK", 1e-9, stress, 50.0), failure_rate.resistor_rate("RW", 1.0, stress, 50.0)):
        assert np.all(np.diff(rates) > 0.0)
    flat = failure_rate.diode_rate("zener_regulator_or_reference", stress, 50.0)
    assert np.ptp(flat) == 0.0


def test_temperature_factors_are_one_at_25_degrees() -> None:
    assert failure_factors.slope_temperature_factor(25.0, 3091.0) == pytest.approx(1.0)
    assert failure_factors.arrhenius_factor(25.0, 0.35) == pytest.approx(1.0)
    assert failure_factors.arrhenius_factor(90.0, 0.0) == pytest.approx(1.0)


def test_steps_of_the_factor_tables() -> None:
    np.testing.assert_allclose(failure_factors.series_resistance_factor(np.array([0.0, 0.05, 0.3, 0.5, 0.7, 2.0])),
                               [3.3, 3.3, 2.0, 1.3, 1.0, 0.66])
    matings = failure_factors.mating_factor(np.array([0.01, 0.4, 4.0, 40.0, 400.0]))
    np.testing.assert_allclose(matings, [1.0, 1.5, 2.0, 3.0, 4.0])
    np.testing.assert_allclose(failure_factors.learning_factor(np.array([0.0, 0.1, 2.0, 30.0])), [2.0, 2.0, 1.0, 1.0])
    small, two, five = failure_rate.fet_rate(np.array([1.0, 2.0, 5.0]), 25.0, quality=1.0)
    assert (small, two, five) == pytest.approx((0.012 * 0.7, 0.012 * 2.0, 0.012 * 4.0))
    assert failure_rate.connector_rate("power", 25.0, 40.0, 1.0) == pytest.approx(0.021)


KINDS = {
    "resistor": ("open", "high"), "fusible_resistor": ("open", "high"), "fuse": ("open",),
    "capacitor": ("open", "short", "low_capacitance"),
    "electrolytic": ("open", "short", "low_capacitance", "high_esr", "leaky"), "diode": ("open", "short", "leaky"),
    "zener": ("open", "short", "leaky", "low_voltage"), "led": ("open", "short"),
    "bipolar_transistor": ("open", "ce_short", "be_short", "be_open", "leaky", "low_gain"),
    "mosfet": ("open", "short", "short_dgs", "gate_open", "gs_short", "leaky"),
    "optocoupler": ("led_open", "led_short", "ce_open", "ce_short", "low_ctr"),
    "transformer": ("pri_open", "fb_open", "sec_open", "shorted_turns"), "inductor": ("open", "short"),
    "ntc": ("open", "high", "short"), "varistor": ("open", "short", "leaky"), "bridge": ("open", "d_open", "d_short"),
    "regulator": ("open", "short", "gnd_open", "out_short", "leaky"),
    "shunt_reference": ("open", "short", "vref_high", "leaky"),
    "pwm_controller": ("open", "vcc_short", "vcc_leaky", "drv_low", "drv_high"),
}
"""Every part kind with the fault modes that the reference circuits give it."""


@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_has_shares_a_rate_and_sources(kind: str) -> None:
    shares = failure_modes.mode_shares(kind, "", KINDS[kind])
    assert tuple(shares) == KINDS[kind]
    assert sum(shares.values()) == pytest.approx(1.0) and min(shares.values()) > 0.0
    assert failure_modes.mode_row(kind) is not None and failure_modes.mode_source(kind).endswith(")")
    assert failure_rate.part_rate(kind) > 0.0


@pytest.mark.parametrize("kind", sorted(kinds()))
def test_every_kind_that_a_board_may_have_is_known(kind: str) -> None:
    """A rate, and a row of shares that names all modes of the kind."""
    row = failure_modes.mode_row(kind)
    assert row is not None and set(kinds()[kind].fault_modes) <= set(row.modes)
    assert failure_rate.part_rate(kind) > 0.0


def test_rows_sum_to_one_and_every_role_row_stands_before_its_general_one() -> None:
    for row in failure_modes.ROWS:
        assert sum(row.modes.values()) == pytest.approx(1.0), row.kinds
        assert row.confidence in {"verified", "from memory", "judgement"}
    assert failure_modes.mode_row("electrolytic", "output capacitor").modes["high_esr"] == 0.40
    assert failure_modes.mode_row("electrolytic", "bulk capacitor").modes["high_esr"] == 0.25


def test_share_of_a_mode_the_part_lacks_goes_to_its_neighbour() -> None:
    with_dry = failure_modes.mode_shares("electrolytic", "output capacitor", ["high_esr", "dry", "short"])
    without = failure_modes.mode_shares("electrolytic", "output capacitor", ["high_esr", "short"])
    assert without["high_esr"] == pytest.approx(with_dry["high_esr"] + with_dry["dry"])
    assert without["short"] == pytest.approx(with_dry["short"])


def test_modes_without_a_share_are_rare_and_kinds_without_a_row_even() -> None:
    shares = failure_modes.mode_shares("led", "", ["open", "short", "dim"])
    assert shares["dim"] == pytest.approx(failure_modes.UNLISTED / (1.0 + failure_modes.UNLISTED))
    assert failure_modes.mode_shares("gas tube", "", ["a", "b"]) == {"a": 0.5, "b": 0.5}
    assert "judgement" in failure_modes.mode_source("gas tube")
    assert failure_modes.mode_shares("led", "", []) == {}


def test_an_unknown_kind_has_no_rate() -> None:
    with pytest.raises(KeyError):
        failure_rate.part_rate("gas tube")
    with pytest.raises(ValueError, match="XX"):
        failure_rate.fuse_rate("XX")


def test_part_rate_follows_role_and_stress() -> None:
    assert failure_rate.part_rate("capacitor", "X2 capacitor") != failure_rate.part_rate("capacitor", "clamp capacitor")
    assert failure_rate.part_rate("diode", "mains rectifier") > failure_rate.part_rate("diode", "base reset diode")
    assert failure_rate.part_rate("bridge") == pytest.approx(4.0 * failure_rate.part_rate("diode", "mains rectifier"))
    mains, flyback = (failure_rate.part_rate("transformer", f"{name} transformer") for name in ("mains", "flyback"))
    assert mains < flyback
    usual = failure_rate.capacitor_rate("CE", 1e-6, 0.5, 60.0)
    assert failure_rate.part_rate("electrolytic") == pytest.approx(usual)
    assert failure_rate.part_rate("fuse", environment="GM") == pytest.approx(0.08)


def test_derating_falls_back_and_says_nothing_where_nothing_is_known() -> None:
    assert derating.derating("led", "power LED", "average_current").source.startswith("MIL-STD-975M")
    assert derating.derating("ntc", "inrush limiter", "power").factor == 0.5
    assert derating.derating("electrolytic", "output capacitor", "life") == (None, "")
    assert derating.derating("zener", "regulation zener", "peak_voltage") == (None, "")
    assert derating.derating("mosfet", "main switch", "temperature").factor is None
    assert derating.derating("electrolytic", "bulk capacitor", "peak_voltage", chosen="ecss") == (None, "")
    with pytest.raises(KeyError):
        derating.derating("mosfet", "main switch", "power", chosen="no such set")


def test_temperature_limit_never_exceeds_the_rating() -> None:
    assert derating.derating("mosfet", "main switch", "temperature", 100.0).factor == 1.0
    assert derating.derating("mosfet", "main switch", "temperature", 175.0).factor == pytest.approx(115.0 / 175.0)


def test_every_set_has_factors_within_the_rating() -> None:
    quantities = ("peak_voltage", "reverse_voltage", "rms_voltage", "average_current", "peak_current", "rms_current",
                  "ripple_current", "power", "i2t", "temperature")
    for chosen in derating.SETS:
        seen = 0
        for kind in KINDS:
            for quantity in quantities:
                factor, source = derating.derating(kind, "", quantity, 150.0, chosen)
                if factor is not None:
                    seen += 1
                    assert 0.0 < factor <= 1.0 and source
        assert seen >= 8, chosen


def test_power_fraction_and_fuse_steps() -> None:
    got = derating.derated_power_fraction(np.array([20.0, 125.0, 140.0, 155.0, 200.0]), 0.6, 125.0, 155.0)
    np.testing.assert_allclose(got, [0.6, 0.6, 0.3, 0.0, 0.0])
    np.testing.assert_allclose(derating.fuse_current_factor(np.array([0.125, 0.3, 0.375, 0.75, 1.6, 4.0])),
                               [0.25, 0.30, 0.35, 0.40, 0.45, 0.50])
    assert derating.fuse_current_factor(4.0, 200.0) == 0.0
    assert derating.allowed_resistor_voltage(100.0, 0.25, 250.0) == pytest.approx(np.sqrt(15.0))
