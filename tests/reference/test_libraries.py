"""General numerical libraries as the outside: distributions, integrals, root finding.

scipy (P. Virtanen et al., SciPy 1.0: fundamental algorithms for scientific computing in Python, Nature Methods 17 (2020) 261).
"""

import numpy as np
import pytest
from scipy import integrate
from scipy import optimize as scipy_optimize
from scipy import stats as scipy_stats

from triage.diagnosis.axis import CELL, WIDTHS, from_axis, smear_table, to_axis
from triage.diagnosis.settings import instruments
from triage.physics.netlist import THERMAL_VOLTAGE, Netlist, compile_netlist
from triage.physics.network import HAND_METER, read_network
from triage.safety.uncertainty import conformity, coverage_factor

NORMAL, STUDENT, ROOT = "scipy.stats.norm", "scipy.stats.t", "scipy.optimize"


@pytest.mark.parametrize("limits", [(4.75, 5.25), (None, 5.1), (4.9, None), (4.99, 5.0)])
def test_chance_that_a_limit_is_kept(limits: tuple[float | None, float | None], outside_check) -> None:
    """Probability of conformity of a normal error; bound: double precision of two library functions."""
    low, high = limits
    for value in np.linspace(4.6, 5.4, 9):
        spread = scipy_stats.norm(value, 0.07)
        exact = (spread.cdf(high) if high else 1.0) - (spread.cdf(low) if low else 0.0)
        outside_check("probability of conformity", NORMAL, conformity(float(value), 0.07, low, high), exact, 1e-12, absolute=True)


def test_coverage_factor_of_a_normal_error(outside_check) -> None:
    for level in (0.5, 0.6827, 0.9, 0.95, 0.99, 0.9973):
        outside_check("coverage factor, normal", NORMAL, coverage_factor(level), scipy_stats.norm.ppf(0.5 + level / 2), 1e-9)


def test_coverage_factor_follows_student(outside_check) -> None:
    """Odd and even degrees of freedom; bound: the bisection ends after 80 halvings, far below it."""
    for freedom in (1, 2, 3, 7, 12, 29, 50, 113):
        for level in (0.68, 0.95, 0.999):
            exact = scipy_stats.t.ppf(0.5 + level / 2, freedom)
            outside_check("coverage factor, Student", STUDENT, coverage_factor(level, freedom), exact, 1e-8)


def test_smearing_of_readings_is_normal(outside_check) -> None:
    """Every width; the two end columns are cut to 0 and 1 on purpose and left out."""
    table = smear_table()
    reach = (table.shape[1] - 1) // 2
    steps = (np.arange(-reach, reach + 1) + 0.5) * CELL
    for row, width in zip(table, WIDTHS, strict=True):
        worst = float(np.abs(row[1:-1] - scipy_stats.norm.cdf(steps[1:-1], scale=width)).max())
        outside_check("smearing of a reading", NORMAL, worst, 0.0, 1e-12, absolute=True)


@pytest.mark.parametrize("function", sorted(instruments()))
def test_scale_of_a_reading_is_the_integral_of_its_error(function: str, outside_check) -> None:
    """The position on the axis counts standard errors: the integral of dx / sd(x) (scipy.integrate.quad), below the knee."""
    meter = instruments()[function]
    top = min(meter.knee, meter.over, 1e6)
    for value in top * np.array([0.003, 0.1, 0.7]):
        counted, _ = integrate.quad(lambda x: 1.0 / np.hypot(meter.absolute, meter.relative * x), 0.0, value, limit=400,
                                    points=[min(value, meter.absolute / meter.relative)])
        outside_check("scale of a reading", "scipy.integrate.quad", to_axis(value, meter), counted, 1e-6)


@pytest.mark.parametrize("function", sorted(instruments()))
def test_reading_at_a_place_on_the_scale(function: str, outside_check) -> None:
    """The way back, found by Brent's method; bound: the tolerance it is asked for."""
    meter = instruments()[function]
    most = min(meter.over, 1e6)
    top = float(to_axis(most, meter))
    for share in (0.05, 0.4, 0.9):
        found = scipy_optimize.brentq(lambda x, share=share: float(to_axis(x, meter)) - share * top, 0.0, 1.1 * most,
                                      xtol=1e-22, rtol=1e-13)
        outside_check("reading at a place on the scale", ROOT, from_axis(share * top, meter), found, 1e-7)


SATURATION, EMISSION = 1e-9, 1.8


def random_network(seed: int) -> tuple[Netlist, list[tuple[str, str, float]], list[tuple[str, str]]]:
    """Six nodes, a ring of resistors with chords, three junctions: (netlist, resistors, junctions)."""
    rng = np.random.default_rng(seed)
    names = [f"n{k}" for k in range(6)]
    pairs = [(names[k], names[(k + 1) % 6]) for k in range(6)] + [("n0", "n3"), ("n1", "n4")]
    resistors = [(a, b, float(10.0 ** rng.uniform(1.5, 5.5))) for a, b in pairs]
    junctions = [tuple(str(name) for name in rng.choice(names, 2, replace=False)) for _ in range(3)]
    net = Netlist("n0")
    for number, (a, b, ohm) in enumerate(resistors):
        net.resistor(f"R{number}", a, b, ohm)
    for number, (a, k) in enumerate(junctions):
        net.diode(f"D{number}", a, k, {"saturation_current": SATURATION, "emission": EMISSION})
    return net, resistors, [(a, k) for a, k in junctions]


def exact_voltage(resistors: list[tuple[str, str, float]], junctions: list[tuple[str, str]], current: float) -> float:
    """Voltage of n4 against n1 with a current [A] into n4 and out of n1, by scipy's root finder on Kirchhoff's current law."""

    def surplus(free: np.ndarray) -> np.ndarray:
        volts = dict(zip((f"n{k}" for k in range(6)), np.append(0.0, free), strict=True))
        out = dict.fromkeys(volts, 0.0)
        flows = [(a, b, (volts[a] - volts[b]) / ohm) for a, b, ohm in resistors]
        flows += [(a, k, SATURATION * np.expm1(np.clip((volts[a] - volts[k]) / (EMISSION * THERMAL_VOLTAGE), -50, 80)))
                  for a, k in junctions]
        flows += [("n1", "n4", current)]
        for a, b, ampere in flows:
            out[a] += ampere
            out[b] -= ampere
        return np.array([out[f"n{k}"] for k in range(1, 6)]) / current

    options = {"xtol": 1e-14, "ftol": 1e-14, "maxiter": 20000}
    best = min((scipy_optimize.root(surplus, np.full(5, start), method="lm", options=options)
                for start in (0.0, 0.1, 0.3, -0.2)), key=lambda one: float(np.abs(surplus(one.x)).max()))
    assert np.abs(surplus(best.x)).max() < 1e-8
    return float(best.x[3] - best.x[0])


@pytest.mark.parametrize("seed", range(12))
def test_diode_test_on_random_networks(seed: int, outside_check) -> None:
    """1 mA of the diode function through resistors and junctions; bound: what the meter's own input and the milliohm in a
    junction's lead change."""
    net, resistors, junctions = random_network(seed)
    exact = exact_voltage(resistors, junctions, HAND_METER.diode_current)
    shown = read_network(compile_netlist(net, [("n4", "n1")]), [("diode", "n4", "n1")])[0]
    if exact > HAND_METER.diode_limit - 0.3:
        assert shown > HAND_METER.diode_limit - 0.3
        return
    outside_check("diode test on a network", ROOT, shown, exact, 1e-4)
