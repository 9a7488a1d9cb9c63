"""Derating factors and failure-mode shares against the published rows they were taken from."""

import tomllib
from typing import Any

import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import DATA
from triage.physics.derating import derating
from triage.physics.failure_modes import mode_row, mode_shares

BOOK: dict[str, list[dict[str, Any]]] = tomllib.loads((DATA / "handbook_derating.toml").read_text("utf-8"))
MODES: dict[str, list[dict[str, Any]]] = tomllib.loads((DATA / "handbook_failure_modes.toml").read_text("utf-8"))

SETS = {
    "smps_practice": "usual practice of consumer supplies",
    "mil_std_975m": "MIL-STD-975M",
    "ecss": "ECSS-Q-ST-30-11C",
    "eee_inst_002": "EEE-INST-002",
    "rl_tr_92_11": "RL-TR-92-11",
}

FACTORS = [
    ("smps_practice", "bulk electrolytic", "voltage", "electrolytic", "bulk capacitor", "peak_voltage"),
    ("smps_practice", "bulk electrolytic", "ripple_current", "electrolytic", "bulk capacitor", "ripple_current"),
    ("smps_practice", "output electrolytic", "voltage", "electrolytic", "output capacitor", "peak_voltage"),
    ("smps_practice", "output electrolytic", "ripple_current", "electrolytic", "auxiliary rail capacitor", "ripple_current"),
    ("smps_practice", "ceramic and film capacitor", "voltage", "capacitor", "clamp capacitor", "peak_voltage"),
    ("smps_practice", "switch MOSFET", "drain_source_peak", "mosfet", "main switch", "peak_voltage"),
    ("smps_practice", "switch MOSFET", "drain_current_peak", "mosfet", "main switch", "peak_current"),
    ("smps_practice", "switch bipolar transistor", "collector_base_peak", "bipolar_transistor", "main switch", "peak_voltage"),
    ("smps_practice", "switch bipolar transistor", "collector_current_peak", "bipolar_transistor", "main switch",
     "peak_current"),
    ("smps_practice", "mains rectifier diode", "reverse_voltage", "diode", "mains rectifier", "reverse_voltage"),
    ("smps_practice", "mains rectifier diode", "forward_current", "diode", "mains rectifier", "average_current"),
    ("smps_practice", "mains rectifier diode", "surge_current", "bridge", "mains bridge", "peak_current"),
    ("smps_practice", "secondary Schottky or fast rectifier", "reverse_voltage_peak", "diode", "output rectifier",
     "reverse_voltage"),
    ("smps_practice", "secondary Schottky or fast rectifier", "average_current", "diode", "auxiliary rectifier",
     "average_current"),
    ("smps_practice", "zener, TVS", "power", "zener", "regulation zener", "power"),
    ("smps_practice", "optocoupler", "led_current", "optocoupler", "optocoupler", "average_current"),
    ("smps_practice", "optocoupler", "collector_emitter_voltage", "optocoupler", "optocoupler", "peak_voltage"),
    ("smps_practice", "resistor", "power", "resistor", "startup resistor", "power"),
    ("smps_practice", "resistor", "voltage", "resistor", "startup resistor", "peak_voltage"),
    ("smps_practice", "fuse", "current_IEC_60127", "fuse", "mains fuse", "rms_current"),
    ("smps_practice", "fuse", "i2t_inrush_of_melting", "fuse", "mains fuse", "i2t"),
    ("smps_practice", "varistor", "continuous_ac_voltage", "varistor", "varistor", "rms_voltage"),
    ("mil_std_975m", "capacitor ceramic (CCR, CKR, CKS, CDR)", "voltage", "capacitor", "clamp capacitor", "peak_voltage"),
    ("mil_std_975m", "capacitor film, metallised plastic (CRH, CHS)", "voltage", "capacitor", "X2 capacitor", "peak_voltage"),
    ("mil_std_975m", "diode rectifier, switching, Schottky, thyristor", "peak_inverse_voltage", "diode",
     "output rectifier", "reverse_voltage"),
    ("mil_std_975m", "diode rectifier, switching, Schottky, thyristor", "forward_current", "diode", "output rectifier",
     "average_current"),
    ("mil_std_975m", "diode rectifier, switching, Schottky, thyristor", "surge_current", "diode", "output rectifier",
     "peak_current"),
    ("mil_std_975m", "diode zener regulator", "power", "zener", "regulation zener", "power"),
    ("mil_std_975m", "transistor bipolar", "power", "bipolar_transistor", "main switch", "power"),
    ("mil_std_975m", "transistor bipolar", "current", "bipolar_transistor", "main switch", "peak_current"),
    ("mil_std_975m", "transistor power MOSFET", "drain_source_voltage", "mosfet", "main switch", "peak_voltage"),
    ("mil_std_975m", "linear IC: voltage regulator", "output_current", "regulator", "regulator", "average_current"),
    ("mil_std_975m", "resistor film high stability (RNC, RNR)", "power", "resistor", "startup resistor", "power"),
    ("mil_std_975m", "resistor film high stability (RNC, RNR)", "voltage", "resistor", "startup resistor", "peak_voltage"),
    ("mil_std_975m", "fuse", "current_1A_1A5", "fuse", "mains fuse", "rms_current"),
    ("mil_std_975m", "transformer / inductor", "application_voltage_of_dwv", "transformer", "flyback transformer",
     "peak_voltage"),
    ("ecss", "capacitor ceramic", "voltage", "capacitor", "Y capacitor", "peak_voltage"),
    ("ecss", "diode signal, switching, rectifier, Schottky", "reverse_voltage", "diode", "output rectifier", "reverse_voltage"),
    ("ecss", "transistor bipolar", "power", "bipolar_transistor", "main switch", "power"),
    ("ecss", "transistor MOSFET", "drain_source_voltage", "mosfet", "main switch", "peak_voltage"),
    ("ecss", "optocoupler", "led_forward_current", "optocoupler", "optocoupler", "average_current"),
    ("ecss", "resistor film / wirewound", "power", "resistor", "gate resistor", "power"),
    ("ecss", "fuse (cermet)", "current", "fuse", "mains fuse", "rms_current"),
    ("eee_inst_002", "diode rectifier, switching, Schottky", "peak_inverse_voltage", "diode", "mains rectifier",
     "reverse_voltage"),
    ("eee_inst_002", "transistor bipolar and MOSFET", "power", "mosfet", "main switch", "power"),
    ("eee_inst_002", "capacitor ceramic and film", "voltage", "capacitor", "clamp capacitor", "peak_voltage"),
    ("eee_inst_002", "resistor", "power", "resistor", "startup resistor", "power"),
    ("eee_inst_002", "fuse >= 2 A", "current", "fuse", "mains fuse", "rms_current"),
    ("rl_tr_92_11", "power bipolar", "power", "bipolar_transistor", "main switch", "power"),
    ("rl_tr_92_11", "power MOSFET", "breakdown_voltage", "mosfet", "main switch", "peak_voltage"),
    ("rl_tr_92_11", "LED", "forward_current", "led", "power LED", "average_current"),
]


