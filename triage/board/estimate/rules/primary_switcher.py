"""Flyback cells with integrated switch and primary-side regulation: discontinuous, peak current set by the chip."""

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.capacitor_discharge import charging_resistance
from triage.physics.flyback import peak_from_duty

FAMILIES = ("pwm_flyback_primary",)


def primary_peak(design: Design) -> Draws:
    """Peak current that carries the power at the lowest mains while the cell stays discontinuous. [A]"""
    duty = np.minimum(design["discontinuous_share"], 0.95) * design["duty"]
    found: Draws = peak_from_duty(design["input_power"], design["bulk_low"], duty)
    return found


def peak_current(design: Design) -> Draws:
    """Current limit of the chip, above the peak that is needed. [A]"""
    return design["limit_over_peak"] * design["primary_peak"]


def primary_inductance(design: Design) -> Draws:
    """Stores the energy of one period at the peak current. [H]"""
    return 2.0 * design["input_power"] / (design["primary_peak"] ** 2 * design["switching_frequency"])


def auxiliary_turns(design: Design) -> Draws:
    """Gives the usual supply of the chip at the rated output. [-]"""
    return design["secondary_turns"] * (design["auxiliary_voltage"] + 0.8) / (design.label.output_voltage + design["output_drop"])


def lower_feedback_resistance(design: Design) -> Draws:
    """Reference voltage over the usual divider current. [ohm]"""
    return design["reference_voltage"] / design["plateau_divider_current"]


def upper_feedback_resistance(design: Design) -> Draws:
    """With the lower one it makes the plateau of the auxiliary winding the reference. [ohm]"""
    return design["lower_feedback_resistance"] * ((design["auxiliary_voltage"] + 0.8) / design["reference_voltage"] - 1.0)


def startup_resistance(design: Design) -> Draws:
    """Charges the supply capacitor in the time a user waits. [ohm]"""
    wanted = np.minimum(design["start_voltage"], 0.5 * design["crest_low"])
    found: Draws = charging_resistance(design["start_time"], design["crest_low"], wanted, design["supply_capacitance"])
    return found


def supply_esr(design: Design) -> Draws:
    """Series resistance of a sound small electrolytic of that size. [ohm]"""
    return design["small_rc_time"] / design["supply_capacitance"]


def supply_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["supply_capacitance"]
