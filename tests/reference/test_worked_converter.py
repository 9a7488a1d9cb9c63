"""Worked examples of flyback and ringing choke converters, clamps, snubbers and their magnetics."""

import math
from collections.abc import Mapping
from typing import Any

import pytest

from tests.reference.conftest import OutsideChecks
from tests.reference.worked import Solution, examples, load, run
from triage.physics import capacitor_discharge, clamp, flyback, magnetics, ringing_choke

LEFT_OUT = {
    "cirrus_an375_leakage": "only the inverse of a frequency was printed",
    "rashid_ex17_4_snubber_peak.dv_dt_max_V_per_s": "largest slope within the ring, no quantity of ours",
    "infineon_ice2hs01g_choke.I_in_rms_A": "input power over voltage, no equation of ours",
    "infineon_ice2hs01g_choke.I_peak_A": "crest of a sine, no equation of ours",
    "infineon_ice2hs01g_choke.I_ocp_A": "20 % margin of the note, no equation of ours",
}

In = Mapping[str, float]


def rashid_13_1(i: In) -> dict[str, Any]:
    ratio = 1.0 / i["n_s_over_n_p"]
    out = i["V_out_V"] / i["R_load_ohm"]
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], ratio)
    cell = flyback.input_for_duty(reflected, i["duty"])
    source = cell + i["V_switch_on_V"]
    # the book charges the diode drop times the output current to the input of the cell
    power = out * (i["V_out_V"] + i["V_diode_V"])
    average = power / cell
    peak = flyback.peak_from_duty(power, cell, i["duty"])
    return {
        "I_out_A": out,
        "P_out_W": out * i["V_out_V"],
        "V_sec_V": reflected / ratio,
        "V_pri_V": cell,
        "V_in_V": source,
        "I_in_avg_A": average,
        "P_in_W": source * average,
        "efficiency_percent": 100.0 * out * i["V_out_V"] / (source * average),
        "I_switch_peak_A": peak,
        "I_switch_rms_A": flyback.ramp_rms(peak, 0.0, i["duty"]),
        "V_switch_off_V": flyback.switch_plateau(source, reflected),
        "L_pri_H": flyback.inductance_for_ramp(source, i["duty"] / i["f_sw_Hz"], peak),
    }


def rashid_2_9(i: In) -> dict[str, Any]:
    ratio = i["N1"] / i["N2"]
    peak = flyback.ramp(i["V_in_V"], i["L_m_H"], i["t_on_s"])
    reflected = flyback.reflected_voltage(i["V_in_V"], 0.0, ratio)
    return {
        "turns_ratio": 1.0 / ratio,
        "V_diode_reverse_V": flyback.diode_reverse(i["V_in_V"], i["V_in_V"], ratio),
        "I_pri_peak_A": peak,
        "I_sec_peak_A": magnetics.transformed_current(peak, i["N1"], i["N2"]),
        "t_diode_s": ringing_choke.stroke_time(i["L_m_H"], peak, reflected),
        "W_J": flyback.stored_energy(i["L_m_H"], peak),
    }


def hart_ccm(i: In) -> dict[str, Any]:
    p = flyback.operating_point(i["V_in_V"], i["V_out_V"], i["V_out_V"] / i["R_load_ohm"], i["n_p_over_n_s"],
                                i["L_m_H"], i["f_sw_Hz"], diode_drop=0.0)
    mean = flyback.magnetising_average(i["V_out_V"] / i["R_load_ohm"], p.duty, i["n_p_over_n_s"])
    return {"duty": p.duty, "I_Lm_avg_A": mean, "I_Lm_max_A": p.primary_peak, "I_Lm_min_A": p.primary_start}


