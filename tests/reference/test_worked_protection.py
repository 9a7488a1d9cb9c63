"""Worked examples of discharge, inrush, leakage, heat, capacitor life, derating and failure rate."""

import math
from collections.abc import Mapping
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import Solution, examples, run
from triage.physics import (
    capacitor_discharge,
    derating,
    divider,
    electrolytic_life,
    failure_factors,
    failure_rate,
    fuse_inrush,
    thermal,
    y_capacitor,
)

LEFT_OUT = {
    "gupta_singhal_ex2_26_power.rating_increase_percent": "square root of a ratio of powers, no equation of ours",
}

In = Mapping[str, float]
ROOT2 = math.sqrt(2.0)


def welwyn(i: In) -> dict[str, Any]:
    pair = (i["R_ohm"], i["C_F"])
    return {
        "t_s": capacitor_discharge.time_to_voltage(i["V0_V"], i["V_safe_V"], *pair),
        "P0_W": capacitor_discharge.bleeder_power(i["V0_V"], i["R_ohm"]),
        "tau_s": capacitor_discharge.time_to_voltage(math.e, 1.0, *pair),
        "W_J": capacitor_discharge.stored_energy(i["C_F"], i["V0_V"]),
    }


def defibrillator(i: In) -> dict[str, Any]:
    tau = capacitor_discharge.time_to_voltage(math.e, 1.0, i["R_ohm"], i["C_F"])
    return {
        "tau_s": tau,
        "V_after_3tau_V": capacitor_discharge.voltage_after(3.0 * tau, i["V0_V"], i["R_ohm"], i["C_F"]),
    }


def oscillator(i: In) -> dict[str, Any]:
    time = capacitor_discharge.charging_time(i["V_source_V"], i["V_trip_V"], i["R_ohm"], i["C_F"])
    return {"t_s": time, "f_Hz": 1.0 / time}


def x_capacitor(i: In) -> dict[str, Any]:
    start, pair = ROOT2 * i["V_rms_V"], (i["R_ohm"], i["C_F"])
    return {
        "V0_V": start,
        "tau_s": capacitor_discharge.time_to_voltage(math.e, 1.0, *pair),
        "V_after_1s_V": capacitor_discharge.voltage_after(1.0, start, *pair),
        "V_after_2s_V": capacitor_discharge.voltage_after(2.0, start, *pair),
        "t_to_60V_s": capacitor_discharge.time_to_voltage(start, 60.0, *pair),
        "P_resistor_W": capacitor_discharge.bleeder_power(i["V_rms_nominal_V"], i["R_ohm"]),
    }


def bulk(i: In) -> dict[str, Any]:
    start = ROOT2 * i["V_rms_V"]
    return {
        "V0_V": start,
        "W_J": capacitor_discharge.stored_energy(i["C_F"], start),
        "t_to_60V_s": capacitor_discharge.time_to_voltage(start, 60.0, i["R_ohm"], i["C_F"]),
        "P_bleeder_W": capacitor_discharge.bleeder_power(start, i["R_ohm"]),
    }


DISCHARGE: dict[str, Solution] = {
    "tt_welwyn_bleeder_a": welwyn,
    "openstax_defibrillator_rc": defibrillator,
    "openstax_relaxation_oscillator": oscillator,
    "openstax_wiper_timer": lambda i: {
        "R_ohm": capacitor_discharge.charging_resistance(i["t_s"], i["V_source_V"], i["V_trip_V"], i["C_F"])
    },
    "openstax_capacitor_energy": lambda i: {
        "C_F": capacitor_discharge.capacitance_for_energy(i["W_J"], i["V_V"])
    },
    "xcap_rc1_rule_200nF": lambda i: {
        "R_ohm": capacitor_discharge.resistance_for_time(i["t_s"], 1.0, i["V_fraction"], i["C_F"])
    },
    "derived_xcap_470nF_264V": x_capacitor,
    "derived_bulk_self_discharge": bulk,
    "derived_bulk_constant_power_holdup": lambda i: {
        "t_holdup_s": capacitor_discharge.hold_up_time(i["V_start_V"], i["V_end_V"], i["C_F"], i["P_W"])
    },
}


def ametherm(i: In) -> dict[str, Any]:
    crest = ROOT2 * 1.1 * i["V_rms_V"]
    return {
        "V_peak_V": crest,
        "E_J": capacitor_discharge.stored_energy(i["C_F"], crest),
        "R_min_ohm": fuse_inrush.inrush_resistance(crest, i["I_max_A"]),
        # three in a row, each down to three quarters of its cold resistance at 85 degC (the note's figure)
        "R_total_85C_ohm": divider.series(*[0.75 * i["R_each_ohm"]] * 3),
    }


