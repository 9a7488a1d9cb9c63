"""Failure rates against the printed tables and examples of MIL-HDBK-217F Notice 2."""

import tomllib
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import DATA
from triage.physics import failure_factors as factor
from triage.physics import failure_rate as rate

BOOK = tomllib.loads((DATA / "handbook_failure_rate.toml").read_text("utf-8"))
SOURCE = "MIL-HDBK-217F Notice 2"
PRINTED = 0.06
"""Two printed digits, the second sometimes rounded up from a rounded factor."""
INDEPENDENT = 0.001
"""Four digits of a rate computed outside this code."""

TABLES: dict[str, Callable[[Any], Any]] = {
    "pi_T diodes except regulators, B = 3091": lambda x:
        factor.slope_temperature_factor(x, factor.TABLE["diode"]["switching"]["slope_K"]),
    "pi_T zener/regulator diodes and FETs, B = 1925": lambda x:
        factor.slope_temperature_factor(x, factor.TABLE["fet"]["slope_K"]),
    "pi_T bipolar, B = 2114": lambda x: factor.slope_temperature_factor(x, factor.TABLE["bipolar"]["slope_K"]),
    "pi_R bipolar by rated power, W": factor.bipolar_power_factor,
    "pi_S bipolar, printed per band upper edge of S": factor.bipolar_stress_factor,
    "pi_S diode, band upper edge of S": factor.diode_stress_factor,
    "pi_T optocoupler, B = 2790": lambda x: factor.slope_temperature_factor(x, factor.TABLE["optoelectronic"]["slope_K"]),
    "pi_T thyristor, B = 3082": lambda x: factor.slope_temperature_factor(x, factor.TABLE["thyristor"]["slope_K"]),
    "pi_R thyristor by rated rms forward current, A": factor.thyristor_current_factor,
    "pi_S thyristor, band upper edge of S": factor.thyristor_stress_factor,
    "pi_T capacitor column 1, Ea = 0.15 eV (film, paper, tantalum)": lambda x:
        factor.arrhenius_factor(x, factor.TABLE["capacitor"]["CQR"]["activation_eV"]),
    "pi_T capacitor column 2, Ea = 0.35 eV (aluminium electrolytic, ceramic)": lambda x:
        factor.arrhenius_factor(x, factor.TABLE["capacitor"]["CE"]["activation_eV"]),
    "pi_C by capacitance in uF, column 1 exponent 0.09": lambda x:
        factor.capacitance_factor(x * 1e-6, factor.TABLE["capacitor"]["CK"]["capacitance_exponent"]),
    "pi_C by capacitance in uF, column 2 exponent 0.23": lambda x:
        factor.capacitance_factor(x * 1e-6, factor.TABLE["capacitor"]["CE"]["capacitance_exponent"]),
    "pi_V column 1, (S/0.6)^5 + 1 (aluminium electrolytic, film)": factor.capacitor_voltage_factor,
    "pi_V column 2, (S/0.6)^10 + 1 (mica, glass)": lambda x: factor.capacitor_voltage_factor(x, 0.6, 10.0),
    "pi_V column 3, (S/0.6)^3 + 1 (ceramic)": lambda x:
        factor.capacitor_voltage_factor(x, 0.6, factor.TABLE["capacitor"]["CK"]["voltage_exponent"]),
    "pi_V column 4, (S/0.6)^17 + 1 (tantalum)": lambda x:
        factor.capacitor_voltage_factor(x, 0.6, factor.TABLE["capacitor"]["CSR"]["voltage_exponent"]),
    "pi_V column 5, (S/0.5)^3 + 1 (variable)": lambda x: factor.capacitor_voltage_factor(x, 0.5, 3.0),
    "pi_S resistor column 1, 0.71 exp(1.1 S)": lambda x: factor.resistor_stress_factor(x, "RL"),
    "pi_S resistor column 2, 0.54 exp(2.04 S)": lambda x: factor.resistor_stress_factor(x, "RW"),
    "pi_T resistor column 1, Ea = 0.2 eV": lambda x:
        factor.arrhenius_factor(x, factor.TABLE["resistor"]["RC"]["activation_eV"]),
    "pi_T resistor column 2, Ea = 0.08 eV (film, wirewound)": lambda x:
        factor.arrhenius_factor(x, factor.TABLE["resistor"]["RL"]["activation_eV"]),
    "pi_P resistor by rated power in W, exponent 0.39": factor.resistor_power_factor,
    "pi_T inductive by hot spot, Ea = 0.11 eV": lambda x:
        factor.arrhenius_factor(x, factor.TABLE["inductive"]["activation_eV"]),
}


