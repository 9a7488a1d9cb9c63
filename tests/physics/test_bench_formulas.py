"""Reasoned: dividers, zener stages, regulators, references, discharge, inrush, leakage."""

import numpy as np
import pytest

from triage.physics import capacitor_discharge as discharge
from triage.physics import divider, fuse_inrush, linear_regulator, shunt_reference, y_capacitor, zener


def test_open_and_shorted_parts_in_networks() -> None:
    assert divider.parallel(1000.0, np.inf) == pytest.approx(1000.0)
    assert divider.parallel(1000.0, 0.0) == 0.0
    assert divider.resistance_in_circuit(39e3, np.inf) == pytest.approx(39e3)
    assert divider.read_with_meter(100.0, 1e3, 1e3, np.inf) == pytest.approx(50.0)
    assert divider.read_with_meter(100.0, 1e6, 1e6, 1e6) < 50.0


def test_parallel_and_series_do_not_care_for_order() -> None:
    assert divider.parallel(1.0, 6.0, 13.0) == pytest.approx(divider.parallel(13.0, 1.0, 6.0))
    assert divider.parallel(4.0, 4.0, 4.0, 4.0) == pytest.approx(1.0)


def test_two_readings_give_the_source_back() -> None:
    inner = divider.source_resistance(12.0, divider.loaded_voltage(12.0, 0.5, 2.5), 0.5)
    assert inner == pytest.approx(2.5)
    current = divider.current_into(12.0, inner, 7.5)
    assert divider.heat(current, 7.5) == pytest.approx(1.2 * divider.loaded_voltage(12.0, current, inner))


def test_zener_stage_drops_out_continuously() -> None:
    volts = np.linspace(0.0, 40.0, 81)
    out = zener.stage_output(volts, 12.0, 1000.0, 2000.0)
    assert np.all(np.diff(out) >= 0.0) and out.max() == 12.0
    edge = zener.input_for_current(12.0, 1000.0, 12.0 / 2000.0)
    assert zener.stage_output(edge, np.inf, 1000.0, 2000.0) == pytest.approx(12.0)
    assert zener.zener_current(edge - 1.0, 12.0, 1000.0, 12.0 / 2000.0) == 0.0
    assert zener.series_resistance(edge, 12.0, 12.0 / 2000.0) == pytest.approx(1000.0)


def test_zener_without_slope_is_the_plain_stage() -> None:
    assert zener.stage_output_with_slope(20.0, 6.2, 1e-9, 500.0, 0.01) == pytest.approx(6.2)
    assert zener.ripple_out(1.0, 1e-9, 500.0) == pytest.approx(0.0, abs=1e-9)
    assert zener.voltage_at_current(6.2, 0.005, 10.0, 0.005) == 6.2


def test_regulator_equations_are_consistent() -> None:
    power = linear_regulator.pass_power(12.0, 5.0, 0.5)
    assert linear_regulator.current_for_power(power, 12.0, 5.0) == pytest.approx(0.5)
    assert linear_regulator.efficiency(12.0, 5.0) == pytest.approx(2.5 / (2.5 + power))
    assert linear_regulator.input_needed(5.0, 2.0, 1.5) == 8.5
    assert linear_regulator.sense_resistance(0.7) == pytest.approx(1.0)
    assert linear_regulator.follower_base_current(linear_regulator.follower_output(5.7), 10.0, 50.0) == pytest.approx(0.01)


def test_reference_divider_goes_back_to_its_resistor() -> None:
    out = shunt_reference.set_point(2.495, 10e3, 38e3, 2e-6)
    assert shunt_reference.resistor_for_output(out, 2.495, 10e3, 2e-6) == pytest.approx(38e3)
    assert shunt_reference.divider_current(out, 2.495, 38e3) == pytest.approx(2.495 / 10e3 + 2e-6)
    assert shunt_reference.set_point(2.495, 10e3, 0.0) == 2.495


def test_optocoupler_bias_is_consistent() -> None:
    led = shunt_reference.led_current(5.0, 2.0, 4700.0, 0.5)
    bias = shunt_reference.bias_resistance(led, 1.2, 220.0, 5e-3)
    assert shunt_reference.cathode_current(led, 1.2, bias, 220.0) == pytest.approx(5e-3)
    resistance = shunt_reference.highest_led_resistance(5.0, 1.2, 2.5, led)
    assert shunt_reference.cathode_voltage(5.0, 1.2, led, resistance) == pytest.approx(2.5)


