"""What every adapter has behind its rectifier or regulator."""

import numpy as np

from triage.board.estimate.design import Design, Draws

FAMILIES: tuple[str, ...] = ()


def output_voltage_rating(design: Design) -> float:
    """Next usual rating with a third to spare. [V]"""
    return 1.3 * design.label.output_voltage


def led_resistance(design: Design) -> Draws:
    """Drops what the indicator leaves of the output at its usual current. [ohm]"""
    return np.maximum(design.label.output_voltage - design["led_voltage"], 0.3) / design["led_current"]


def minimum_load_resistance(design: Design) -> Draws:
    """Takes the usual share of the rated current. [ohm]"""
    return design.label.output_voltage / (design["minimum_load_share"] * design.label.output_current)


def minimum_load_power(design: Design) -> Draws:
    """Twice the heat of the minimum load. [W]"""
    return 2.0 * design.label.output_voltage ** 2 / design["minimum_load_resistance"]


def output_coil_current(design: Design) -> float:
    """One and a half times the rated current. [A]"""
    return 1.5 * design.label.output_current
