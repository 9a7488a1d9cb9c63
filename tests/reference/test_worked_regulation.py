"""Worked examples of zener stages, linear regulators, shunt references and resistor networks."""

from collections.abc import Mapping
from typing import Any

import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import Solution, examples, run
from triage.physics import divider, linear_regulator, shunt_reference, thermal, zener

LEFT_OUT = {
    "salivahanan_ex18_17_series_regulator.V_CE_max_V": "sum of a book's worst case, no equation of ours",
    "salivahanan_ex18_15_zener_R_range.I_z_max_A": "power over voltage, no equation of ours",
    "bell_ex3_15_ohmmeter": "moving-coil ohmmeter with zero control, not the meter of this program",
}

In = Mapping[str, float]


def malvino_5_7(i: In) -> dict[str, Any]:
    load = zener.voltage_at_current(i["V_z_V"], 0.0, i["r_z_ohm"], i["I_z_A"])
    return {
        "delta_V_V": load - i["V_z_V"],
        "V_load_V": load,
        # the book leaves the slope resistance out of the sum: the same divider with a larger series resistor
        "V_ripple_out_V": zener.ripple_out(i["V_ripple_in_V"], i["r_z_ohm"], i["R_series_ohm"] - i["r_z_ohm"]),
    }


def sedra_3_8(i: In) -> dict[str, Any]:
    base = zener.voltage_at_current(i["V_z_V"], i["I_z_test_A"], i["r_z_ohm"], 0.0)

    def out(volts: float, load: float = 0.0) -> float:
        return float(zener.stage_output_with_slope(volts, base, i["r_z_ohm"], i["R_series_ohm"], load))

    least = zener.zener_current(i["V_in_min_V"], i["V_z_knee_V"], i["R_series_ohm"], i["I_z_knee_A"])
    return {
        "V_out_no_load_V": out(i["V_in_V"]),
        "line_regulation_V_per_V": out(i["V_in_V"] + 1.0) - out(i["V_in_V"]),
        "load_regulation_V_per_A": (out(i["V_in_V"], 0.001) - out(i["V_in_V"])) / 0.001,
        # the book lets the zener give up the whole load current, as with a very large series resistor
        "delta_V_2k_V": zener.voltage_at_current(0.0, 0.0, i["r_z_ohm"], -i["V_z_V"] / 2000.0),
        "V_out_500ohm_V": zener.stage_output(i["V_in_V"], i["V_z_V"], i["R_series_ohm"], 500.0),
        "R_load_min_ohm": i["V_z_knee_V"] / least,
    }


def mehta_6_25(i: In, volts: float) -> float:
    return float(zener.zener_current(volts, i["V_z_V"], i["R_series_ohm"], i["V_z_V"] / i["R_load_ohm"]))


def mehta_6_32(i: In) -> dict[str, Any]:
    load = i["V_z_V"] / i["R_load_ohm"]
    return {
        "V_in_min_V": zener.input_for_current(i["V_z_V"], i["R_series_ohm"], load),
        "V_in_max_V": zener.input_for_current(i["V_z_V"], i["R_series_ohm"], load, i["I_z_max_A"]),
    }


def mehta_6_34(i: In) -> dict[str, Any]:
    states = {"V_out_ok_V": i["V_z_V"], "V_out_zener_short_V": 0.0, "V_out_zener_open_V": float("inf")}
    return {key: zener.stage_output(i["V_in_V"], volts, i["R_series_ohm"], i["R_load_ohm"])
            for key, volts in states.items()}


def mehta_17_8(i: In) -> dict[str, Any]:
    load = i["V_z_V"] / i["R_load_min_ohm"]
    stage = (i["V_in_V"], i["V_z_V"], i["R_series_ohm"])
    return {
        "I_series_A": zener.series_current(*stage),
        "I_load_max_A": load,
        "I_zener_min_A": zener.zener_current(*stage, load),
        "I_zener_max_A": zener.zener_current(*stage),
    }