@pytest.mark.parametrize("table", BOOK["check_table"], ids=lambda t: t["table"].split(",")[0])
def test_printed_factor_table(outside_check: OutsideChecks, table: Mapping[str, Any]) -> None:
    got = TABLES[table["table"]](np.array(table["x"]))
    outside_check("failure rate factors", SOURCE, got, table["printed"], PRINTED, what=table["table"])


RATES: dict[str, Callable[[], Any]] = {
    "general purpose analog diode": lambda: rate.diode_rate("general_purpose_analog", 0.7, 50.0, 1.0),
    "transient suppressor / varistor": lambda: rate.diode_rate("transient_suppressor_or_varistor", 0.7, 50.0, 1.0),
    "NPN/PNP transistor below 200 MHz, switching, 0.5 W, S = 0.5": lambda: rate.bipolar_rate(0.5, 0.5, 50.0, quality=1.0),
    "ceramic capacitor CK, 2 uF, S = 0.4": lambda: rate.capacitor_rate("CK", 2e-6, 0.4, 30.0, 1.0),
    "chip ceramic capacitor CDR, 2 uF, S = 0.4": lambda: rate.capacitor_rate("CDR", 2e-6, 0.4, 30.0, 1.0),
    "aluminium electrolytic, 6000 uF, S = 0.4 (GF environment)": lambda: rate.capacitor_rate("CE", 6e-3, 0.4, 40.0, 1.0, "GF"),
    "ceramic chip capacitor CDR, 2 uF, S = 0.4 (GF environment)": lambda:
        rate.capacitor_rate("CDR", 2e-6, 0.4, 40.0, 1.0, "GF"),
    "resistor, composition RCR, 0.5 W, S = 0.5": lambda: rate.resistor_rate("RC", 0.5, 0.5, 30.0, 1.0),
    "audio transformer": lambda: rate.transformer_rate("audio_15Hz_to_20kHz", 30.0, 1.0),
    "fixed inductor": lambda: rate.inductor_rate("fixed", 30.0, 1.0),
    "fuse": rate.fuse_rate,
}


@pytest.mark.parametrize("row", BOOK["generic_rate"], ids=lambda r: r["part"])
def test_generic_rate_of_appendix_a(outside_check: OutsideChecks, row: Mapping[str, Any]) -> None:
    outside_check("failure rates", SOURCE, RATES[row["part"]](), row["printed"], PRINTED, what=row["part"])


def test_printed_example_of_a_gate_array(outside_check: OutsideChecks) -> None:
    """Section 5.13: all factors are printed with two digits; the rate follows from our unrounded factors."""
    example = next(e for e in BOOK["worked_example"] if "5.13" in e["name"])
    given, printed = example["inputs"], example["printed"]
    heat = factor.microcircuit_temperature_factor(given["Tj"], "mos_digital")
    package = factor.microcircuit_package_factor(given["pins"], "glass_seal_dip")
    surroundings = factor.environment_factor("microcircuit", given["environment"])
    outside_check("failure rate factors", SOURCE, heat, printed["pi_T"], PRINTED)
    outside_check("failure rate factors", SOURCE, package, printed["C2"], PRINTED)
    outside_check("failure rate factors", SOURCE, surroundings, printed["pi_E"], 1e-9)
    total = (given["C1"] * heat + package * surroundings) * given["pi_Q"] * given["pi_L"]
    outside_check("failure rates", SOURCE, total, printed["lambda_p"], PRINTED)


