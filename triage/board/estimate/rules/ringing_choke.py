"""Self-oscillating cells: inductance for the usual frequency, base drive, auxiliary rail."""

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.flyback import peak_from_duty
from triage.physics.ringing_choke import inductance_for_frequency, peak_from_sense, stroke_time

FAMILIES = ("ringing_choke_zener", "ringing_choke_opto")

BASE_EMITTER = 0.7
"""Base-emitter voltage of a conducting switch [V]."""


def primary_inductance(design: Design) -> Draws:
    """Inductance that gives the usual frequency at full load and nominal mains. [H]"""
    found: Draws = inductance_for_frequency(design["input_power"], design["switching_frequency"], design["bulk_nominal"],
                                            design["reflected_voltage"])
    return found


def primary_peak(design: Design) -> Draws:
    """Peak current that carries the power at the lowest mains. [A]"""
    found: Draws = peak_from_duty(design["input_power"], design["bulk_low"], design["duty"])
    return found


def startup_resistance(design: Design) -> Draws:
    """Gives the usual first base current at the lowest mains. [ohm]"""
    return design["crest_low"] / design["startup_current"]


def drive_voltage(design: Design) -> Draws:
    """Feedback winding while the switch is on, at nominal mains. [V]"""
    return design["bulk_nominal"] * design["feedback_turns"] / design["primary_turns"]


def base_drive_resistance(design: Design) -> Draws:
    """Base current of the peak over the gain, overdriven as usual. [ohm]"""
    base = design["overdrive"] * design["primary_peak"] / design["switch_gain"]
    return np.maximum(design["drive_voltage"] - BASE_EMITTER, 1.0) / base


def base_drive_capacitance(design: Design) -> Draws:
    """With the base drive resistor it outlasts the on-time. [F]"""
    stroke = stroke_time(design["primary_inductance"], design["primary_peak"], design["bulk_nominal"])
    return design["drive_time_over_stroke"] * stroke / design["base_drive_resistance"]


def auxiliary_rail_esr(design: Design) -> Draws:
    """Series resistance of a sound small electrolytic of that size. [ohm]"""
    return design["small_rc_time"] / design["auxiliary_rail_capacitance"]


def auxiliary_rail_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["auxiliary_rail_capacitance"]


def sense_resistance(design: Design) -> Draws:
    """Turns the small transistor on at the current limit. [ohm]"""
    found: Draws = peak_from_sense(design["sense_threshold"], design["limit_over_peak"] * design["primary_peak"])
    return found