def boylestad_15_8(i: In) -> dict[str, Any]:
    out = linear_regulator.follower_output(i["V_z_V"], i["V_BE_V"])
    base = linear_regulator.follower_base_current(out, i["R_load_ohm"], i["h_FE"])
    return {"V_out_V": out, "I_zener_A": zener.zener_current(i["V_in_V"], i["V_z_V"], i["R_ohm"], base)}


ZENER: dict[str, Solution] = {
    "malvino_ex5_1_zener_range": lambda i: {
        "I_min_A": zener.series_current(i["V_in_min_V"], i["V_z_V"], i["R_series_ohm"]),
        "I_max_A": zener.series_current(i["V_in_max_V"], i["V_z_V"], i["R_series_ohm"]),
    },
    "malvino_ex5_2_5_3_loaded_zener": lambda i: {
        "V_thevenin_V": zener.stage_output(i["V_in_V"], float("inf"), i["R_series_ohm"], i["R_load_ohm"]),
        "I_load_A": zener.stage_output(i["V_in_V"], i["V_z_V"], i["R_series_ohm"], i["R_load_ohm"]) / i["R_load_ohm"],
        "I_zener_A": mehta_6_25(i, i["V_in_V"]),
    },
    "malvino_ex5_7_5_8_zener_resistance": malvino_5_7,
    "sedra_ex3_8_zener_regulator": sedra_3_8,
    "vkmehta_ex6_25_zener": lambda i: {
        "V_out_V": zener.stage_output(i["V_in_V"], i["V_z_V"], i["R_series_ohm"], i["R_load_ohm"]),
        "V_R_V": zener.series_current(i["V_in_V"], i["V_z_V"], i["R_series_ohm"]) * i["R_series_ohm"],
        "I_zener_A": mehta_6_25(i, i["V_in_V"]),
    },
    "vkmehta_ex6_26_zener_range": lambda i: {
        "I_zener_max_A": mehta_6_25(i, i["V_in_max_V"]), "I_zener_min_A": mehta_6_25(i, i["V_in_min_V"])
    },
    "vkmehta_ex6_27_series_R": lambda i: {
        "R_series_ohm": zener.series_resistance(i["V_in_min_V"], i["V_z_V"], i["I_load_max_A"] + i["I_z_min_A"])
    },
    "vkmehta_ex6_29_series_R": lambda i: {
        "R_series_ohm": zener.series_resistance(i["V_in_min_V"], i["V_z_V"], i["I_load_max_A"] + i["I_z_min_A"])
    },
    "vkmehta_ex6_32_input_range": mehta_6_32,
    "vkmehta_ex6_33_design": lambda i: {
        "R_series_ohm": zener.series_resistance(i["V_in_V"], i["V_z_V"], i["I_load_max_A"]),
        "P_zener_W": linear_regulator.pass_power(i["V_z_V"], 0.0, i["I_z_max_A"]),
    },
    "vkmehta_ex6_34_zener_faults": mehta_6_34,
    "vkmehta_ex17_8_zener_load_range": mehta_17_8,
    "salivahanan_ex18_15_zener_R_range": lambda i: {
        "R_max_ohm": zener.series_resistance(i["V_in_min_V"], i["V_z_V"], i["I_load_A"]),
        "R_min_ohm": zener.series_resistance(i["V_in_max_V"], i["V_z_V"], i["P_z_W"] / i["V_z_V"] + i["I_load_A"]),
    },
    "boylestad_ex15_8_series_pass_zener": boylestad_15_8,
}


def malvino_24_7(i: In) -> dict[str, Any]:
    out = shunt_reference.set_point(i["V_z_V"] + i["V_BE_V"], i["R1_ohm"], i["R2_ohm"])
    load = out / i["R_load_ohm"]
    return {
        "V_out_V": out,
        "I_load_A": load,
        "P_pass_W": linear_regulator.pass_power(i["V_in_V"], out, load),
        "P_in_W": i["V_in_V"] * load,
        "P_out_W": divider.heat(load, i["R_load_ohm"]),
        "efficiency_percent": 100.0 * linear_regulator.efficiency(i["V_in_V"], out),
    }