def shapes(i: In) -> dict[str, Any]:
    names = {"rect": "rectangle", "triangle": "triangle", "half_sine": "half sine", "parabola": "parabola",
             "exponential": "exponential"}
    return {f"I2t_{key}_A2s": fuse_inrush.pulse_i2t(i["I_peak_A"], i["t_pulse_s"], shape)
            for key, shape in names.items()}


def littelfuse(i: In) -> dict[str, Any]:
    pulse = fuse_inrush.pulse_i2t(i["I_peak_A"], i["t_pulse_s"], "parabola")
    return {
        "I2t_pulse_A2s": pulse,
        "I2t_melting_min_A2s": fuse_inrush.melting_i2t_needed(pulse, 100_000),
        "I_rated_min_A": fuse_inrush.rated_current_needed(i["I_normal_A"]),
    }


def half_cycle(i: In) -> dict[str, Any]:
    return {"I2t_A2s": fuse_inrush.pulse_i2t(i["I_surge_peak_A"], 0.5 / i["f_Hz"])}


def inrush(i: In) -> dict[str, Any]:
    crest = ROOT2 * i["V_rms_V"]
    i2t = fuse_inrush.inrush_i2t(crest, i["R_total_ohm"], i["C_F"], i["f_mains_Hz"])
    return {
        "I_peak_A": fuse_inrush.inrush_peak(crest, i["R_total_ohm"]),
        "I2t_A2s": i2t,
        "E_capacitor_J": capacitor_discharge.stored_energy(i["C_F"], crest),
        "E_resistor_J": i2t * i["R_total_ohm"],
    }


INRUSH: dict[str, Solution] = {
    "ametherm_ntc_480V": ametherm,
    "littelfuse_waveform_factors": shapes,
    "littelfuse_pulse_example": littelfuse,
    "gupta_singhal_ex2_17_I2t": half_cycle,
    "jagannathan_ex2_15_I2t": half_cycle,
    "sedha_ex17_2_I2t_time": lambda i: {"t_max_s": fuse_inrush.time_at_current(i["I2t_A2s"], i["I_A"])},
    "derived_inrush_ntc_230V": inrush,
    "derived_inrush_halfsine_equivalent": lambda i: {
        "I2t_A2s": fuse_inrush.pulse_i2t(i["I_FSM_A"], i["t_half_sine_s"])
    },
    "nasa_975m_fuse_4A_80C": lambda i: {
        "I_allowed_A": i["I_rated_A"] * derating.fuse_current_factor(i["I_rated_A"], i["T_A_degC"])
    },
}


def y_plain(i: In) -> dict[str, Any]:
    return {"I_rms_A": y_capacitor.leakage_current(i["C_F"], i["V_rms_V"], i["f_Hz"])}


def y_network(i: In) -> dict[str, Any]:
    r = y_capacitor.touch_reading(i["C_F"], i["V_rms_V"], i["f_Hz"])
    return {"I_network_A": r.current, "U1_over_500_A": r.unweighted, "U2_over_500_A": r.weighted}


LEAKAGE: dict[str, Solution] = {
    "forum_ycap_4n7_240V": y_plain,
    "derived_ycap_2n2_264V60": y_plain,
    "derived_ycap_1n_230V50": y_plain,
    "derived_iec60990_network_reading": y_network,
    "derived_two_ycaps_bridge_midpoint": lambda i: {
        "I_rms_A": y_capacitor.leakage_from_bulk_rail(i["C_F"], i["V_rms_V"], i["f_Hz"])
    },
}


def sedra_14_4(i: In) -> dict[str, Any]:
    r = thermal.needed_resistance(i["T_J_max_degC"], i["T_A0_degC"], i["P_D0_W"])
    return {
        "Rth_JA_K_per_W": r,
        "P_max_at_50_W": thermal.allowed_power(i["T_J_max_degC"], 50.0, r),
        "T_J_degC": thermal.temperature_after(i["T_A0_degC"], i["P_W"], r),
    }


