"""Reasoned: energy, charge and limits of flyback, ringing choke, clamp and magnetics."""

import numpy as np
import pytest

from triage.physics import clamp, flyback, magnetics, ringing_choke

INPUT = np.array([100.0, 160.0, 325.0, 375.0])


def _point(inductance: float | np.ndarray, current: float = 1.0) -> flyback.FlybackPoint:
    return flyback.operating_point(INPUT, 12.0, current, 8.0, inductance, 65e3)


@pytest.mark.parametrize("inductance", [0.3e-3, 1.0e-3, 1.5e-3, 3.0e-3])
def test_power_in_is_power_out_in_both_modes(inductance: float) -> None:
    p = _point(inductance)
    np.testing.assert_allclose(INPUT * 0.5 * (p.primary_peak + p.primary_start) * p.duty, 12.7)
    stroke = flyback.stored_energy(inductance, p.primary_peak) - flyback.stored_energy(inductance, p.primary_start)
    np.testing.assert_allclose(stroke, 12.7 / 65e3)


@pytest.mark.parametrize("inductance", [0.3e-3, 1.5e-3, 3.0e-3])
def test_charge_and_flux_balance(inductance: float) -> None:
    """Mean secondary current is the output current; the volt-seconds of both strokes are equal."""
    p = _point(inductance)
    np.testing.assert_allclose(4.0 * (p.primary_peak + p.primary_start) * p.demagnetising, 1.0)
    np.testing.assert_allclose(INPUT * p.duty, p.reflected * p.demagnetising)
    np.testing.assert_allclose(p.capacitor_rms ** 2 + 1.0, p.secondary_rms ** 2)


def test_both_modes_meet_at_the_edge() -> None:
    duty = flyback.continuous_duty(INPUT, 8.0 * 12.7)
    edge = flyback.edge_inductance(INPUT, duty, 12.7, 65e3)
    below, above = _point(edge * (1.0 - 1e-9)), _point(edge * (1.0 + 1e-9))
    for field in ("duty", "demagnetising", "primary_peak", "primary_rms", "secondary_rms"):
        np.testing.assert_allclose(getattr(below, field), getattr(above, field), rtol=1e-6)
    np.testing.assert_allclose(above.primary_start, 0.0, atol=1e-6)
    np.testing.assert_allclose(below.duty + below.demagnetising, 1.0, rtol=1e-6)


def test_gaps_only_below_the_edge() -> None:
    small, large = _point(0.3e-3), _point(5.0e-3)
    assert np.all(small.duty + small.demagnetising < 1.0) and np.all(small.primary_start == 0.0)
    np.testing.assert_allclose(large.duty + large.demagnetising, 1.0)
    assert np.all(large.primary_start > 0.0)


def test_ripple_by_charge_against_a_waveform_summed_here() -> None:
    for inductance in (0.3e-3, 3.0e-3):
        p = flyback.operating_point(100.0, 12.0, 1.0, 8.0, inductance, 65e3)
        time = (np.arange(200_000) + 0.5) / 200_000 * float(p.demagnetising) / 65e3
        end = 8.0 * float(p.primary_start)
        amps = float(p.secondary_peak) + (end - float(p.secondary_peak)) * time / time[-1]
        charge = np.maximum(amps - 1.0, 0.0).mean() * time[-1]
        assert flyback.capacitive_ripple(p, 1.0, 470e-6, 65e3) == pytest.approx(charge / 470e-6, rel=1e-4)


def test_backwards_equations_return_to_the_start() -> None:
    assert flyback.turns_ratio(flyback.reflected_voltage(12.0, 0.7, 8.0), 12.0, 0.7) == pytest.approx(8.0)
    duty = flyback.continuous_duty(100.0, 80.0)
    assert flyback.input_for_duty(80.0, duty) == pytest.approx(100.0)
    assert flyback.power_from_peak(flyback.peak_from_duty(10.0, 100.0, duty), 100.0, duty) == pytest.approx(10.0)
    assert flyback.inductance_for_ramp(100.0, 5e-6, flyback.ramp(100.0, 1e-3, 5e-6)) == pytest.approx(1e-3)
    ratio = flyback.highest_turns_ratio(600.0, 375.0, 100.0, 12.0, 0.7)
    assert flyback.switch_plateau(375.0, flyback.reflected_voltage(12.0, 0.7, ratio)) + 100.0 == pytest.approx(600.0)


def test_discontinuous_output_agrees_with_the_operating_point() -> None:
    p = flyback.operating_point(100.0, 12.0, 1.0, 8.0, 0.5e-3, 65e3, diode_drop=0.0)
    assert flyback.discontinuous_output(100.0, p.duty, 12.0, 0.5e-3, 65e3) == pytest.approx(12.0)


def test_rms_of_a_rectangle_and_of_a_triangle() -> None:
    assert flyback.ramp_rms(2.0, 2.0, 0.25) == pytest.approx(1.0)
    assert flyback.ramp_rms(3.0, 0.0, 1.0) == pytest.approx(np.sqrt(3.0))
    assert flyback.capacitor_ripple_current(1.0, 1.0 + 1e-9) == 0.0