def floyd_17_8(i: In) -> dict[str, Any]:
    beyond = i["V_out_V"] / i["R_load_ohm"] - i["I_reg_max_A"]
    return {"P_ext_W": linear_regulator.pass_power(i["V_in_V"], i["V_out_V"], beyond)}


def jacob_1_6(i: In) -> dict[str, Any]:
    load = i["V_out_V"] / i["R_load_ohm"]
    return {
        "I_load_A": load,
        "P_load_W": divider.heat(load, i["R_load_ohm"]),
        "P_regulator_W": linear_regulator.pass_power(i["V_in_V"], i["V_out_V"], load),
    }


def franco_11_14(i: In) -> dict[str, Any]:
    power = thermal.allowed_power(i["T_J_max_degC"], i["T_A_degC"], i["Rth_JA_K_per_W"])
    return {
        "P_max_W": power,
        "T_case_degC": thermal.allowed_ambient(i["T_J_max_degC"], power, i["Rth_JC_K_per_W"]),
        "I_out_max_A": linear_regulator.current_for_power(power, i["V_in_V"], i["V_out_V"]),
    }


def franco_11_15(i: In) -> dict[str, Any]:
    power = linear_regulator.pass_power(i["V_in_V"], i["V_out_V"], i["I_out_A"])
    return {"Rth_SA_max_K_per_W": thermal.needed_resistance(
        i["T_J_max_degC"], i["T_A_degC"], power, i["Rth_JC_K_per_W"], i["Rth_CS_K_per_W"])}


def franco_11_10(i: In) -> dict[str, Any]:
    shorted = linear_regulator.current_for_power(i["P_max_W"], i["V_in_V"], 0.0)
    return {
        "I_sc_A": shorted,
        "R_sc_ohm": linear_regulator.sense_resistance(shorted),
        "I_fb_A": linear_regulator.current_for_power(i["P_max_W"], i["V_in_V"], i["V_out_V"]),
    }


def gayakwad_9_10(i: In) -> dict[str, Any]:
    out = divider.loaded_voltage(i["V_reg_V"], -i["I_load_A"], i["R_load_ohm"])
    return {
        "R_ohm": zener.series_resistance(i["V_reg_V"], 0.0, i["I_load_A"]),
        "V_out_V": out,
        "V_in_min_V": linear_regulator.input_needed(out, i["V_dropout_V"]),
    }


REGULATOR: dict[str, Solution] = {
    "malvino_ex24_7_24_8_series_regulator": malvino_24_7,
    "floyd_ex17_8_external_pass": floyd_17_8,
    "jacob_ex1_6_lm317_power": jacob_1_6,
    "franco_ex11_14_regulator_no_heatsink": franco_11_14,
    "franco_ex11_15_regulator_heatsink": franco_11_15,
    "franco_ex11_10_foldback": franco_11_10,
    "salivahanan_ex18_17_series_regulator": lambda i: {
        "R1_ohm": zener.series_resistance(i["V_in_V"], i["V_z_V"], i["I_z_A"]),
        "R2_ohm": zener.series_resistance(i["V_out_V"], i["V_z_V"], i["I_2_A"]),
        "R3_ohm": zener.series_resistance(i["V_z_V"], 0.0, i["I_2_A"]),
        "P_pass_W": linear_regulator.pass_power(i["V_in_V"], i["V_out_V"], i["I_load_A"]),
    },
    "gayakwad_ex9_10_7805_current_source": gayakwad_9_10,
}


