"""Transformer, clamp and rectifier of a flyback cell, whatever its drive; see the drives for inductance and peak current."""

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.clamp import characteristic_resistance, clamp_power, clamp_resistance
from triage.physics.flyback import continuous_duty, diode_reverse, turns_ratio
from triage.physics.magnetics import turns_for_peak

FAMILIES = ("ringing_choke_zener", "ringing_choke_opto", "pwm_flyback_opto", "pwm_flyback_primary")

COPPER = 2.1e-8
"""Resistivity of copper at 70 degC [ohm m]; handbook value."""


def duty(design: Design) -> Draws:
    """Share of the period the switch is on at the lowest mains. [-]"""
    found: Draws = continuous_duty(design["bulk_low"], design["reflected_voltage"])
    return found


def ratio(design: Design) -> Draws:
    """Turns ratio that gives the usual reflected voltage. [-]"""
    found: Draws = turns_ratio(design["reflected_voltage"], design.label.output_voltage, design["output_drop"])
    return found


def leakage_inductance(design: Design) -> Draws:
    """Usual share of the primary inductance. [H]"""
    return design["leakage_share"] * design["primary_inductance"]


def core_area(design: Design) -> Draws:
    """Core that carries the power. [m2]"""
    return design["area_per_root_watt"] * np.sqrt(design["output_power"])


def primary_turns(design: Design) -> Draws:
    """Turns that keep the ferrite from saturating at the current limit. [-]"""
    found: Draws = turns_for_peak(design["primary_inductance"], design["limit_over_peak"] * design["primary_peak"],
                                  design["flux_density"], design["core_area"])
    return found


def secondary_turns(design: Design) -> Draws:
    """Primary turns over the turns ratio. [-]"""
    return design["primary_turns"] / design["ratio"]


def _winding_resistance(design: Design, turns: str, share: str) -> Draws:
    """Copper of a winding that fills its share of the window [ohm]."""
    area = design["core_area"]
    length = design[turns] * design["turn_length_per_root_area"] * np.sqrt(area)
    copper = design[share] * design["window_per_area"] * area / design[turns]
    return COPPER * length / copper


def primary_resistance(design: Design) -> Draws:
    """Copper of the primary turns in their share of the window. [ohm]"""
    return _winding_resistance(design, "primary_turns", "primary_copper_share")


def secondary_resistance(design: Design) -> Draws:
    """Copper of the secondary turns in their share of the window. [ohm]"""
    return _winding_resistance(design, "secondary_turns", "secondary_copper_share")


def feedback_resistance(design: Design) -> Draws:
    """One layer of thin wire. [ohm]"""
    return _winding_resistance(design, "feedback_turns", "small_winding_copper_share")


def auxiliary_resistance(design: Design) -> Draws:
    """One layer of thin wire. [ohm]"""
    return _winding_resistance(design, "auxiliary_turns", "small_winding_copper_share")


def core_resistance(design: Design) -> Draws:
    """Resistance across the primary that takes the core loss. [ohm]"""
    return design["bulk_nominal"] * design["reflected_voltage"] / (design["core_loss_share"] * design["input_power"])


def clamp_level(design: Design) -> Draws:
    """Voltage at which the clamp settles, above the reflected voltage. [V]"""
    return design["reflected_voltage"] * np.maximum(design["clamp_over_reflected"], 1.2)


def clamp_resistor(design: Design) -> Draws:
    """Takes the leakage energy at the usual clamp voltage. [ohm]"""
    heat = clamp_power(design["leakage_inductance"], design["primary_peak"], design["switching_frequency"],
                       design["reflected_voltage"], design["clamp_level"])
    found: Draws = clamp_resistance(heat, design["clamp_level"])
    return found


def clamp_power_rating(design: Design) -> Draws:
    """Twice the heat of the clamp. [W]"""
    return 2.0 * design["clamp_level"] ** 2 / design["clamp_resistor"]


def clamp_capacitance(design: Design) -> Draws:
    """Holds the clamp voltage over a period; a nanofarad is the usual least. [F]"""
    wanted = 1.0 / (design["clamp_ripple_share"] * design["clamp_resistor"] * design["switching_frequency"])
    return np.maximum(wanted, 6.8e-10)


def rectifier_voltage(design: Design) -> Draws:
    """Reverse voltage at the highest mains with room for ringing. [V]"""
    return 1.3 * diode_reverse(design.label.output_voltage, design["crest_high"], design["ratio"])


def rectifier_current(design: Design) -> float:
    """Three times the rated output current. [A]"""
    return 3.0 * design.label.output_current


def snubber_resistance(design: Design) -> Draws:
    """Characteristic resistance of the secondary leakage and the snubber capacitor. [ohm]"""
    leakage = design["leakage_inductance"] / design["ratio"] ** 2
    found: Draws = characteristic_resistance(leakage, design["snubber_capacitance"]) * design["snubber_damping"]
    return found


def secondary_peak(design: Design) -> Draws:
    """Peak current of the output rectifier. [A]"""
    return design["primary_peak"] * design["ratio"]


def first_capacitor_esr(design: Design) -> Draws:
    """Series resistance that keeps the ripple of the secondary peak current. [ohm]"""
    return design["output_ripple_share"] * design.label.output_voltage / design["secondary_peak"]


def first_capacitance(design: Design) -> Draws:
    """Size at which a low-impedance electrolytic has that series resistance. [F]"""
    return design["output_rc_time"] / design["first_capacitor_esr"]


def first_capacitor_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["first_capacitance"]


def second_capacitance(design: Design) -> Draws:
    """Half the first capacitor or less. [F]"""
    return design["second_capacitor_share"] * design["first_capacitance"]


def second_capacitor_esr(design: Design) -> Draws:
    """Series resistance of a low-impedance electrolytic of that size. [ohm]"""
    return design["output_rc_time"] / design["second_capacitance"]


def second_capacitor_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["second_capacitance"]


def output_ripple_rating(design: Design) -> float:
    """Ripple current of the first output capacitor: about the output current and a third. [A]"""
    return 1.3 * design.label.output_current


def second_ripple_rating(design: Design) -> float:
    """Little ripple passes the filter coil. [A]"""
    return 0.7 * design.label.output_current


def output_coil_resistance(design: Design) -> Draws:
    """Usual drop at the rated current. [ohm]"""
    return design["output_coil_drop"] / design.label.output_current