def erickson(i: In) -> dict[str, Any]:
    ratio = 1.0 / i["n_s_over_n_p"]
    mean = flyback.magnetising_average(i["I_out_A"], i["duty"], ratio)
    half_swing = 0.2 * mean
    peak, start = mean + half_swing, mean - half_swing
    first = flyback.ramp_rms(peak, start, i["duty"])
    second = ratio * flyback.ramp_rms(peak, start, 1.0 - i["duty"])
    return {
        "I_M_A": mean,
        "delta_i_M_A": half_swing,
        "I_M_max_A": peak,
        "L_M_H": flyback.inductance_for_ramp(i["V_in_V"], i["duty"] / i["f_sw_Hz"], 2.0 * half_swing),
        "I_pri_rms_A": first,
        "I_sec_rms_A": second,
        "I_total_ref_pri_A": first + magnetics.transformed_current(second, 1.0, ratio),
    }


def lt3512_turns(i: In) -> dict[str, Any]:
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"])
    duty = flyback.continuous_duty(i["V_in_min_V"], reflected)
    power = i["efficiency"] * flyback.power_from_peak(i["I_peak_A"], i["V_in_min_V"], duty)
    return {
        "n_max": flyback.highest_turns_ratio(i["V_sw_rating_V"], i["V_in_max_V"], i["V_leak_margin_V"],
                                             i["V_out_V"], i["V_diode_V"]),
        "duty": duty,
        "P_out_W": power,
        "I_out_A": power / i["V_out_V"],
    }


def lt3512_peak(i: In) -> dict[str, Any]:
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"])
    power = i["V_out_V"] * i["I_out_A"] / i["efficiency"]
    nominal = flyback.continuous_duty(i["V_in_nom_V"], reflected)
    low = flyback.continuous_duty(i["V_in_min_V"], reflected)
    peak = flyback.peak_from_duty(power, i["V_in_min_V"], low)
    return {
        "duty_nom": nominal,
        "I_pri_peak_nom_A": flyback.peak_from_duty(power, i["V_in_nom_V"], nominal),
        "duty_min_line": low,
        "I_pri_peak_min_line_A": peak,
        "I_sec_rms_A": i["n_p_over_n_s"] * flyback.ramp_rms(peak, 0.0, 1.0 - low),
        "V_diode_reverse_V": flyback.diode_reverse(i["V_out_V"], i["V_in_max_V"], i["n_p_over_n_s"]),
    }


def lt3573_table_6(i: In) -> dict[str, Any]:
    out: dict[str, Any] = {}
    for n in (1, 2, 3, 4):
        reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], float(n))
        duty = flyback.continuous_duty(i["V_in_min_V"], reflected)
        out[f"V_sw_n{n}_V"] = flyback.switch_plateau(i["V_in_max_V"], reflected)
        out[f"I_out_max_n{n}_A"] = flyback.edge_output_current(i["I_peak_A"], duty, float(n), 0.8)
        out[f"duty_low_n{n}"] = flyback.continuous_duty(i["V_in_max_V"], reflected)
        out[f"duty_high_n{n}"] = duty
    return out


def lt3757(i: In) -> dict[str, Any]:
    away = 1.0 - i["duty"] - i["D3"]
    volts, drawn = i["V_out_V"] + i["V_diode_V"], i["P_out_W"] / i["efficiency"]
    out = i["P_out_W"] / i["V_out_V"]
    peak = flyback.peak_from_duty(drawn, i["V_in_min_V"], i["duty"])
    # the secondary half of the period is the same triangle seen from the output
    second = flyback.peak_from_duty(out * volts, volts, away)
    primary = flyback.edge_inductance(i["V_in_min_V"], i["duty"], drawn, i["f_sw_Hz"])
    secondary = flyback.edge_inductance(volts, away, out * volts, i["f_sw_Hz"])
    return {
        "I_pri_peak_A": peak,
        "I_pri_rms_A": flyback.ramp_rms(peak, 0.0, i["duty"]),
        "I_sec_peak_A": second,
        "I_sec_rms_A": flyback.ramp_rms(second, 0.0, away),
        "L_pri_H": primary,
        "L_sec_H": secondary,
        "n_p_over_n_s": math.sqrt(primary / secondary),
    }