def e2e(i: In) -> dict[str, Any]:
    branch = (i["I_led_A"], i["V_led_V"], i["R1_ohm"])
    cathode = shunt_reference.cathode_voltage(i["V_out_actual_V"], i["V_led_V"], i["I_led_A"], i["R1_ohm"])
    return {
        "R5_ohm": shunt_reference.resistor_for_output(i["V_out_V"], i["V_ref_V"], i["R6_ohm"]),
        "V_R1_V": i["V_out_actual_V"] - cathode - i["V_led_V"],
        "V_R3_V": i["V_out_actual_V"] - cathode,
        "R3_ohm": shunt_reference.bias_resistance(*branch, i["I_ka_A"]),
        "V_ka_V": cathode,
    }


def lm317(i: In) -> dict[str, Any]:
    return {"V_out_V": shunt_reference.set_point(i["V_ref_V"], i["R1_ohm"], i["R2_ohm"], i["I_adj_A"])}


def gayakwad_9_11(i: In) -> dict[str, Any]:
    rest = (i["V_ref_V"], i["R1_ohm"], i["I_adj_A"])
    return {
        "R2_min_ohm": shunt_reference.resistor_for_output(i["V_out_min_V"], *rest),
        "R2_max_ohm": shunt_reference.resistor_for_output(i["V_out_max_V"], *rest),
    }


def tl431(i: In) -> dict[str, Any]:
    out = shunt_reference.set_point(i["V_ref_V"], i["R_bottom_ohm"], i["R_top_ohm"], i["I_ref_A"])
    return {"V_out_V": out, "I_divider_A": shunt_reference.divider_current(out, i["V_ref_V"], i["R_top_ohm"])}


def opto_bias(i: In) -> dict[str, Any]:
    collector = shunt_reference.led_current(i["V_cc_pri_V"], i["V_fb_V"], i["R_pullup_ohm"], 1.0)
    led = shunt_reference.led_current(i["V_cc_pri_V"], i["V_fb_V"], i["R_pullup_ohm"], i["CTR"])
    cathode = shunt_reference.cathode_current(led, i["V_led_V"], i["R_bias_ohm"])
    most = shunt_reference.led_current(i["V_cc_pri_V"], i["V_ce_sat_V"], i["R_pullup_ohm"], i["CTR_min"])
    return {
        "I_collector_A": collector,
        "I_led_A": led,
        "I_bias_A": cathode - led,
        "I_ka_A": cathode,
        "V_ka_V": shunt_reference.cathode_voltage(i["V_out_V"], i["V_led_V"], led, i["R_led_ohm"]),
        "R_led_max_ohm": shunt_reference.highest_led_resistance(i["V_out_V"], i["V_led_V"], i["V_ka_min_V"], most),
        "I_led_min_CTR_A": shunt_reference.led_current(i["V_cc_pri_V"], i["V_fb_V"], i["R_pullup_ohm"],
                                                       i["CTR_min"]),
    }


def shunt_stage(i: In, reference: float) -> dict[str, Any]:
    out = shunt_reference.set_point(reference, i["R1_ohm"], i["R2_ohm"])
    load = out / i["R_load_ohm"]
    return {
        "V_out_V": out,
        "I_series_A": zener.series_current(i["V_in_V"], out, i["R_series_ohm"]),
        "I_load_A": load,
        "I_collector_A": zener.zener_current(i["V_in_V"], out, i["R_series_ohm"], load),
    }


def malvino_24_2(i: In) -> dict[str, Any]:
    stage = shunt_stage(i, i["V_z_V"] + i["V_BE_V"])
    drawn, used = i["V_in_V"] * stage["I_series_A"], divider.heat(stage["I_load_A"], i["R_load_ohm"])
    return {**stage, "P_in_W": drawn, "P_out_W": used, "P_regulator_W": drawn - used,
            "efficiency_percent": 100.0 * used / drawn}


REFERENCE: dict[str, Solution] = {
    "e2e_tl431_opto_15V": e2e,
    "boylestad_ex15_15_lm317": lm317,
    "boylestad_ex15_16_lm317": lm317,
    "gayakwad_ex9_11_lm317": gayakwad_9_11,
    "derived_tl431_5V": tl431,
    "derived_tl431_12V": tl431,
    "derived_tl431_19V": tl431,
    "derived_opto_bias_5V": opto_bias,
    "malvino_ex24_2_24_3_shunt": malvino_24_2,
    "malvino_ex24_4_shunt_opamp": lambda i: shunt_stage(i, i["V_z_V"]),
}


