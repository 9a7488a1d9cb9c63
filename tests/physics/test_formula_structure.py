"""How the factors of a formula meet: published rules at their edges, and waveforms summed here by other means."""

from collections.abc import Callable

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from triage.physics import (
    capacitor_dropper,
    derating,
    electrolytic_life,
    failure_factors,
    failure_rate,
    fuse_inrush,
    rectifier,
    thermal,
    y_capacitor,
)

RATES: dict[str, Callable[[float, str], object]] = {
    "capacitor": lambda q, e: failure_rate.capacitor_rate("CE", 1e-5, 0.5, 60.0, quality=q, environment=e),
    "diode": lambda q, e: failure_rate.diode_rate("switching", 0.5, 60.0, quality=q, environment=e),
    "bipolar": lambda q, e: failure_rate.bipolar_rate(1.0, 0.5, 60.0, quality=q, environment=e),
    "field effect": lambda q, e: failure_rate.fet_rate(10.0, 60.0, quality=q, environment=e),
    "optoelectronic": lambda q, e: failure_rate.optoelectronic_rate("led", 60.0, quality=q, environment=e),
    "thyristor": lambda q, e: failure_rate.thyristor_rate(1.0, 0.5, 60.0, quality=q, environment=e),
    "resistor": lambda q, e: failure_rate.resistor_rate("RL", 0.25, 0.5, 60.0, quality=q, environment=e),
    "transformer": lambda q, e: failure_rate.transformer_rate("low_power_pulse", 60.0, quality=q, environment=e),
    "inductor": lambda q, e: failure_rate.inductor_rate("fixed", 60.0, quality=q, environment=e),
}
CLASS_OF = {"capacitor": "capacitor", "resistor": "resistor", "optoelectronic": "optoelectronic", "transformer": "inductive",
            "inductor": "inductive"}


@pytest.mark.parametrize("part", RATES)
def test_quality_and_environment_multiply_every_rate(part: str) -> None:
    """MIL-HDBK-217F Notice 2: lambda_p is a product with pi_Q and pi_E in every section."""
    rate = RATES[part]
    base = np.asarray(rate(1.0, "GB"), float)
    assert np.asarray(rate(2.5, "GB"), float) == pytest.approx(2.5 * base)
    row = CLASS_OF.get(part, "semiconductor")
    harsher = failure_factors.environment_factor(row, "GM") / failure_factors.environment_factor(row, "GB")
    assert harsher > 1.0 and np.asarray(rate(1.0, "GM"), float) == pytest.approx(harsher * base)


@pytest.mark.parametrize(("part", "hot", "cool"), [
    ("diode", failure_rate.diode_rate("switching", 0.5, 120.0), failure_rate.diode_rate("switching", 0.5, 60.0)),
    ("optoelectronic", failure_rate.optoelectronic_rate("led", 120.0), failure_rate.optoelectronic_rate("led", 60.0)),
    ("thyristor", failure_rate.thyristor_rate(1.0, 0.5, 120.0), failure_rate.thyristor_rate(1.0, 0.5, 60.0)),
    ("thyristor, more current", failure_rate.thyristor_rate(30.0, 0.5, 60.0), failure_rate.thyristor_rate(1.0, 0.5, 60.0)),
    ("thyristor, more voltage", failure_rate.thyristor_rate(1.0, 0.9, 60.0), failure_rate.thyristor_rate(1.0, 0.4, 60.0)),
    ("transistor, more power", failure_rate.bipolar_rate(30.0, 0.5, 60.0), failure_rate.bipolar_rate(1.0, 0.5, 60.0)),
    ("resistor, more power", failure_rate.resistor_rate("RL", 2.0, 0.5, 60.0), failure_rate.resistor_rate("RL", 0.25, 0.5, 60.0)),
    ("chip, more pins", failure_rate.microcircuit_rate(100.0, 14.0, 60.0), failure_rate.microcircuit_rate(100.0, 3.0, 60.0)),
])
def test_what_loads_a_part_more_makes_it_fail_sooner(part: str, hot: object, cool: object) -> None:
    assert np.asarray(hot) > np.asarray(cool), part


@pytest.mark.parametrize(("amperes", "factor"), [
    (0.2, 0.25), (0.25, 0.30), (0.3, 0.30), (0.375, 0.35), (0.5, 0.40), (0.9, 0.40), (1.0, 0.45), (1.99, 0.45), (2.0, 0.50),
    (2.1, 0.50), (15.0, 0.50),
])
def test_steps_of_the_fuse_derating(amperes: float, factor: float) -> None:
    """MIL-STD-975M, appendix A, 3.9: by current rating at 25 degC; 0.005 less for each kelvin above."""
    assert float(derating.fuse_current_factor(amperes, 25.0)) == pytest.approx(factor)
    assert float(derating.fuse_current_factor(amperes, 35.0)) == pytest.approx(factor - 0.05)
    assert float(derating.fuse_current_factor(amperes, 0.0)) == pytest.approx(factor)


