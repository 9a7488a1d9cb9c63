"""Measurement uncertainty against the worked example of the GUM and printed meter limits."""

import math

import pytest

from triage.safety.instruments import load
from triage.safety.uncertainty import Contribution, combined, coverage_factor, effective_freedom, rectangular

H1 = (
    # JCGM 100:2008, H.1, table H.1: standard uncertainty, sensitivity, degrees of freedom, in nanometres and
    # kelvins.
    Contribution(25.0, 1.0, 18.0),  # the standard end gauge
    Contribution(9.7, 1.0, 25.6),  # the measured difference
    Contribution(0.58e-6, 50000623.0 * 0.1, 50.0),  # difference of expansion coefficients
    Contribution(0.029, 50000623.0 * 11.5e-6, 2.0),  # difference of temperatures
)


def test_end_gauge(outside_check) -> None:
    """JCGM 100:2008, H.1.6: u_c = 32 nm, nu_eff = 16, k = 2.92, U99 = 93 nm (verified in public data sets of
    H.1)."""
    source = "JCGM 100:2008, H.1"
    u, freedom = combined(H1), effective_freedom(H1)
    outside_check("combined uncertainty [nm]", source, u, 32.0, 0.5, absolute=True)
    outside_check("degrees of freedom", source, math.floor(freedom), 16, 0.0, absolute=True)
    outside_check("coverage factor", source, coverage_factor(0.99, freedom), 2.92, 0.005, absolute=True)
    outside_check("expanded uncertainty [nm]", source, coverage_factor(0.99, freedom) * u, 93.0, 0.6, absolute=True)


def test_end_gauge_contributions(outside_check) -> None:
    """JCGM 100:2008, table H.1, last column: 25, 9.7, 2.9 and 16.6 nm (16.7 from the rounded 0.029 K)."""
    for part, printed in zip(H1, (25.0, 9.7, 2.9, 16.6), strict=True):
        outside_check("contribution [nm]", "JCGM 100:2008, table H.1", part.share, printed, 0.1, absolute=True)


@pytest.mark.parametrize(
    ("level", "freedom", "printed"),
    [
        (0.95, 1, 12.71),
        (0.95, 2, 4.30),
        (0.95, 3, 3.18),
        (0.95, 5, 2.57),
        (0.95, 10, 2.23),
        (0.95, 20, 2.09),
        (0.95, 50, 2.01),
        (0.99, 1, 63.66),
        (0.99, 5, 4.03),
        (0.99, 16, 2.92),
        (0.99, 50, 2.68),
        (0.95, math.inf, 1.960),
        (0.9545, math.inf, 2.000),
        (0.9973, math.inf, 3.000),
    ],
)
def test_students_t(level, freedom, printed, outside_check) -> None:
    """JCGM 100:2008, table G.2 (from memory)."""
    outside_check("t factor", "JCGM 100:2008, table G.2", coverage_factor(level, freedom), printed, 0.006, absolute=True)


def test_students_t_against_a_library(outside_check) -> None:
    from scipy.stats import t

    for freedom in (1, 2, 3, 7, 8, 24, 51, 120):
        for level in (0.68, 0.95, 0.999):
            outside_check(
                "t factor",
                "scipy.stats.t",
                coverage_factor(level, freedom),
                float(t.ppf(0.5 + level / 2.0, freedom)),
                1e-6,
                absolute=True,
            )


@pytest.mark.parametrize(("value", "limit"), [(5.08, 0.0454), (325.0, 4.6)])
def test_limit_of_error_of_the_shipped_meter(value, limit, outside_check) -> None:
    """Percentage of reading plus counts: 0.5 % + 2 on 20 V, 0.8 % + 2 on 1000 V."""
    meter = load().best("volts_dc", value)
    assert meter is not None
    outside_check(
        "limit of error [V]",
        "a % of reading + n counts",
        meter.limit_of_error(value),
        limit,
        1e-9,
        absolute=True,
    )


def test_power_in_a_load(outside_check) -> None:
    """5.08 V (0.5 % + 2) across 10.2 ohm (0.8 % + 2): u_V 0.0262, u_R 0.1626, P 2.5300 W, u_P 0.0480 W."""
    volts, ohms = 5.08, 10.2
    u_volts, u_ohms = rectangular(0.0454), rectangular(0.2816)
    power = volts**2 / ohms
    u = combined([Contribution(u_volts, 2 * volts / ohms), Contribution(u_ohms, volts**2 / ohms**2)])
    source = "u = limit/sqrt(3), P = V^2/R"
    outside_check("u of the voltage [V]", source, u_volts, 0.0262, 5e-5, absolute=True)
    outside_check("u of the resistance [ohm]", source, u_ohms, 0.1626, 5e-5, absolute=True)
    outside_check("power [W]", source, power, 2.5300, 5e-5, absolute=True)
    outside_check("u of the power [W]", source, u, 0.0480, 5e-5, absolute=True)