def sedra_14_5(i: In) -> dict[str, Any]:
    ends = (i["T_J_max_degC"], i["T_A_degC"])
    inner = (i["Rth_JC_K_per_W"], i["Rth_CS_K_per_W"])
    return {
        "P_free_air_W": thermal.allowed_power(*ends, i["Rth_JA_K_per_W"]),
        "P_heatsink_W": thermal.allowed_power(*ends, *inner, i["Rth_SA_K_per_W"]),
        "P_infinite_sink_W": thermal.allowed_power(*ends, i["Rth_JC_K_per_W"]),
    }


def neamen_8(i: In) -> dict[str, Any]:
    ends = (i["T_J_max_degC"], i["T_A_degC"])
    return {
        "P_no_sink_W": thermal.allowed_power(*ends, i["Rth_JC_K_per_W"], i["Rth_CA_K_per_W"]),
        "P_sink_W": thermal.allowed_power(*ends, i["Rth_JC_K_per_W"], i["Rth_CS_K_per_W"], i["Rth_SA_K_per_W"]),
    }


def neamen_8_3(i: In) -> dict[str, Any]:
    case = thermal.needed_resistance(i["T_J_max_degC"], i["T_case_rated_degC"], i["P_rated_W"])
    links = (case, i["Rth_CS_K_per_W"], i["Rth_SA_K_per_W"])
    return {"Rth_JC_K_per_W": case, "P_max_W": thermal.allowed_power(i["T_J_max_degC"], i["T_A_degC"], *links)}


def sink(i: In) -> dict[str, Any]:
    return {"Rth_SA_K_per_W": thermal.needed_resistance(
        i["T_J_max_degC"], i["T_A_degC"], i["P_W"], i["Rth_JC_K_per_W"], i["Rth_CS_K_per_W"])}


def gupta_2_26(i: In) -> dict[str, Any]:
    inner = (i["Rth_JC_K_per_W"], i["Rth_CS_K_per_W"])
    return {
        "P1_W": thermal.allowed_power(i["T_J_max_degC"], i["T_sink1_degC"], *inner),
        "P2_W": thermal.allowed_power(i["T_J_max_degC"], i["T_sink2_degC"], *inner),
    }


def rashid_17_1(i: In) -> dict[str, Any]:
    long, short = i["Z_1ms_K_per_W"], i["Z_0ms5_K_per_W"]
    # the book adds the impedance of 1 ms for each pulse and takes that of 0.5 ms off after it
    powers, impedances = np.zeros(6), np.array([long, short, long, short, long, short])
    powers[:] = [i["P1_W"], -i["P1_W"], i["P3_W"], -i["P3_W"], i["P5_W"], -i["P5_W"]]
    keys = ("dT_J_1ms_K", "dT_J_1ms5_K", "dT_J_2ms5_K", "dT_J_3ms_K", "dT_J_4ms_K", "dT_J_4ms5_K")
    return {key: thermal.superposed_rise(powers[:k], impedances[:k]) for k, key in enumerate(keys, 1)}


THERMAL: dict[str, Solution] = {
    "sedra_ex14_4_thermal": sedra_14_4,
    "sedra_ex14_5_heatsink": sedra_14_5,
    "neamen_ch8_heatsink": neamen_8,
    "neamen_ex8_3_rated_power": neamen_8_3,
    "gupta_singhal_ex2_23_heatsink": sink,
    "gupta_singhal_ex2_24_junction": lambda i: {
        "T_J_degC": thermal.temperature_after(i["T_sink_degC"], i["V_V"] * i["I_A"], i["Rth_K_per_W"])
    },
    "gupta_singhal_ex2_26_power": gupta_2_26,
    "vkmehta_ex12_15_ambient": lambda i: {
        "T_A_degC": thermal.allowed_ambient(i["T_J_max_degC"], i["P_W"], i["Rth_JA_K_per_W"])
    },
    "vkmehta_ex12_16_heatsink": lambda i: {
        "P_no_sink_W": thermal.allowed_power(i["T_J_max_degC"], i["T_A_degC"], i["Rth_no_sink_K_per_W"]),
        "P_sink_W": thermal.allowed_power(i["T_J_max_degC"], i["T_A_degC"], i["Rth_sink_K_per_W"]),
    },
    "vkmehta_ex12_17_current_limit": lambda i: {
        f"I_C_max_{t}_A": thermal.allowed_power(i["T_J_max_degC"], float(t), i["Rth_JA_K_per_W"]) / i["V_CE_V"]
        for t in (25, 75)
    },
    "jacob_ex4_6_heatsink": sink,
    "jacob_ex4_7_heatsink_power": lambda i: {
        "P_max_W": thermal.allowed_power(i["T_J_max_degC"], i["T_A_degC"], i["Rth_JC_K_per_W"],
                                         i["Rth_CS_K_per_W"], i["Rth_SA_K_per_W"])
    },
    "rashid_ex17_1_pulse_train": rashid_17_1,
    "mil_t27_winding_rise": lambda i: {
        "dT_K": thermal.winding_rise(i["R_cold_ohm"], i["R_hot_ohm"], i["T_cold_degC"], i["T_ambient_end_degC"])
    },
    "mil217_hotspot": lambda i: {"T_hotspot_degC": thermal.hot_spot_temperature(i["T_A_degC"], i["dT_K"])},
}