@pytest.mark.parametrize("chosen, part_class, limit, kind, role, quantity", FACTORS)
def test_factor_of_a_published_row(outside_check: OutsideChecks, chosen: str, part_class: str, limit: str, kind: str,
                                   role: str, quantity: str) -> None:
    row = next(row for row in BOOK[chosen] if row["class"] == part_class)
    printed = row["limits"][limit]
    expected = printed[-1] if isinstance(printed, list) else printed  # RL-TR-92-11: level III
    got = derating(kind, role, quantity, chosen=chosen)
    outside_check("derating table", SETS[chosen], got.factor, expected, 1e-9, what=f"{kind} {quantity}")
    assert row["confidence"] in got.source


TEMPERATURES = [
    ("smps_practice", "bulk electrolytic", "core_temperature_below_rating_K", "electrolytic", "bulk capacitor", 105.0),
    ("smps_practice", "switch MOSFET", "junction_max_C", "mosfet", "main switch", 150.0),
    ("smps_practice", "switch bipolar transistor", "junction_max_C", "bipolar_transistor", "main switch", 150.0),
    ("smps_practice", "mains rectifier diode", "junction_max_C", "diode", "mains rectifier", 175.0),
    ("smps_practice", "optocoupler", "junction_max_C", "optocoupler", "optocoupler", 125.0),
    ("smps_practice", "resistor", "surface_max_C", "resistor", "clamp resistor", 155.0),
    ("smps_practice", "transformer", "hot_spot_class_E_C", "transformer", "flyback transformer", 120.0),
    ("mil_std_975m", "linear IC: voltage regulator", "junction_max_C", "regulator", "regulator", 125.0),
    ("rl_tr_92_11", "power bipolar", "junction_max_C", "bipolar_transistor", "main switch", 150.0),
    ("ecss", "transformer, inductor", "hot_spot_below_rating_K", "transformer", "flyback transformer", 130.0),
]


@pytest.mark.parametrize("chosen, part_class, limit, kind, role, rating", TEMPERATURES)
def test_temperature_limit_of_a_published_row(outside_check: OutsideChecks, chosen: str, part_class: str, limit: str,
                                              kind: str, role: str, rating: float) -> None:
    printed = next(row for row in BOOK[chosen] if row["class"] == part_class)["limits"][limit]
    printed = printed[-1] if isinstance(printed, list) else printed
    expected = rating - printed if "below" in limit else printed
    factor = derating(kind, role, "temperature", rating, chosen).factor
    assert factor is not None
    outside_check("derating table", SETS[chosen], factor * rating, expected, 1e-9, what=f"{kind} temperature")