@pytest.mark.parametrize(("microfarads", "more"), [(470.0, 0.0), (1000.0, 0.0), (2000.0, 0.02), (2200.0, 0.024), (4700.0, 0.074)])
def test_a_large_electrolytic_may_lose_more(microfarads: float, more: float) -> None:
    """Footnote of the RGA series data sheet: 0.02 more for each 1000 uF above 1000 uF."""
    least = float(electrolytic_life.highest_loss_tangent(16.0, 100e-6))
    assert float(electrolytic_life.highest_loss_tangent(16.0, microfarads * 1e-6)) == pytest.approx(least + more)


def test_overload_counts_double_only_for_parts_of_the_high_category() -> None:
    """A. Albertsen, Electrolytic Capacitor Lifetime Estimation: Ki = 4 for overloaded 105 degC parts, else 2."""
    over = {rated: float(electrolytic_life.ripple_factor(2.0, 1.0, 5.0, rated)) for rated in (85.0, 105.0)}
    assert over[85.0] == pytest.approx(2.0 ** (-3.0 * 0.5)) and over[105.0] == pytest.approx(4.0 ** (-3.0 * 0.5))
    assert float(electrolytic_life.ripple_factor(1.0, 1.0, 5.0, 105.0)) == 1.0


@pytest.mark.parametrize("frequency", [50.0, 60.0, 1000.0, 20e3])
def test_touch_network_against_its_nodes(frequency: float) -> None:
    """IEC 60990, figure 4, as three node equations: 1500 ohm beside 0.22 uF, then 500 ohm beside 10 kohm and 22 nF."""
    s, source = 2j * np.pi * frequency, 264.0
    y, skin, body, filter_, memory = s * 2.2e-9, 1.0 / 1500.0 + s * 0.22e-6, 1.0 / 500.0, 1.0 / 10e3, s * 22e-9
    matrix = np.array([[y + skin, -skin, 0.0], [-skin, skin + body + filter_, -filter_], [0.0, -filter_, filter_ + memory]])
    entry, across, behind = np.linalg.solve(matrix, np.array([y * source, 0.0, 0.0]))
    got = y_capacitor.touch_reading(2.2e-9, source, frequency)
    assert float(got.current) == pytest.approx(abs(y * (source - entry)), rel=1e-9)
    assert float(got.unweighted) == pytest.approx(abs(across) / 500.0, rel=1e-9)
    assert float(got.weighted) == pytest.approx(abs(behind) / 500.0, rel=1e-9)


@pytest.mark.parametrize(("square_inches", "watts", "rise"), [(10.0, 1.0, 12.5), (10.0, 2.0, 25.0), (5.0, 1.0, 25.0)])
def test_transformer_rise_by_its_surface(square_inches: float, watts: float, rise: float) -> None:
    """MIL-HDBK-217F Notice 2, 11.3: 125 K for each watt on each square inch."""
    assert float(thermal.transformer_rise(watts, square_inches * 6.4516e-4)) == pytest.approx(rise)


@pytest.mark.parametrize("hertz", [50.0, 60.0])
def test_the_dropper_that_passes_a_current_passes_it(hertz: float) -> None:
    """Charge balance by hand: from crest to crest less output and one diode, once a period."""
    farads = capacitor_dropper.dropper_capacitance(0.02, 120.0, hertz, 12.0)
    charge = float(farads) * (2.0 * np.sqrt(2.0) * 120.0 - 12.7)
    assert charge * hertz == pytest.approx(0.02)
    assert float(capacitor_dropper.dropper_current(farads, 120.0, hertz, 12.0)) == pytest.approx(0.02)


@pytest.mark.parametrize(("ohms", "farads"), [(10.0, 47e-6), (100.0, 220e-6), (47.0, 1000e-6)])
def test_inrush_against_an_equation_solver(ohms: float, farads: float) -> None:
    """dv/dt = max(|e| - v, 0)/RC from the crest, by scipy; slow ones take several half-waves."""
    crest, turn = 325.0, 2.0 * np.pi * 50.0

    def moves(t: float, y: np.ndarray) -> list[float]:
        amps = max(abs(crest * np.cos(turn * t)) - y[0], 0.0) / ohms
        return [amps / farads, amps**2]

    solved = solve_ivp(moves, (0.0, 0.02), [0.0, 0.0], max_step=2e-5, rtol=1e-8, atol=1e-9)
    assert float(fuse_inrush.inrush_i2t(crest, ohms, farads, 50.0)) == pytest.approx(solved.y[1, -1], rel=0.005)