def an23_continuous(i: In) -> dict[str, Any]:
    start = i["I_pri_peak_A"] * (1.0 - i["K_RP"])
    return {
        "I_pri_rms_A": flyback.ramp_rms(i["I_pri_peak_A"], start, i["duty"]),
        "I_sec_rms_A": i["n_p_over_n_s"] * flyback.ramp_rms(i["I_pri_peak_A"], start, 1.0 - i["duty"]),
    }


def an23_gaps(i: In) -> dict[str, Any]:
    away = (1.0 - i["duty"]) / i["K_DP"]
    return {
        "I_pri_rms_A": flyback.ramp_rms(i["I_pri_peak_A"], 0.0, i["duty"]),
        "I_sec_rms_A": i["n_p_over_n_s"] * flyback.ramp_rms(i["I_pri_peak_A"], 0.0, away),
    }


def adapter(i: In) -> dict[str, Any]:
    p = flyback.operating_point(i["V_in_V"], i["V_out_V"], i["I_out_A"], i["n_p_over_n_s"], i["L_pri_H"],
                                i["f_sw_Hz"], i["V_diode_V"])
    ratio = i["n_p_over_n_s"]
    return {
        "duty": p.duty,
        "duty_demag": p.demagnetising,
        "I_pri_peak_A": p.primary_peak,
        "I_pri_min_A": p.primary_start,
        "I_pri_avg_A": p.primary_average,
        "I_pri_rms_A": p.primary_rms,
        "I_sec_peak_A": p.secondary_peak,
        "I_sec_avg_A": 0.5 * ratio * (p.primary_peak + p.primary_start) * p.demagnetising,
        "I_sec_rms_A": p.secondary_rms,
        "I_cout_rms_A": p.capacitor_rms,
        "V_reflected_V": p.reflected,
        "V_switch_plateau_V": p.switch_plateau,
        "V_ripple_capacitive_pp_V": flyback.capacitive_ripple(p, i["I_out_A"], i["C_out_F"], i["f_sw_Hz"]),
        "V_ripple_ESR_pp_V": flyback.esr_ripple(p, i["ESR_out_ohm"]),
        "V_switch_plateau_max_V": flyback.switch_plateau(i["V_in_max_V"], p.reflected),
        "V_diode_reverse_max_V": flyback.diode_reverse(i["V_out_V"], i["V_in_max_V"], ratio),
    }


def edge(i: In) -> dict[str, Any]:
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"])
    duty = flyback.continuous_duty(i["V_in_V"], reflected)
    power = i["I_out_A"] * (i["V_out_V"] + i["V_diode_V"])
    return {
        "L_boundary_H": flyback.edge_inductance(i["V_in_V"], duty, power, i["f_sw_Hz"]),
        "duty": duty,
        "I_pri_peak_A": flyback.peak_from_duty(power, i["V_in_V"], duty),
    }


def franco_boost(i: In) -> dict[str, Any]:
    # the inductor of a boost converter carries its input current all the time: a ramp over the whole period
    duty = flyback.continuous_duty(i["V_in_V"], i["V_out_V"] - i["V_in_V"])
    mean = i["V_out_V"] * i["I_out_A"] / i["V_in_V"]
    swing = i["ripple_fraction"] * mean
    return {
        "L_H": flyback.inductance_for_ramp(i["V_in_V"], duty / i["f_sw_Hz"], swing),
        "I_peak_A": mean + swing / 2.0,
        "I_rms_A": flyback.ramp_rms(mean + swing / 2.0, mean - swing / 2.0, 1.0),
    }


