"""The rectifier and flyback equations against whole adapters in a circuit simulator.

The simulated circuits have real diodes, series resistance, leakage and switching ripple on the bulk capacitor, none of which
the closed equations know. Bounds by that: bulk voltages 0.5 %, mean and rms mains currents 3 %; the crest of the mains current
10 %, because the simulated bulk capacitor also feeds the switching current; currents of the transformer 10 % (the house
target), because the primary loses time to the turn-off and the leakage.
"""

import math
import tomllib
from collections.abc import Mapping
from typing import Any

import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import DATA
from triage.physics import flyback, rectifier

CASES = tomllib.loads((DATA / "simulated_converters.toml").read_text("utf-8"))
VOLTAGE, CURRENT, CREST, TRANSFORMER = 0.005, 0.03, 0.10, 0.10


def _name(case: Mapping[str, Any]) -> str:
    return f"{case['circuit']} {case['condition']}"


@pytest.mark.parametrize("case", CASES["rectifier"], ids=_name)
def test_rectifier(outside_check: OutsideChecks, case: Mapping[str, Any]) -> None:
    source = f"ngspice 39, reference circuit {case['circuit']}"
    r = rectifier.with_source_resistance(math.sqrt(2.0) * case["mains_V"] - case["drop_V"], 50.0, case["capacitance_F"],
                                         case["source_ohm"], lambda v: case["power_W"] / v, case["pulses"])
    for got, key, bound in ((r.peak, "peak_V", VOLTAGE), (r.valley, "valley_V", VOLTAGE), (r.average, "average_V", VOLTAGE),
                            (r.rectifier_average, "average_A", CURRENT), (r.rectifier_rms, "rms_A", CURRENT),
                            (r.rectifier_peak, "peak_A", CREST)):
        outside_check("rectifier in a whole adapter", source, got, case[key], bound, what=f"{_name(case)} {key}")


@pytest.mark.parametrize("case", CASES["flyback"], ids=_name)
def test_flyback(outside_check: OutsideChecks, case: Mapping[str, Any]) -> None:
    source = f"ngspice 39, reference circuit {case['circuit']}"
    p = flyback.operating_point(case["bulk_V"], case["output_V"], case["output_A"], case["ratio"], case["inductance_H"],
                                case["frequency_Hz"], case["rectifier_drop_V"])
    for got, key in ((p.primary_peak, "primary_peak_A"), (p.primary_rms, "primary_rms_A"),
                     (p.secondary_rms, "secondary_rms_A"), (p.capacitor_rms, "capacitor_rms_A")):
        outside_check("flyback in a whole adapter", source, got, case[key], TRANSFORMER, what=f"{_name(case)} {key}")


def test_discontinuous_at_high_and_continuous_at_low_mains() -> None:
    """The mode that the simulation shows, from the same equations."""
    for case in CASES["flyback"]:
        p = flyback.operating_point(case["bulk_V"], case["output_V"], case["output_A"], case["ratio"], case["inductance_H"],
                                    case["frequency_Hz"], case["rectifier_drop_V"])
        assert (p.primary_start > 0.0) == case["condition"].startswith("low")
