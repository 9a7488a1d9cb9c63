"""Life, ripple multipliers and loss tangents of electrolytic capacitors against vendors' figures."""

import tomllib
from collections.abc import Mapping
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import DATA
from triage.physics import electrolytic_life as life

BOOK = tomllib.loads((DATA / "handbook_life.toml").read_text("utf-8"))
ALBERTSEN = "A. Albertsen, Electrolytic Capacitor Lifetime Estimation (Jianghai), numbers computed independently"
FOUR_DIGITS = 0.0002
"""Factors are given with four or five digits."""


@pytest.mark.parametrize("row", BOOK["worked_number"], ids=lambda r: r["name"])
def test_life_and_its_factors(outside_check: OutsideChecks, row: Mapping[str, Any]) -> None:
    i, factors = row["inputs"], row["factors"]
    ripple = (i["I_ratio"], 1.0, i["dT0"], i["T0"])
    outside_check("electrolytic life", ALBERTSEN, life.temperature_factor(i["Ta"], i["T0"]), factors["K_T"], FOUR_DIGITS)
    outside_check("electrolytic life", ALBERTSEN, life.ripple_factor(*ripple), factors["K_R"], FOUR_DIGITS)
    volts = (i["U_ratio"], 1.0) if "U_ratio" in i else (None, None)
    got = life.life(i["L0_h"], i["Ta"], i["I_ratio"], 1.0, *volts, rated_temperature=i["T0"], rated_rise=i["dT0"])
    outside_check("electrolytic life", ALBERTSEN, got, row["L_h"], FOUR_DIGITS, what=row["name"])
    if "U_ratio" in i:
        outside_check("electrolytic life", ALBERTSEN, life.voltage_factor(*volts), factors["K_V"], FOUR_DIGITS)
        bare = life.life(i["L0_h"], i["Ta"], i["I_ratio"], 1.0, rated_temperature=i["T0"], rated_rise=i["dT0"])
        outside_check("electrolytic life", ALBERTSEN, bare, row["L_h_without_voltage_term"], FOUR_DIGITS)


SERIES = {
    "high voltage 160-450 V, rated at 120 Hz": "high_voltage",
    "low impedance 6.3-63 V, C 100-330 uF, rated at 100 kHz": "low_impedance_small",
    "low impedance 6.3-63 V, C 390-1000 uF, rated at 100 kHz": "low_impedance_large",
    "general purpose radial 6.3-10 V, rated at 120 Hz": "general_10V",
    "general purpose radial 16-25 V, rated at 120 Hz": "general_25V",
    "general purpose radial 35-50 V, rated at 120 Hz": "general_50V",
    "general purpose radial 63-100 V, rated at 120 Hz": "general_100V",
}


@pytest.mark.parametrize("row", [r for r in BOOK["ripple"] if r["class"] in SERIES], ids=lambda r: SERIES[r["class"]])
def test_ripple_multiplier(outside_check: OutsideChecks, row: Mapping[str, Any]) -> None:
    got = life.ripple_multiplier(SERIES[row["class"]], np.array(row["f_Hz"]))
    source = "LX series data sheet" if row["confidence"] == "verified" else "typical series table"
    outside_check("ripple multiplier table", source, got, row["k"], 1e-9)


def test_several_frequencies_together(outside_check: OutsideChecks) -> None:
    i = BOOK["combination"]
    got = life.equivalent_ripple(np.array([i["I_100Hz"], i["I_65kHz"]]), np.array([i["k_100Hz"], i["k_65kHz"]]))
    outside_check("ripple multipliers", "computed by an independent method", got, i["I_eq"], 0.0006)


def test_loss_tangent_of_new_parts(outside_check: OutsideChecks) -> None:
    table = BOOK["tan_delta"]
    got = life.highest_loss_tangent(np.array(table["rated_V"]), 100e-6)
    outside_check("loss tangent", "RGA series data sheet", got, table["general_purpose"], 1e-9)
    esr = life.esr_from_loss_tangent(life.highest_loss_tangent(400.0, 10e-6), 10e-6)
    outside_check("loss tangent", "RGA series data sheet", esr, 33.2, 0.002)


def test_esr_by_definition(outside_check: OutsideChecks) -> None:
    i = BOOK["esr"]
    got = life.esr_from_loss_tangent(i["tan_delta"], i["C_uF"] * 1e-6, i["f_Hz"])
    outside_check("loss tangent", "computed by an independent method", got, i["ESR_ohm"], FOUR_DIGITS)


@pytest.mark.parametrize("loss, times", [(0.29, 2.0), (0.42, 3.0)])
def test_drying_law(outside_check: OutsideChecks, loss: float, times: float) -> None:
    """Bound 2 %: the volume losses of 29 and 42 % are printed with two digits."""
    got = life.aged_esr(1.0, loss, 1.0)
    outside_check("electrolytic life", "A. Gasperi, Life prediction modeling of bus capacitors", got, times, 0.02)


@pytest.mark.parametrize("ratio, base", [(0.99, 2.0), (1.01, 4.0), (1.04, 4.0), (1.3, 4.0)])
def test_overload_halves_the_life_twice_as_fast_from_the_rated_ripple_on(ratio: float, base: float,
                                                                         outside_check: OutsideChecks) -> None:
    """Safety factor K: 2 up to the rated ripple current, 4 beyond it for 105 degC parts; the printed formula, by hand."""
    expected = base ** ((1.0 - ratio**2) * 5.0 / 10.0)
    outside_check("electrolytic life", ALBERTSEN, life.ripple_factor(ratio, 1.0, 5.0, 105.0), expected, 1e-9)