def test_discharge_time_resistor_and_voltage_agree() -> None:
    time = discharge.time_to_voltage(373.0, 60.0, 470e3, 100e-6)
    assert discharge.voltage_after(time, 373.0, 470e3, 100e-6) == pytest.approx(60.0)
    assert discharge.resistance_for_time(time, 373.0, 60.0, 100e-6) == pytest.approx(470e3)
    assert discharge.time_to_voltage(50.0, 60.0, 470e3, 100e-6) == 0.0
    assert discharge.time_to_voltage(373.0, 60.0, np.inf, 100e-6) == np.inf
    assert discharge.voltage_after(5.0, 373.0, np.inf, 100e-6) == 373.0


def test_charging_time_and_resistor_agree() -> None:
    time = discharge.charging_time(325.0, 16.0, 440e3, 6.8e-6)
    assert discharge.charging_resistance(time, 325.0, 16.0, 6.8e-6) == pytest.approx(440e3)


def test_stored_energy_runs_the_converter() -> None:
    time = discharge.hold_up_time(325.0, 120.0, 100e-6, 45.0)
    used = discharge.stored_energy(100e-6, 325.0) - discharge.stored_energy(100e-6, 120.0)
    assert used == pytest.approx(45.0 * time)
    assert discharge.capacitance_for_energy(discharge.stored_energy(22e-6, 300.0), 300.0) == pytest.approx(22e-6)
    assert discharge.bleeder_power(10.0, 50.0) == 2.0


def test_inrush_of_a_slow_mains_is_that_of_a_direct_step() -> None:
    """A falling sine brings a little less than V^2 C / 2R, and nearly that when the capacitor charges fast."""
    step = 325.0 ** 2 * 10e-6 / (2.0 * 2.0)
    fast = fuse_inrush.inrush_i2t(325.0, 2.0, 10e-6, 50.0)
    assert fast == pytest.approx(step, rel=0.002) and fast < step
    slow = fuse_inrush.inrush_i2t(325.0, np.array([2.0, 10.0, 50.0]), 47e-6, 50.0)
    assert np.all(slow < 325.0 ** 2 * 47e-6 / (2.0 * np.array([2.0, 10.0, 50.0])))
    assert fuse_inrush.inrush_i2t(325.0, 10.0, 100e-6, 50.0, pulses=1) <= fuse_inrush.inrush_i2t(325.0, 10.0, 100e-6, 50.0)
    assert fuse_inrush.inrush_peak(325.0, fuse_inrush.inrush_resistance(325.0, 40.0)) == pytest.approx(40.0)


@pytest.mark.parametrize("shape, wave", [
    ("rectangle", lambda x: 1.0 + 0.0 * x), ("triangle", lambda x: x), ("half sine", lambda x: np.sin(np.pi * x)),
    ("parabola", lambda x: (1.0 - x) ** 2)])
def test_pulse_factor_is_the_integral_of_the_shape(shape: str, wave: object) -> None:
    x = (np.arange(10_000) + 0.5) / 10_000
    assert fuse_inrush.pulse_i2t(1.0, 1.0, shape) == pytest.approx(float(np.mean(wave(x) ** 2)), rel=1e-6)  # type: ignore[operator]


def test_exponential_pulse_factor_is_the_integral_of_the_shape() -> None:
    x = np.arange(0.0, 30.0, 1e-3) + 0.5e-3
    assert fuse_inrush.pulse_i2t(1.0, 1.0, "exponential") == pytest.approx(float(np.exp(-2.0 * x).sum() * 1e-3), rel=1e-5)


def test_more_pulses_ask_for_a_stronger_fuse() -> None:
    needed = [fuse_inrush.melting_i2t_needed(1.0, n) for n in (100, 1000, 10_000, 100_000)]
    assert needed == sorted(needed) and needed[0] > 1.0
    assert fuse_inrush.time_at_current(fuse_inrush.pulse_i2t(10.0, 0.02, "rectangle"), 10.0) == pytest.approx(0.02)
    assert fuse_inrush.rated_current_needed(1.0, 1.0) == 1.0


def test_touch_current_meter_reads_a_little_below_the_leakage() -> None:
    for capacitance in (1e-9, 4.7e-9):
        most = y_capacitor.leakage_current(capacitance, 264.0, 60.0)
        reading = y_capacitor.touch_reading(capacitance, 264.0, 60.0)
        assert reading.weighted < reading.unweighted < reading.current < most
        assert reading.weighted == pytest.approx(most, rel=0.01)
    assert y_capacitor.touch_reading(1e-9, 264.0, 20e3).weighted < 0.2 * y_capacitor.touch_reading(1e-9, 264.0, 20e3).unweighted