FLYBACK: dict[str, Solution] = {
    "rashid_ex13_1_flyback": rashid_13_1,
    "rashid_ex2_9_energy_return": rashid_2_9,
    "hart_flyback_ccm": hart_ccm,
    "hart_flyback_dcm": lambda i: {
        "V_out_V": flyback.discontinuous_output(i["V_in_V"], i["duty"], i["R_load_ohm"], i["L_m_H"], i["f_sw_Hz"])
    },
    "erickson_flyback_transformer": erickson,
    "lt3512_turns_and_power": lt3512_turns,
    "lt3512_peak_rms_reverse": lt3512_peak,
    "lt3573_table6": lt3573_table_6,
    "lt3757_dcm_relations": lt3757,
    "pi_an23_rms_ccm": an23_continuous,
    "pi_an23_rms_dcm": an23_gaps,
    "pi_an16_output_ripple_current": lambda i: {
        "I_cout_rms_A": flyback.capacitor_ripple_current(i["I_sec_rms_A"], i["I_out_A"])
    },
    "derived_flyback_dcm_5V1A": adapter,
    "derived_flyback_dcm_12V1A": adapter,
    "derived_flyback_ccm_19V3A42": adapter,
    "derived_flyback_boundary_L": edge,
    "franco_ex11_18_boost_inductor": franco_boost,
}


def rcd(i: In) -> dict[str, Any]:
    cycle = clamp.clamp_cycle(i["L_leak_H"], i["I_pri_peak_A"], i["f_sw_Hz"], i["V_reflected_V"],
                              i["R_clamp_ohm"], i["C_clamp_F"])
    return {
        "V_clamp_valley_V": cycle.valley,
        "V_clamp_peak_V": cycle.peak,
        "V_clamp_rms_V": cycle.rms,
        "P_clamp_W": cycle.power,
        "t_leak_reset_s": cycle.reset_time,
        "V_clamp_ripple_V": cycle.peak - cycle.valley,
        "V_switch_peak_V": flyback.switch_plateau(i["V_in_max_V"], cycle.peak),
    }


def lt3798(i: In) -> dict[str, Any]:
    c = clamp.parasitic_capacitance(i["t_ring_s"], i["t_snubbed_s"], i["C_snubber_F"])
    inductance = clamp.parasitic_inductance(i["t_ring_s"], c)
    return {
        "C_par_F": c,
        "L_par_H": inductance,
        "R_snubber_ohm": clamp.characteristic_resistance(inductance, c),
        "t_check_s": 1.0 / clamp.ring_frequency(inductance, c + i["C_snubber_F"]),
    }


def gupta_2_37(i: In) -> dict[str, Any]:
    c = clamp.snubber_capacitance_for_slope(math.sqrt(2.0) * i["V_rms_V"], i["dv_dt_V_per_s"], i["L_H"])
    return {"C_F": c, "R_ohm": clamp.characteristic_resistance(i["L_H"], c, i["damping"])}


def gupta_2_38(i: In) -> dict[str, Any]:
    r = i["V_V"] / i["I_discharge_A"]
    c = clamp.snubber_capacitance_behind_resistance(i["V_V"], i["dv_dt_V_per_s"], i["R_load_ohm"], r)
    return {"R_ohm": r, "C_F": c, "P_snubber_W": clamp.snubber_power(c, i["V_V"], i["f_Hz"], 1)}


def rashid_17_4(i: In) -> dict[str, Any]:
    r = clamp.snubbed_step(i["V_V"], i["L_H"], i["R_ohm"], i["C_F"])
    return {
        "alpha_per_s": r.decay,
        "omega0_rad_per_s": 2.0 * math.pi * clamp.ring_frequency(i["L_H"], i["C_F"]),
        "damping_ratio": r.damping,
        "omega_d_rad_per_s": r.speed,
        "t_peak_s": r.peak_time,
        "V_peak_V": r.peak,
        "dv_dt_initial_V_per_s": r.first_slope,
    }


CLAMP: dict[str, Solution] = {
    "derived_rcd_clamp_65kHz_10W": rcd,
    "derived_rcd_clamp_100kHz_65W": rcd,
    "lt3798_ring_period_snubber": lt3798,
    "gupta_singhal_ex2_37_snubber": gupta_2_37,
    "gupta_singhal_ex2_38_snubber_loss": gupta_2_38,
    "rashid_ex17_4_snubber_peak": rashid_17_4,
    "rashid_ex2_4_rc_discharge": lambda i: {
        "I_peak_A": i["V0_V"] / i["R_ohm"],
        "W_J": capacitor_discharge.stored_energy(i["C_F"], i["V0_V"]),
        "V_at_t_V": capacitor_discharge.voltage_after(i["t_s"], i["V0_V"], i["R_ohm"], i["C_F"]),
    },
}



