"""Cords, cables and what stands across the mains before the rectifier."""

from triage.board.estimate.design import Design, Draws

FAMILIES: tuple[str, ...] = ()


def cable_resistance(design: Design) -> Draws:
    """One conductor of the output cable takes half of the usual drop at the rated current. [ohm]"""
    return 0.5 * design["cable_drop_share"] * design.label.output_voltage / design.label.output_current


def cable_current(design: Design) -> float:
    """Twice the rated current. [A]"""
    return 2.0 * design.label.output_current


def varistor_voltage(design: Design) -> Draws:
    """Next usual size whose continuous voltage is above the highest mains. [V]"""
    return design["varistor_over_mains"] * design.mains.high


def varistor_ac_voltage(design: Design) -> Draws:
    """Continuous voltage that goes with the varistor voltage. [V]"""
    return design["varistor_voltage"] / 1.57


def common_mode_leakage(design: Design) -> Draws:
    """Usual share of the inductance. [H]"""
    return design["common_mode_leakage_share"] * design["common_mode_inductance"]


def common_mode_current(design: Design) -> Draws:
    """Twice the mains current. [A]"""
    return 2.0 * design["input_current"]