def cosel(i: In) -> dict[str, Any]:
    lives = {k: i["L0_h"] * electrolytic_life.temperature_factor(i[f"T_{k}_degC"], i["T0_degC"]) for k in "abc"}
    both = electrolytic_life.mixed_life(np.full(3, i["hours_each_h"]), np.array(list(lives.values())))
    return {
        **{f"L_{k}_h": value for k, value in lives.items()},
        "T_equiv_degC": electrolytic_life.equivalent_temperature(i["L0_h"], both, i["T0_degC"]),
    }


def rubycon(i: In) -> dict[str, Any]:
    current = (i["I_ripple_A"], i["I_rated_A"])
    return {
        "dT_K": electrolytic_life.core_rise_by_rating(*current, i["dT_rated_K"]),
        "life_h": electrolytic_life.life_rubycon(i["L_base_h"], i["T_A_degC"], *current, i["T_max_degC"],
                                                 i["dT_rated_K"]),
    }


def esr_heat(i: In) -> dict[str, Any]:
    core = electrolytic_life.core_temperature(i["T_A_degC"], i["I_ripple_A"], i["ESR_ohm"], i["Rth_K_per_W"])
    return {
        "P_W": divider.heat(i["I_ripple_A"], i["ESR_ohm"]),
        "T_core_degC": core,
        "life_h": electrolytic_life.life_by_core(i["L0_h"], core, i["T0_degC"], i["dT0_K"]),
    }


LIFE: dict[str, Solution] = {
    "cosel_life_mixed": cosel,
    "derived_rubycon_life": rubycon,
    "derived_esr_heating_life": esr_heat,
}


def capacitor_rate(i: In) -> dict[str, Any]:
    stress = failure_factors.capacitor_stress(i["V_dc_V"], i["V_ac_rms_V"], i["V_rated_V"])
    return {
        "pi_T": failure_factors.arrhenius_factor(i["T_degC"], 0.15),
        "pi_C": failure_factors.capacitance_factor(i["C_F"], 0.09),
        "pi_V": failure_factors.capacitor_voltage_factor(stress),
        "failure_rate_per_1e6h": failure_rate.capacitor_rate("CQR", i["C_F"], stress, i["T_degC"], "non_er", "GF"),
    }


def dual_transistor(i: In) -> dict[str, Any]:
    halves = [failure_rate.bipolar_rate(i["P_rated_W"], i[f"S{k}"], i[f"T_J{k}_degC"], "linear", "JAN", "NS")
              for k in (1, 2)]
    return {"failure_rate_per_1e6h": sum(halves)}


DERATING: dict[str, Solution] = {
    "mil217f_n2_capacitor_example": capacitor_rate,
    "mil217f_n2_dual_transistor_example": dual_transistor,
    "nasa_975m_resistor_RNR_130C": lambda i: {
        "P_allowed_W": i["P_nominal_W"] * derating.derated_power_fraction(
            i["T_A_degC"], i["factor"], i["T_knee_degC"], i["T_zero_degC"])
    },
    "nasa_975m_resistor_RNC_voltage": lambda i: {
        "V_allowed_V": derating.allowed_resistor_voltage(i["R_ohm"], i["P_nominal_W"], i["V_spec_max_V"],
                                                         i["factor"])
    },
}
LEFT_OUT["nasa_975m_capacitor_CYR"] = "glass capacitor, a class that no adapter has"

SOLUTIONS = DISCHARGE | INRUSH | LEAKAGE | THERMAL | LIFE | DERATING


@pytest.mark.parametrize("subject, example", examples(
    "capacitor_discharge", "inrush_fuse", "y_capacitor_leakage", "thermal", "electrolytic_life",
    "derating_failure_rate"))
def test_worked_example(outside_check: OutsideChecks, subject: str, example: Mapping[str, Any]) -> None:
    run(outside_check, subject, example, SOLUTIONS, LEFT_OUT)
