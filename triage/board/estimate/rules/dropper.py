"""Capacitor droppers: the charge of one period carries the load, a zener takes what it leaves."""

import math

from triage.board.estimate.design import Design, Draws
from triage.physics.capacitor_discharge import resistance_for_time
from triage.physics.capacitor_dropper import dropper_capacitance as capacitance_for_current
from triage.physics.capacitor_dropper import dropper_current, dropper_rms_current

FAMILIES = ("capacitor_dropper",)

RECTIFIER_DROP = 0.7
"""Drop of the rectifier [V]."""


def shunt_zener_voltage(design: Design) -> float:
    """Output voltage of the label and the drop of the rectifier. [V]"""
    return design.label.output_voltage + RECTIFIER_DROP


def dropper_capacitance(design: Design) -> Draws:
    """Passes the rated current and the usual surplus at the lowest mains, one charge a period. [F]"""
    wanted = design["dropper_surplus"] * design.label.output_current
    found: Draws = capacitance_for_current(wanted, design.mains.low, design.mains.frequency, design["shunt_zener_voltage"])
    return found


def dropper_bleeder_resistance(design: Design) -> Draws:
    """Empties the dropper capacitor to 37 % within the time that standards leave. [ohm]"""
    found: Draws = resistance_for_time(design["x_discharge_time"], 1.0, math.exp(-1.0), design["dropper_capacitance"])
    return found


def fusible_power(design: Design) -> Draws:
    """Three times the heat of the capacitor's current. [W]"""
    flowing = dropper_rms_current(design["dropper_capacitance"], design.mains.high, design.mains.frequency)
    return 3.0 * flowing**2 * design["fusible_resistance"]


def input_current(design: Design) -> Draws:
    """Current of the capacitor at the highest mains. [A]"""
    found: Draws = dropper_rms_current(design["dropper_capacitance"], design.mains.high, design.mains.frequency)
    return found


def shunt_zener_power(design: Design) -> Draws:
    """Twice the heat of the zener at the highest mains without load. [W]"""
    level = design["shunt_zener_voltage"]
    return 2.0 * level * dropper_current(design["dropper_capacitance"], design.mains.high, design.mains.frequency, level)


def reservoir_ripple(design: Design) -> Draws:
    """Usual share of the rated output, peak to peak. [V]"""
    return design["unregulated_ripple_share"] * design.label.output_voltage


def reservoir_voltage_rating(design: Design) -> float:
    """Next usual rating a third above the zener. [V]"""
    return 1.33 * (design.label.output_voltage + RECTIFIER_DROP)
