"""Step-down converters on rectified mains: current limit and coil from the load, feedback divider from the output."""

import numpy as np

from triage.board.estimate.design import Design, Draws

FAMILIES = ("buck_nonisolated",)


def peak_current(design: Design) -> Draws:
    """Current limit of the chip, well above the load. [A]"""
    return np.maximum(design["buck_peak_over_load"] * design.label.output_current, 0.1)


def storage_inductance(design: Design) -> Draws:
    """Lets the current fall by the usual share of the peak in the time off. [H]"""
    return design.label.output_voltage * design["off_time"] / (design["buck_ripple_share"] * design["peak_current"])


def storage_resistance(design: Design) -> Draws:
    """Usual drop of the coil at the rated current. [ohm]"""
    return design["output_coil_drop"] / design.label.output_current


def lower_feedback_resistance(design: Design) -> Draws:
    """Reference voltage over the usual divider current. [ohm]"""
    return design["reference_voltage"] / design["plateau_divider_current"]


def upper_feedback_resistance(design: Design) -> Draws:
    """Sets the output of the label with the lower one. [ohm]"""
    wanted = np.maximum(design.label.output_voltage, 1.05 * design["reference_voltage"])
    return design["lower_feedback_resistance"] * (wanted / design["reference_voltage"] - 1.0)


def feedback_esr(design: Design) -> Draws:
    """Series resistance of a sound small electrolytic of that size. [ohm]"""
    return design["small_rc_time"] / design["feedback_capacitance"]


def feedback_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["feedback_capacitance"]


def first_capacitance(design: Design) -> Draws:
    """Usual size for the load: pulses come irregularly. [F]"""
    return design["buck_capacitance_per_ampere"] * design.label.output_current


def first_capacitor_esr(design: Design) -> Draws:
    """Series resistance of a low-impedance electrolytic of that size. [ohm]"""
    return design["output_rc_time"] / design["first_capacitance"]


def first_capacitor_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["first_capacitance"]


def output_ripple_rating(design: Design) -> Draws:
    """Half of the current limit flows in and out. [A]"""
    return 0.5 * design["peak_current"]