SHARES = [
    ("capacitor_ceramic", "capacitor", "clamp capacitor", {"short": "short", "open": "open",
     "change_in_value": "low_capacitance"}),
    ("capacitor_plastic_film", "capacitor", "X2 capacitor", {"short": "short", "open": "open",
     "change_in_value": "low_capacitance"}),
    ("diode_rectifier", "diode", "mains rectifier", {"short": "short", "open": "open", "parameter_change": "leaky"}),
    ("diode_general", "diode", "base reset diode", {"short": "short", "open": "open", "parameter_change": "leaky"}),
    ("diode_zener_regulator", "zener", "regulation zener", {"short": "short", "open": "open",
     "parameter_change": "low_voltage+leaky"}),
    ("optoelectronic_led", "led", "power LED", {"short": "short", "open": "open"}),
    ("transistor_bipolar", "bipolar_transistor", "main switch", {"short": "ce_short+be_short+leaky",
     "open": "open+be_open+low_gain"}),
    ("transistor_fet", "mosfet", "main switch", {"short": "short+short_dgs", "output_low": "gs_short",
     "parameter_change": "leaky", "open": "open", "output_high": "gate_open"}),
    ("resistor_fixed_film", "resistor", "LED resistor", {"open": "open", "parameter_change": "high", "short": "short"}),
    ("thermistor", "ntc", "inrush limiter", {"open": "open", "parameter_change": "high", "short": "short"}),
    ("inductor_coil", "inductor", "output choke", {"open": "open", "short": "short", "change_in_value": "shorted_turns"}),
    ("transformer", "transformer", "mains transformer",
     {"open": "pri_open+sec_open+half_open", "short+parameter_change": "shorted_turns"}),
    ("transformer", "transformer", "flyback transformer",
     {"open": "pri_open+fb_open+aux_open+sec_open+half_open", "short+parameter_change": "shorted_turns"}),
    ("microcircuit_linear", "pwm_controller", "controller", {"no_output": "open",
     "improper_output": "vcc_short+drv_low+vcc_leaky+drv_high"}),
    ("microcircuit_linear", "regulator", "regulator", {"no_output": "open",
     "improper_output": "short+out_short+gnd_open+leaky"}),
]


@pytest.mark.parametrize("part_class, kind, role, names", SHARES)
def test_shares_add_up_to_the_published_modes(outside_check: OutsideChecks, part_class: str, kind: str, role: str,
                                              names: dict[str, str]) -> None:
    """Bound 0.005: a published share of 0.35 may be divided between two of our modes at two digits."""
    published = next(row for row in MODES["class"] if row["part"] == part_class)["modes"]
    row = mode_row(kind, role)
    assert row is not None
    shares = mode_shares(kind, role, row.modes)
    for theirs, ours in names.items():
        got = sum(shares[mode] for mode in ours.split("+"))
        expected = sum(published[mode] for mode in theirs.split("+"))
        outside_check("failure modes", "MIL-HDBK-338B section 7.8 / FMD-91", got, expected, 0.005, absolute=True,
                      what=f"{kind} {theirs}")


PRIORS = [
    ("output or aux electrolytic", "electrolytic", "output capacitor",
     {"esr_high": "high_esr", "capacitance_low": "low_capacitance", "leak_or_bulge": "leaky", "short": "short", "open": "open"}),
    ("bulk (mains) electrolytic", "electrolytic", "bulk capacitor",
     {"esr_high": "high_esr", "capacitance_low": "low_capacitance", "vented+open": "open", "short": "short"}),
    ("fusible resistor or fuse", "fusible_resistor", "fusible input resistor", {"open": "open", "high_value": "high"}),
    ("high-value start-up resistor", "resistor", "startup resistor", {"open": "open", "value_high": "high", "short": "short"}),
]


@pytest.mark.parametrize("part_class, kind, role, names", PRIORS)
def test_adapter_priors_stand_before_the_published_rows(part_class: str, kind: str, role: str, names: dict[str, str]) -> None:
    """No outside check: the priors are judgements, and the program must say so."""
    prior = next(row for row in MODES["adapter_prior"] if row["part"] == part_class)["modes"]
    row = mode_row(kind, role)
    assert row is not None and row.confidence == "judgement"
    shares = mode_shares(kind, role, names.values())
    assert shares == {ours: pytest.approx(sum(prior[mode] for mode in theirs.split("+"))) for theirs, ours in names.items()}
