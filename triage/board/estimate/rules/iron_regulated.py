"""A three-terminal regulator behind the reservoir: the crest that keeps it fed, and what stands behind it."""

from triage.board.estimate.design import Design, Draws
from triage.physics.linear_regulator import input_needed

FAMILIES = ("linear_regulated",)


def reservoir_crest(design: Design) -> Draws:
    """Crest behind the rectifier at nominal mains that keeps the regulator fed in the valley at the lowest. [V]"""
    crest = input_needed(design.label.output_voltage, design["dropout_voltage"], design["reservoir_ripple"]) + design["headroom"]
    found: Draws = crest * design.mains.nominal / design.mains.low
    return found


def regulator_output_voltage(design: Design) -> Draws:
    """The output voltage of the label. [V]"""
    return design.label.output_voltage * design["regulator_tolerance"]


def first_capacitance(design: Design) -> Draws:
    """Usual size behind a regulator. [F]"""
    return design["regulator_output_capacitance"]


def first_capacitor_esr(design: Design) -> Draws:
    """Series resistance of a general-purpose electrolytic of that size. [ohm]"""
    return design["general_rc_time"] / design["first_capacitance"]


def first_capacitor_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["first_capacitance"]


def output_ripple_rating(design: Design) -> float:
    """Little ripple is left behind a regulator. [A]"""
    return 0.2
