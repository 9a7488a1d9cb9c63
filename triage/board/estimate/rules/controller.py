"""Fixed-frequency cells: continuous at the lowest mains, controller with lockout, shunt reference behind an optocoupler."""

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.capacitor_discharge import charging_resistance
from triage.physics.flyback import discontinuous_peak, edge_inductance
from triage.physics.shunt_reference import highest_led_resistance, led_current, resistor_for_output

FAMILIES = ("pwm_flyback_opto",)

PIN_SUPPLY, PIN_LOW = 5.0, 1.0
"""Supply of the feedback pin's pull-up and the voltage that stops the switching [V]; class of controllers, from memory."""
CATHODE_LEAST = 2.5
"""Least voltage across a shunt reference of the 431 class [V]; maker's sheets, from memory."""


def primary_inductance(design: Design) -> Draws:
    """Between the edge of continuous mode and twice that at the lowest mains. [H]"""
    edge = edge_inductance(design["bulk_low"], design["duty"], design["input_power"], design["switching_frequency"])
    found: Draws = edge * design["continuous_factor"]
    return found


def primary_peak(design: Design) -> Draws:
    """Peak current that carries the power at the lowest mains. [A]"""
    mean = design["input_power"] / (design["bulk_low"] * design["duty"])
    swing = design["bulk_low"] * design["duty"] / (design["primary_inductance"] * design["switching_frequency"])
    continuous = mean + 0.5 * swing
    rising = discontinuous_peak(design["input_power"], design["primary_inductance"], design["switching_frequency"])
    return np.where(design["continuous_factor"] >= 1.0, continuous, rising)


def primary_rms(design: Design) -> Draws:
    """Rms current of the switch at the lowest mains, a tenth for its slope. [A]"""
    return 1.1 * design["input_power"] / (design["bulk_low"] * np.sqrt(design["duty"]))


def auxiliary_turns(design: Design) -> Draws:
    """Gives the usual supply of the controller at the rated output. [-]"""
    return design["secondary_turns"] * (design["auxiliary_voltage"] + 0.8) / (design.label.output_voltage + design["output_drop"])


def startup_resistance(design: Design) -> Draws:
    """One of two in a row that charge the supply capacitor in the time a user waits. [ohm]"""
    wanted = np.minimum(design["start_voltage"], 0.5 * design["crest_low"])
    total = charging_resistance(design["start_time"], design["crest_low"], wanted, design["supply_capacitance"])
    found: Draws = 0.5 * total
    return found


def supply_esr(design: Design) -> Draws:
    """Series resistance of a sound small electrolytic of that size. [ohm]"""
    return design["small_rc_time"] / design["supply_capacitance"]


def supply_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["supply_capacitance"]


def sense_resistance(design: Design) -> Draws:
    """Threshold of the sense pin over the current limit. [ohm]"""
    return design["sense_voltage"] / (design["limit_over_peak"] * design["primary_peak"])


def sense_power(design: Design) -> Draws:
    """Three times the heat of the sense resistor. [W]"""
    return 3.0 * design["primary_rms"] ** 2 * design["sense_resistance"]


def sense_filter_capacitance(design: Design) -> Draws:
    """With its resistor it hides the turn-on spike. [F]"""
    return design["sense_filter_time"] / design["sense_filter_resistance"]


def on_resistance(design: Design) -> Draws:
    """Usual share of the power lost in conduction. [ohm]"""
    return design["conduction_loss_share"] * design["input_power"] / design["primary_rms"] ** 2


def switch_current_rating(design: Design) -> Draws:
    """Three times the peak current. [A]"""
    return 3.0 * design["primary_peak"]


def gate_source_capacitance(design: Design) -> Draws:
    """Input capacitance that goes with the on-resistance. [F]"""
    return design["gate_charge_product"] / design["on_resistance"]


def gate_drain_capacitance(design: Design) -> Draws:
    """Usual share of the input capacitance. [F]"""
    return design["gate_drain_share"] * design["gate_source_capacitance"]


def body_capacitance(design: Design) -> Draws:
    """Usual share of the input capacitance. [F]"""
    return design["body_capacitance_share"] * design["gate_source_capacitance"]


def breakdown_voltage(design: Design) -> Draws:
    """A little above the usual rating of 600 V. [V]"""
    return 600.0 * design["breakdown_over_rating"]


def lower_feedback_resistance(design: Design) -> Draws:
    """Reference voltage over the usual divider current. [ohm]"""
    return design["reference_voltage"] / design["divider_current"]


def upper_feedback_resistance(design: Design) -> Draws:
    """Sets the output of the label with the lower one. [ohm]"""
    wanted = np.maximum(design.label.output_voltage, 1.05 * design["reference_voltage"])
    found: Draws = resistor_for_output(wanted, design["reference_voltage"], design["lower_feedback_resistance"])
    return found


def coupler_led_resistance(design: Design) -> Draws:
    """A share of the highest that lets the loop pull the feedback pin down through an aged optocoupler. [ohm]"""
    led = led_current(PIN_SUPPLY, PIN_LOW, design["feedback_pull_up"], 0.5 * design["transfer_ratio"])
    headroom = max(design.label.output_voltage, CATHODE_LEAST + 1.6)
    highest = highest_led_resistance(headroom, design["coupler_led_voltage"], CATHODE_LEAST, led)
    found: Draws = design["coupler_resistance_share"] * highest
    return found


def reference_bias_resistance(design: Design) -> Draws:
    """LED voltage over the least current of the reference. [ohm]"""
    return design["coupler_led_voltage"] / design["reference_bias_current"]
