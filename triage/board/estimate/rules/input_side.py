"""From the mains to the bulk capacitor."""

import math

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.capacitor_discharge import resistance_for_time
from triage.physics.fuse_inrush import inrush_resistance
from triage.physics.rectifier_estimates import charge_time

FAMILIES: tuple[str, ...] = ()


def crest_low(design: Design) -> float:
    """Crest of the lowest mains. [V]"""
    return math.sqrt(2.0) * design.mains.low


def crest_nominal(design: Design) -> float:
    """Crest of the nominal mains. [V]"""
    return math.sqrt(2.0) * design.mains.nominal


def crest_high(design: Design) -> float:
    """Crest of the highest mains. [V]"""
    return math.sqrt(2.0) * design.mains.high


def output_power(design: Design) -> float:
    """Volts times amperes of the label. [W]"""
    return design.label.output_voltage * design.label.output_current


def input_power(design: Design) -> Draws:
    """Power of the label over the usual efficiency. [W]"""
    return design["output_power"] / np.minimum(design["efficiency"], 0.95)


def input_current(design: Design) -> Draws:
    """Rms current at the lowest mains, drawn in the short pulses of a capacitor input. [A]"""
    return design["input_power"] / (design.mains.low * np.minimum(design["power_factor"], 1.0))


def sag(design: Design) -> Draws:
    """Share of the crest that the bulk voltage loses between two charges at the lowest mains. [-]"""
    return np.minimum(design["sag_wide_range" if design.is_wide_range else "sag_single_range"], 0.6)


def bulk_low(design: Design) -> Draws:
    """Mean bulk voltage at the lowest mains. [V]"""
    return design["crest_low"] * (1.0 - 0.5 * design["sag"])


def bulk_nominal(design: Design) -> Draws:
    """Mean bulk voltage at the nominal mains. [V]"""
    return design["crest_nominal"] * (1.0 - 0.4 * design["sag"])


def bulk_capacitance(design: Design) -> Draws:
    """Bulk capacitor that keeps the usual valley at the lowest mains. [F]

    The hand equation that designers use: discharge all the time but the charging, on the safe side by some percent of the valley.
    """
    crest = design["crest_low"]
    pulses = 1 if "half wave" in design.features else 2
    valley = crest * (1.0 - design["sag"])
    alone = 1.0 / (pulses * design.mains.frequency) - charge_time(valley, crest, design.mains.frequency)
    found: Draws = 2.0 * design["input_power"] * alone / (crest**2 - valley**2)
    return found


def bulk_esr(design: Design) -> Draws:
    """Series resistance of a sound bulk electrolytic of that size. [ohm]"""
    return design["bulk_rc_time"] / design["bulk_capacitance"]


def bulk_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["bulk_capacitance"]


def bulk_voltage_rating(design: Design) -> Draws:
    """Next usual rating above the crest of the highest mains. [V]"""
    return 1.03 * design["crest_high"]


def bulk_ripple_rating(design: Design) -> Draws:
    """Ripple rating that goes with the capacitance. [A]"""
    return design["bulk_ripple_per_farad"] * design["bulk_capacitance"]


def fusible_resistance(design: Design) -> Draws:
    """Holds the inrush at the crest of the highest mains to what the rectifier stands. [ohm]"""
    found: Draws = inrush_resistance(design["crest_high"], design["fusible_inrush"])
    return found


def fusible_power(design: Design) -> Draws:
    """Size that outlives the inrush. [W]"""
    return design["fusible_power_share"] * design["output_power"]


def fuse_current(design: Design) -> Draws:
    """Mains current with room for the inrush. [A]"""
    return np.maximum(design["fuse_oversize"] * design["input_current"], 0.3)


def fuse_resistance(design: Design) -> Draws:
    """Cold resistance of a slow fuse of that current. [ohm]"""
    return design["fuse_drop"] / design["fuse_current"]


def fuse_i2t(design: Design) -> Draws:
    """Melting integral of a slow fuse of that current. [A2s]"""
    return design["fuse_i2t_factor"] * design["fuse_current"] ** 2


def ntc_cold_resistance(design: Design) -> Draws:
    """Holds the inrush at the crest of the highest mains to what the bridge stands. [ohm]"""
    found: Draws = inrush_resistance(design["crest_high"], design["ntc_inrush"])
    return found


def ntc_hot_resistance(design: Design) -> Draws:
    """What is left of the thermistor's resistance when it is warm. [ohm]"""
    return design["ntc_hot_share"] * design["ntc_cold_resistance"]


def ntc_current(design: Design) -> Draws:
    """Current rating with room above the mains current. [A]"""
    return 3.0 * design["input_current"]


def x_discharge_resistance(design: Design) -> Draws:
    """Empties the X capacitor to 37 % within the time that standards leave. [ohm]"""
    found: Draws = resistance_for_time(design["x_discharge_time"], 1.0, math.exp(-1.0), design["x_capacitance"])
    return found


def mains_rectifier_current(design: Design) -> Draws:
    """Mean current at the lowest mains, three times over; the size of 1 A is the usual least. [A]"""
    return np.maximum(3.0 * design["input_power"] / design["bulk_low"], 1.0)


def bridge_diode_voltage(design: Design) -> float:
    """The usual rectifier for the mains stands surges of a kilovolt. [V]"""
    return 1000.0


def y_capacitance(design: Design) -> Draws:
    """Y capacitor that lets a part of the allowed touch current through. [F]"""
    return design["y_leakage"] / (2.0 * math.pi * design.mains.frequency * design.mains.high)