@pytest.mark.parametrize("delay", [0.0, 1.4e-6])
def test_ringing_choke_carries_the_power_it_was_asked_for(delay: float) -> None:
    peak = ringing_choke.peak_for_power(6.0, 2e-3, INPUT, 75.0, delay)
    rate = ringing_choke.frequency(2e-3, peak, INPUT, 75.0, delay)
    np.testing.assert_allclose(ringing_choke.power_carried(2e-3, peak, rate), 6.0)
    if delay == 0.0:
        np.testing.assert_allclose(ringing_choke.inductance_for_frequency(6.0, rate, INPUT, 75.0), 2e-3)
        np.testing.assert_allclose(peak, flyback.peak_from_duty(6.0, INPUT, flyback.continuous_duty(INPUT, 75.0)))


def test_ringing_choke_limits() -> None:
    assert ringing_choke.valley_voltage(50.0, 75.0) == 0.0
    assert ringing_choke.drive_current(10.0, 0.06, 0.8, 220.0) == 0.0
    assert ringing_choke.output_from_rail(7.0, 0.7, 0.7, 1.0) == pytest.approx(7.0)
    assert np.all(np.diff(ringing_choke.frequency(2e-3, 0.3, INPUT, 75.0)) > 0.0)


def test_clamp_takes_leakage_energy_and_its_share_of_the_core() -> None:
    """Balance in steady state: heat is leakage energy a second times V/(V - Vor), with the solved cycle."""
    drive = (30e-6, 0.6, 65e3, 80.0)
    cycle = clamp.clamp_cycle(*drive, 100e3, np.array([1e-9, 10e-9, 100e-9]))
    np.testing.assert_allclose(cycle.power[2], clamp.clamp_power(*drive, cycle.rms[2]), rtol=2e-3)
    np.testing.assert_allclose(cycle.rms[2], clamp.clamp_voltage(*drive, 100e3), rtol=1e-3)
    assert np.all(np.diff(cycle.peak - cycle.valley) < 0.0)
    ripple = clamp.clamp_ripple(cycle.rms[2], 100e3, 100e-9, 65e3)
    np.testing.assert_allclose(cycle.peak[2] - cycle.valley[2], ripple, rtol=0.02)


def test_clamp_without_leakage_rests_at_the_reflected_voltage() -> None:
    assert clamp.clamp_voltage(0.0, 0.6, 65e3, 80.0, 100e3) == pytest.approx(80.0)
    resistors = clamp.clamp_voltage(30e-6, 0.6, 65e3, 80.0, np.array([10e3, 47e3, 100e3, 1e6]))
    assert np.all(np.diff(resistors) > 0.0)


def test_ring_of_a_node_goes_back_to_its_parts() -> None:
    one = 1.0 / clamp.ring_frequency(1e-6, 100e-12)
    two = 1.0 / clamp.ring_frequency(1e-6, 320e-12)
    assert clamp.parasitic_capacitance(one, two, 220e-12) == pytest.approx(100e-12)
    assert clamp.parasitic_inductance(one, 100e-12) == pytest.approx(1e-6)


def test_snubbed_step_against_a_response_stepped_here() -> None:
    voltage, inductance, resistance, capacitance = 220.0, 50e-6, 6.6, 0.75e-6
    step, current, held, highest = 1e-9, 0.0, 0.0, 0.0
    for _ in range(30_000):
        current += step * (voltage - resistance * current - held) / inductance
        held += step * current / capacitance
        highest = max(highest, resistance * current + held)
    response = clamp.snubbed_step(voltage, inductance, resistance, capacitance)
    assert response.peak == pytest.approx(highest, rel=2e-3)
    assert clamp.snubbed_step(voltage, inductance, 1e-6, capacitance).peak == pytest.approx(2.0 * voltage, rel=1e-5)


def test_snubber_heat_counts_both_edges() -> None:
    assert clamp.snubber_power(1e-9, 300.0, 65e3) == pytest.approx(2.0 * clamp.snubber_power(1e-9, 300.0, 65e3, 1))


def test_two_ways_to_the_gap_and_to_the_flux() -> None:
    turns = magnetics.turns_for_peak(1.07e-3, 1.5, 0.25, 109e-6)
    assert magnetics.storage_flux_density(1.07e-3, 1.5, turns, 109e-6) == pytest.approx(0.25)
    by_energy = magnetics.gap_for_energy(1.07e-3, 1.5, 0.25, 109e-6)
    assert magnetics.gap_for_inductance(turns, 109e-6, 1.07e-3) == pytest.approx(by_energy)


def test_ideal_transformer_keeps_the_power() -> None:
    volts, amps = magnetics.transformed_voltage(230.0, 500.0, 40.0), magnetics.transformed_current(2.0, 40.0, 500.0)
    assert volts * 2.0 == pytest.approx(230.0 * amps)
    assert magnetics.turns_for_voltage(500.0, 230.0, volts) == pytest.approx(40.0)
    sine = magnetics.sine_flux_density(230.0, 50.0, 500.0, 4e-4)
    swing = np.sqrt(2.0) * 230.0 / (np.pi * 50.0)  # volt-seconds of one half wave
    assert magnetics.turns_for_flux_swing(swing, 2.0 * sine, 4e-4) == pytest.approx(500.0)
