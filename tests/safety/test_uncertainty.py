"""Combination, coverage and guarded verdicts."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from triage.safety.uncertainty import (
    VERDICTS,
    Contribution,
    combined,
    conformity,
    coverage_factor,
    effective_freedom,
    expanded,
    rectangular,
    verdict,
)


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (5.0, "pass"),
        (4.76, "too close to call"),
        (4.74, "too close to call"),
        (4.60, "fail"),
        (5.40, "fail"),
        (5.26, "too close to call"),
        (float("nan"), "too close to call"),
    ],
)
def test_two_sided_verdict(value, expected) -> None:
    assert verdict(value, 0.03, 4.75, 5.25) == expected


def test_over_range_passes_a_lower_limit_and_fails_an_upper_one() -> None:
    assert verdict(math.inf, math.inf, low=2e6) == "pass"
    assert verdict(math.inf, math.inf, high=1.0) == "fail"


def test_exact_reading_on_its_limit_passes() -> None:
    assert verdict(0.25e-3, 0.0, high=0.25e-3) == "pass"


@given(value=st.floats(-10, 10), u=st.floats(1e-6, 3), low=st.floats(-5, 0), high=st.floats(0, 5))
def test_a_verdict_agrees_with_the_probability(value, u, low, high) -> None:
    """Guard band of two standard uncertainties: a pass means at least 95 % inside, a fail at most 2.3 %."""
    said = verdict(value, u, low, high)
    assert said in VERDICTS
    chance = conformity(value, u, low, high)
    if said == "pass":
        assert chance >= 0.9544
    if said == "fail":
        assert chance <= 0.0228


def test_all_infinite_freedom_gives_the_normal_factor() -> None:
    parts = [Contribution(1.0), Contribution(2.0, 3.0)]
    assert math.isinf(effective_freedom(parts))
    assert combined(parts) == pytest.approx(math.hypot(1.0, 6.0))
    assert expanded(parts) == pytest.approx(1.96 * math.hypot(1.0, 6.0), rel=1e-3)


def test_factor_falls_with_freedom() -> None:
    factors = [coverage_factor(0.95, nu) for nu in range(1, 60)]
    assert factors == sorted(factors, reverse=True)


def test_rectangular_is_half_width_over_root_three() -> None:
    assert rectangular(3.0) == pytest.approx(math.sqrt(3.0))