def lt3512_frequency(i: In) -> dict[str, Any]:
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"])
    return {"f_sw_Hz": ringing_choke.frequency(i["L_pri_H"], i["I_pri_peak_A"], i["V_in_V"], reflected)}


def lt3573_table_7(i: In) -> dict[str, Any]:
    reflected = flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"])
    out: dict[str, Any] = {}
    for name, volts in (("Vinmin", i["V_in_min_V"]), ("Vinmax", i["V_in_max_V"])):
        share = flyback.edge_output_current(1.0, flyback.continuous_duty(volts, reflected), i["n_p_over_n_s"], 0.8)
        for micro in (25, 50, 100):
            out[f"f_L{micro}uH_{name}_Hz"] = ringing_choke.frequency(
                micro * 1e-6, i["I_out_A"] / share, volts, reflected
            )
    return out


def fixed_peak(i: In) -> dict[str, Any]:
    length, peak = i["L_pri_H"], i["I_pri_peak_A"]
    on = ringing_choke.stroke_time(length, peak, i["V_in_V"])
    delay = ringing_choke.valley_delay(length, i["C_drain_F"])
    rate = ringing_choke.frequency(length, peak, i["V_in_V"], i["V_reflected_V"], delay)
    return {
        "t_on_s": on,
        "t_off_s": ringing_choke.stroke_time(length, peak, i["V_reflected_V"]),
        "t_valley_delay_s": delay,
        "f_sw_Hz": rate,
        "P_transferred_W": ringing_choke.power_carried(length, peak, rate),
        "duty": on * rate,
        "V_drain_valley_V": ringing_choke.valley_voltage(i["V_in_V"], i["V_reflected_V"]),
    }


def required_peak(i: In) -> dict[str, Any]:
    delay = ringing_choke.valley_delay(i["L_pri_H"], i["C_drain_F"])
    peak = ringing_choke.peak_for_power(i["P_in_W"], i["L_pri_H"], i["V_in_V"], i["V_reflected_V"], delay)
    solved = fixed_peak({**i, "I_pri_peak_A": peak})
    return {"I_pri_peak_A": peak, **{key: solved[key] for key in ("t_on_s", "t_off_s", "f_sw_Hz")}}


def base_drive(i: In) -> dict[str, Any]:
    base = ringing_choke.drive_current(i["V_in_V"], i["N_fb_over_N_p"], i["V_BE_V"], i["R_base_ohm"])
    peak = ringing_choke.peak_from_gain(base, i["h_FE"])
    return {
        "I_base_A": base,
        "I_collector_peak_A": peak,
        "t_on_s": ringing_choke.stroke_time(i["L_pri_H"], peak, i["V_in_V"]),
    }


def emitter_sense(i: In) -> dict[str, Any]:
    peak = ringing_choke.peak_from_sense(i["V_BE_sense_V"], i["R_sense_ohm"])
    return {"I_pri_peak_A": peak, "P_rsense_W": ringing_choke.sense_power(peak, i["duty"], i["R_sense_ohm"])}


RINGING_CHOKE: dict[str, Solution] = {
    "lt3512_boundary_frequency": lt3512_frequency,
    "lt3573_table7": lt3573_table_7,
    "derived_rcc_fixed_peak_low_line": fixed_peak,
    "derived_rcc_fixed_peak_high_line": fixed_peak,
    "derived_rcc_required_peak": required_peak,
    "derived_rcc_base_drive_limit": base_drive,
    "derived_rcc_emitter_sense": emitter_sense,
}