@pytest.mark.parametrize("pulses", [1, 2])
def test_currents_of_a_resistive_load_against_its_waveform(pulses: int) -> None:
    """Turn-on and turn-off angle as given, everything else summed from the currents over one charging period."""
    peak, hertz, farads, ohms = 170.0, 60.0, 100e-6, 500.0
    found = rectifier.with_resistive_load(peak, hertz, farads, ohms, pulses)
    turn, span = 2.0 * np.pi * hertz, 2.0 * np.pi / pulses
    count = 400_000
    angle = float(found.on_angle) + (np.arange(count) + 0.5) / count * span
    on = angle < float(found.off_angle)
    start = peak * np.sin(float(found.off_angle))
    held = start * np.exp(-(angle - float(found.off_angle)) / (turn * ohms * farads))
    volts = np.where(on, peak * np.sin(angle), held)
    given = np.where(on, turn * farads * peak * np.cos(angle) + volts / ohms, 0.0)
    through = given - volts / ohms
    assert volts.mean() == pytest.approx(float(found.average), rel=1e-4)
    assert given.mean() == pytest.approx(float(found.rectifier_average), rel=1e-4)
    assert np.sqrt((given**2).mean()) == pytest.approx(float(found.rectifier_rms), rel=1e-4)
    assert np.sqrt((through**2).mean()) == pytest.approx(float(found.capacitor_rms), rel=1e-4)
    assert abs(through.mean()) < 1e-4 * np.sqrt((through**2).mean()), "a capacitor keeps no charge"
    assert given.max() == pytest.approx(float(found.rectifier_peak), rel=1e-3)


def test_unlike_circuits_in_one_array_are_solved_as_well_as_alone() -> None:
    """One settles at once, one slowly: the loop must go on for the slower."""
    farads, ohms = np.array([1e-6, 1e-3]), np.array([5e3, 50.0])
    both = rectifier.with_source_resistance(325.0, 50.0, farads, 10.0, lambda v: v / ohms, 1, 500)
    for k in range(2):
        alone = rectifier.with_source_resistance(325.0, 50.0, farads[k], 10.0, lambda v, k=k: v / ohms[k], 1, 500)
        assert float(both.average[k]) == pytest.approx(float(alone.average), rel=1e-6)
        assert float(both.valley[k]) == pytest.approx(float(alone.valley), rel=1e-6)


def test_edges_of_the_handbook_factors() -> None:
    """MIL-HDBK-217F Notice 2: pi_R of a transistor (6.3), pi_S of a thyristor (6.10), pi_L of a chip (5.10)."""
    powers = failure_factors.bipolar_power_factor(np.array([0.05, 0.1, 0.11, 1.0, 10.0]))
    assert powers == pytest.approx([0.43, 0.43, 0.11**0.37, 1.0, 10.0**0.37])
    stresses = failure_factors.thyristor_stress_factor(np.array([0.1, 0.3, 0.31, 1.0]))
    assert stresses == pytest.approx([0.1, 0.1, 0.31**1.9, 1.0])
    years = failure_factors.learning_factor(np.array([0.05, 0.1, 0.5, 1.0, 1.5, 2.0, 9.0]))
    assert years == pytest.approx([2.0, 2.0, 1.768, 1.484, 1.246, 1.0, 1.0], abs=0.001)


def test_the_core_heats_by_the_square_of_ripple_over_rated_ripple() -> None:
    """Rubycon, lifetime calculation formula: half the ripple, a quarter of the rise."""
    assert float(electrolytic_life.core_rise_by_rating(0.4, 0.8, 6.0)) == pytest.approx(1.5)
    assert float(electrolytic_life.core_rise_by_rating(1.6, 0.8, 5.0)) == pytest.approx(20.0)


def test_an_electrolytic_dries_out_by_the_square_of_what_is_left() -> None:
    """A. Gasperi, Life prediction modeling of bus capacitors: half the life gone, four times the resistance; none left, open."""
    ages = electrolytic_life.aged_esr(0.2, np.array([0.0, 2500.0, 5000.0, 10_000.0, 20_000.0]), 10_000.0)
    assert ages == pytest.approx([0.2, 0.2 / 0.75**2, 0.8, np.inf, np.inf])


def test_voltage_counts_for_the_life_only_where_both_figures_are_known() -> None:
    """A. Albertsen: (V/Vr)^-n at 10 V of 25 V."""
    base = float(electrolytic_life.life(1000.0, 75.0, 0.5, 1.0))
    assert float(electrolytic_life.life(1000.0, 75.0, 0.5, 1.0, voltage=10.0)) == base
    assert float(electrolytic_life.life(1000.0, 75.0, 0.5, 1.0, rated_voltage=25.0)) == base
    gain = float(electrolytic_life.voltage_factor(10.0, 25.0))
    assert gain > 1.0 and float(electrolytic_life.life(1000.0, 75.0, 0.5, 1.0, 10.0, 25.0)) == pytest.approx(gain * base)