@pytest.mark.parametrize("part_class", sorted(BOOK["environment"]))
def test_environment_factors(outside_check: OutsideChecks, part_class: str) -> None:
    got = [factor.environment_factor(part_class, code) for code in BOOK["codes"]]
    outside_check("environment table", SOURCE, got, BOOK["environment"][part_class], 1e-9, what=part_class)


def _rate_of(i: Mapping[str, Any]) -> Any:
    """The rate of a worked number, by the function of its class."""
    stress, quality, environment = i.get("S"), i["quality"], i["environment"]
    match i["class"]:
        case "capacitor":
            stress = factor.capacitor_stress(i["V_dc"], 0.0, i["V_rated"])
            return rate.capacitor_rate(i["style"], i["C_uF"] * 1e-6, stress, i["T"], quality, environment)
        case "diode":
            return rate.diode_rate(i["type"], stress or 0.0, i["Tj"], quality, environment)
        case "bipolar":
            return rate.bipolar_rate(i["P_rated"], stress, i["Tj"], i["application"], quality, environment)
        case "fet":
            return rate.fet_rate(i["P_rated"], i["Tj"], i["type"], quality=quality, environment=environment)
        case "opto":
            return rate.optoelectronic_rate(i["type"], i["Tj"], quality, environment)
        case "resistor":
            return rate.resistor_rate(i["style"], i["P_rated"], stress, i["T"], quality, environment)
        case "transformer":
            return rate.transformer_rate(i["type"], i["T_hs"], quality, environment)
        case _:
            return rate.microcircuit_rate(300.0, i["pins"], i["Tj"], quality=quality, environment=environment)


@pytest.mark.parametrize("row", BOOK["worked_number"], ids=lambda r: r["name"])
def test_rate_of_an_adapter_part(outside_check: OutsideChecks, row: Mapping[str, Any]) -> None:
    outside_check("failure rates", "computed by an independent method", _rate_of(row["inputs"]), row["lambda_p"],
                  INDEPENDENT, what=row["name"])


BY_KIND = [
    ("electrolytic", "bulk capacitor", {"stress": 325 / 400, "capacitance": 10e-6, "temperature": 60.0}, "bulk electrolytic"),
    ("electrolytic", "output capacitor", {"stress": 0.5, "capacitance": 470e-6, "temperature": 75.0}, "output electrolytic"),
    ("capacitor", "clamp capacitor", {"stress": 0.325, "capacitance": 1e-9, "temperature": 70.0}, "ceramic disc"),
    ("diode", "mains rectifier", {"stress": 0.325, "temperature": 80.0}, "mains rectifier"),
    ("diode", "output rectifier", {"stress": 0.75, "temperature": 110.0}, "output Schottky"),
    ("zener", "regulation zener", {"temperature": 60.0}, "zener"),
    ("bipolar_transistor", "main switch", {"stress": 0.875, "power_rating": 20.0, "temperature": 90.0}, "switch transistor"),
    ("mosfet", "power switch", {"power_rating": 40.0, "temperature": 90.0}, "power MOSFET"),
    ("optocoupler", "optocoupler", {"temperature": 60.0}, "optocoupler"),
    ("resistor", "startup resistor", {"temperature": 70.0}, "film resistor"),
    ("transformer", "flyback transformer", {"temperature": 90.0}, "transformer"),
    ("pwm_controller", "controller", {"temperature": 70.0}, "PWM controller"),
]


@pytest.mark.parametrize("kind, role, given, name", BY_KIND, ids=lambda value: value if isinstance(value, str) else "")
def test_rate_by_kind_and_role_takes_the_right_model(outside_check: OutsideChecks, kind: str, role: str,
                                                     given: dict[str, float], name: str) -> None:
    expected = next(row["lambda_p"] for row in BOOK["worked_number"] if row["name"].startswith(name))
    got = rate.part_rate(kind, role, **given)
    outside_check("failure rates", "computed by an independent method", got, expected, INDEPENDENT, what=name)