def flux_ee16(i: In) -> dict[str, Any]:
    on = ringing_choke.stroke_time(i["L_pri_H"], i["I_pri_peak_A"], i["V_in_V"])
    turns = magnetics.turns_for_flux_swing(i["V_in_V"] * on, 1.0, i["A_e_m2"])
    return {
        "B_peak_T": magnetics.storage_flux_density(i["L_pri_H"], i["I_pri_peak_A"], i["N_pri"], i["A_e_m2"]),
        "B_from_volt_seconds_T": turns / i["N_pri"],
        "gap_m": magnetics.gap_for_inductance(i["N_pri"], i["A_e_m2"], i["L_pri_H"]),
    }


def stepdown(i: In) -> dict[str, Any]:
    turns = magnetics.turns_for_voltage(i["N_pri"], i["V_pri_V"], i["V_sec_V"])
    current = magnetics.transformed_current(i["I_sec_A"], turns, i["N_pri"])
    return {"N_sec": turns, "I_pri_A": current, "P_W": current * i["V_pri_V"]}


def erickson_turns(i: In) -> dict[str, Any]:
    turns = magnetics.turns_for_peak(i["L_M_H"], i["I_M_max_A"], i["B_max_T"], i["A_c_m2"])
    return {
        "N_pri": turns,
        "N_sec": magnetics.turns_for_voltage(turns, 1.0, i["n_s_over_n_p"]),
        "gap_m": magnetics.gap_for_energy(i["L_M_H"], i["I_M_max_A"], i["B_max_T"], i["A_c_m2"]),
    }


MAGNETICS: dict[str, Solution] = {
    "kulshreshtha_ex13_2_mains_flux": lambda i: {
        "B_peak_T": magnetics.sine_flux_density(i["V_rms_V"], i["f_Hz"], i["N1"], i["A_core_m2"]),
        "V_sec_V": magnetics.transformed_voltage(i["V_rms_V"], i["N1"], i["N2"]),
        "I_pri_A": magnetics.transformed_current(i["I_sec_A"], i["N2"], i["N1"]),
    },
    "openstax_stepdown_transformer": stepdown,
    "infineon_ice2hs01g_min_turns": lambda i: {
        "N_pri_min": magnetics.turns_for_flux_swing(
            flyback.reflected_voltage(i["V_out_V"], i["V_diode_V"], i["n_p_over_n_s"]) / (2.0 * i["f_min_Hz"]),
            i["delta_B_T"], i["A_e_m2"])
    },
    "infineon_ice2hs01g_choke": lambda i: {
        "N_choke": magnetics.turns_for_peak(i["L_H"], i["I_ocp_printed_A"], i["B_max_T"], i["A_e_min_m2"])
    },
    "erickson_flyback_turns": erickson_turns,
    "derived_flux_EE16_dcm": flux_ee16,
}

SOLUTIONS = FLYBACK | CLAMP | RINGING_CHOKE | MAGNETICS


@pytest.mark.parametrize(
    "subject, example", examples("flyback", "leakage_clamp_snubber", "ringing_choke", "magnetics")
)
def test_worked_example(outside_check: OutsideChecks, subject: str, example: Mapping[str, Any]) -> None:
    run(outside_check, subject, example, SOLUTIONS, LEFT_OUT)


@pytest.mark.parametrize("example", [e for e in load("leakage_clamp_snubber") if "rcd_clamp" in e["id"]],
                         ids=lambda e: e["id"])
def test_settled_clamp_formula_gives_the_rms_of_the_cycles(outside_check: OutsideChecks,
                                                           example: Mapping[str, Any]) -> None:
    """Bound 0.1 %: the agreement that the author of the independent solution found."""
    i = example["inputs"]
    drive = (i["L_leak_H"], i["I_pri_peak_A"], i["f_sw_Hz"], i["V_reflected_V"])
    settled = clamp.clamp_voltage(*drive, i["R_clamp_ohm"])
    results = example["results"]
    outside_check("clamp formula", example["source"], settled, results["V_clamp_rms_V"], 0.001)
    outside_check("clamp formula", example["source"], clamp.clamp_power(*drive, settled), results["P_clamp_W"], 0.001)
    assert clamp.clamp_resistance(clamp.clamp_power(*drive, settled), settled) == pytest.approx(i["R_clamp_ohm"])
