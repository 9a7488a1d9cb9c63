"""Reasoned: what charge, energy and limits ask of a rectifier with a capacitor."""

import numpy as np
import pytest

from triage.physics import rectifier
from triage.physics import rectifier_estimates as est

PEAK = np.sqrt(2.0) * np.array([90.0, 230.0, 264.0])[:, None]
CAPACITANCE = np.array([22e-6, 47e-6, 100e-6])[None, :]
POWER = 12.0


def _power_load(pulses: int = 2) -> rectifier.Rectified:
    return rectifier.with_power_load(PEAK, 50.0, CAPACITANCE, POWER, pulses)


@pytest.mark.parametrize("pulses", [1, 2])
def test_energy_from_the_mains_is_the_energy_of_the_load(pulses: int) -> None:
    """Integral of |e| i over conduction (done here numerically) equals power times period."""
    r = _power_load(pulses)
    w, span = 2.0 * np.pi * 50.0, 2.0 * np.pi / pulses
    angle = r.on_angle + (r.off_angle - r.on_angle) * (np.arange(20_000)[:, None, None] + 0.5) / 20_000
    volts = PEAK * np.sin(angle)
    amps = w * CAPACITANCE * PEAK * np.cos(angle) + POWER / volts
    energy = (volts * amps).mean(axis=0) * (r.off_angle - r.on_angle)
    np.testing.assert_allclose(energy, POWER * span, rtol=1e-5)
    np.testing.assert_allclose(amps.mean(axis=0) * (r.off_angle - r.on_angle) / span, r.rectifier_average, rtol=1e-5)
    np.testing.assert_allclose(np.sqrt((amps ** 2).mean(axis=0) * (r.off_angle - r.on_angle) / span), r.rectifier_rms, rtol=1e-5)


def test_resistor_draws_what_the_rectifier_gives() -> None:
    """Charge balance of the capacitor: mean rectifier current is mean voltage over resistance."""
    for pulses in (1, 2):
        r = rectifier.with_resistive_load(PEAK, 50.0, CAPACITANCE, 2000.0, pulses)
        np.testing.assert_allclose(r.rectifier_average, r.average / 2000.0, rtol=1e-9)


def test_capacitor_rms_completes_the_currents_of_a_resistor_with_little_ripple() -> None:
    """With hardly any ripple the load current is steady, and i_rect^2 = i_cap^2 + i_load^2 in rms values."""
    r = rectifier.with_resistive_load(325.0, 50.0, 5e-3, 2000.0)
    assert r.rectifier_rms ** 2 == pytest.approx(r.capacitor_rms ** 2 + (r.average / 2000.0) ** 2, rel=2e-3)


def test_a_large_capacitor_stays_at_the_crest_and_a_small_one_empties() -> None:
    assert rectifier.with_power_load(325.0, 50.0, 1.0, POWER).valley == pytest.approx(325.0, rel=1e-4)
    assert rectifier.with_power_load(325.0, 50.0, 0.5e-6, POWER).valley == 0.0
    assert rectifier.with_power_load(325.0, 50.0, 0.5e-6, POWER, pulses=1).valley == 0.0


def test_more_load_less_capacitance_and_half_the_pulses_deepen_the_valley() -> None:
    powers = rectifier.with_power_load(325.0, 50.0, 22e-6, np.linspace(1.0, 30.0, 20)).valley
    sizes = rectifier.with_power_load(325.0, 50.0, np.linspace(10e-6, 100e-6, 20), POWER).valley
    assert np.all(np.diff(powers) < 0.0) and np.all(np.diff(sizes) > 0.0)
    assert np.all(_power_load(1).valley < _power_load(2).valley)


def test_scaling_of_time_and_of_voltage() -> None:
    """Twice the frequency with half the capacitance is the same waveform; all voltages scale with the crest for a resistor."""
    slow = rectifier.with_power_load(325.0, 50.0, 20e-6, POWER)
    fast = rectifier.with_power_load(325.0, 100.0, 10e-6, POWER)
    assert slow.valley == pytest.approx(fast.valley) and slow.rectifier_rms == pytest.approx(fast.rectifier_rms)
    one, ten = (rectifier.with_resistive_load(v, 50.0, 100e-6, 500.0) for v in (10.0, 100.0))
    assert ten.ripple == pytest.approx(10.0 * one.ripple) and ten.rectifier_peak == pytest.approx(10.0 * one.rectifier_peak)


def test_capacitance_for_valley_goes_back_to_the_capacitance() -> None:
    r = _power_load()
    held = r.valley > 0.0
    back = rectifier.capacitance_for_valley(PEAK + 0.0 * CAPACITANCE, 50.0, POWER, r.valley)
    np.testing.assert_allclose(back[held], np.broadcast_to(CAPACITANCE, held.shape)[held], rtol=1e-6)


def test_source_resistance_lowers_peak_and_current_and_vanishes_in_the_limit() -> None:
    ideal = rectifier.with_power_load(325.0, 50.0, 22e-6, POWER)
    ohms = np.array([0.3, 3.0, 10.0, 30.0])
    r = rectifier.with_source_resistance(325.0, 50.0, 22e-6, ohms, lambda v: POWER / v)
    for field in ("peak", "average", "rectifier_peak", "rectifier_rms"):
        assert np.all(np.diff(getattr(r, field)) < 0.0), field
    assert np.all(np.diff(r.conduction_time) > 0.0)
    assert r.valley[0] == pytest.approx(ideal.valley, rel=1e-3)
    assert r.rectifier_rms[0] == pytest.approx(ideal.rectifier_rms, rel=0.01)


def test_source_resistance_draws_the_power_and_its_own_heat() -> None:
    """Energy balance of the stepped solution: what the capacitor gets is what the load takes, on average."""
    seen: list[np.ndarray] = []

    def load(v: np.ndarray) -> np.ndarray:
        seen[:] = [v]
        return v / 1000.0

    r = rectifier.with_source_resistance(325.0, 50.0, 47e-6, 10.0, load)
    assert r.rectifier_average == pytest.approx(float(np.mean(seen[0])) / 1000.0, rel=1e-4)


def test_shortcuts_agree_with_the_solution_when_the_ripple_is_small() -> None:
    exact = rectifier.with_resistive_load(100.0, 60.0, 20e-3, 100.0)
    assert est.ripple(1.0, 20e-3, 60.0) == pytest.approx(exact.ripple, rel=0.06)
    assert est.diode_peak_current(1.0, 100.0, exact.ripple) == pytest.approx(exact.rectifier_peak, rel=0.06)
    assert est.conduction_angle(exact.ripple, 100.0) == pytest.approx(exact.off_angle - exact.on_angle, rel=0.06)
    assert est.average_voltage(100.0, exact.ripple) == pytest.approx(exact.average, rel=1e-3)


def test_shortcuts_go_back_to_where_they_came_from() -> None:
    swing = est.ripple(0.5, 470e-6, 50.0, 1)
    assert est.capacitance_for_ripple(0.5, swing, 50.0, 1) == pytest.approx(470e-6)
    assert est.current_for_ripple(swing, 470e-6, 50.0, 1) == pytest.approx(0.5)
    assert est.ripple_over_time(0.5, 1.0 / 50.0, 470e-6) == pytest.approx(swing)
    assert est.capacitance_over_time(0.5, 1.0 / 50.0, swing) == pytest.approx(470e-6)


def test_valley_after_conduction_never_goes_below_zero() -> None:
    assert est.valley_after_conduction(100.0, 50.0, 1e-6, 100.0) == 0.0
