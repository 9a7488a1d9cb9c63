"""Regulation of a self-oscillating cell through an optocoupler from a zener at the output."""

import numpy as np

from triage.board.estimate.design import Design, Draws

FAMILIES = ("ringing_choke_opto",)


def feedback_turns(design: Design) -> Draws:
    """Gives the usual voltage of the feedback winding during the flyback. [-]"""
    return design["secondary_turns"] * design["drive_winding_voltage"] / (design.label.output_voltage + design["output_drop"])


def output_zener_voltage(design: Design) -> Draws:
    """What the LED of the optocoupler leaves of the output voltage. [V]"""
    drop = design["coupler_series_resistance"] * design["reference_bias_current"]
    return np.maximum(design.label.output_voltage - design["coupler_led_voltage"] - drop, 1.8)


def reference_bias_resistance(design: Design) -> Draws:
    """LED voltage over the least current of the reference. [ohm]"""
    return design["coupler_led_voltage"] / design["reference_bias_current"]