def in_series(i: In) -> dict[str, Any]:
    parts = (i["R1_ohm"], i["R2_ohm"], i["R3_ohm"])
    current = divider.current_into(i["V_V"], *parts)
    out = {"R_total_ohm": divider.series(*parts), "I_A": current}
    for k, r in enumerate(parts, 1):
        out |= {f"V{k}_V": divider.divided(i["V_V"], out["R_total_ohm"] - r, r), f"P{k}_W": divider.heat(current, r)}
    return out


def in_parallel(i: In) -> dict[str, Any]:
    parts = (i["R1_ohm"], i["R2_ohm"], i["R3_ohm"])
    total = divider.parallel(*parts)
    return {"R_total_ohm": total, "I_A": divider.current_into(i["V_V"], total),
            **{f"I{k}_A": divider.current_into(i["V_V"], r) for k, r in enumerate(parts, 1)}}


def mixed(i: In) -> dict[str, Any]:
    both = divider.parallel(i["R2_ohm"], i["R3_ohm"])
    return {
        "R_p_ohm": both,
        "R_total_ohm": divider.series(i["R1_ohm"], both),
        "I_A": divider.current_into(i["V_V"], i["R1_ohm"], both),
        "V1_V": divider.divided(i["V_V"], both, i["R1_ohm"]),
        "V_p_V": divider.divided(i["V_V"], i["R1_ohm"], both),
    }


def battery(i: In) -> dict[str, Any]:
    out: dict[str, Any] = {}
    for name in ("a", "b"):
        current = divider.current_into(i["emf_V"], i["r_ohm"], i[f"R_{name}_ohm"])
        out |= {f"I_{name}_A": current, f"V_{name}_V": divider.loaded_voltage(i["emf_V"], current, i["r_ohm"])}
    return {**out, "P_b_W": divider.heat(out["I_b_A"], i["R_b_ohm"])}


def coughlin_16_2(i: In) -> dict[str, Any]:
    inner = divider.source_resistance(i["V_no_load_V"], i["V_full_load_V"], i["I_full_load_A"])
    return {"R_out_ohm": inner, "V_at_half_A_V": divider.loaded_voltage(i["V_no_load_V"], i["I_load_A"], inner)}


def around_divider(i: In) -> dict[str, Any]:
    reading = divider.resistance_in_circuit(i["R_top_ohm"], i["R_bottom_ohm"], i["R_bleeder_ohm"])
    return {"R_reading_ohm": reading, "error_percent": 100.0 * (reading / i["R_top_ohm"] - 1.0)}


DIVIDER: dict[str, Solution] = {
    "openstax_series_circuit": in_series,
    "openstax_parallel_circuit": in_parallel,
    "openstax_series_parallel": mixed,
    "openstax_battery_load": battery,
    "coughlin_ex16_2_source_resistance": coughlin_16_2,
    "derived_in_circuit_tl431_divider": around_divider,
    "derived_dmm_loading_startup_string": lambda i: {
        "V_true_V": divider.divided(i["V_in_V"], i["R_top_ohm"], i["R_bottom_ohm"]),
        "V_reading_V": divider.read_with_meter(i["V_in_V"], i["R_top_ohm"], i["R_bottom_ohm"], i["R_meter_ohm"]),
    },
}

SOLUTIONS = ZENER | REGULATOR | REFERENCE | DIVIDER


@pytest.mark.parametrize(
    "subject, example", examples("zener", "linear_regulator", "tl431_opto_references", "dividers_in_circuit")
)
def test_worked_example(outside_check: OutsideChecks, subject: str, example: Mapping[str, Any]) -> None:
    run(outside_check, subject, example, SOLUTIONS, LEFT_OUT)
