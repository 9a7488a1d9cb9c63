"""Flyback cells with integrated switch and primary-side regulation: discontinuous, peak current set by the chip."""

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.capacitor_discharge import charging_resistance
from triage.physics.flyback import peak_from_duty

FAMILIES = ("pwm_flyback_primary",)
LIMIT_OVER_RATED = 1.25
"""Current at which the output goes over to constant current, over the rated one, losses of the leakage included [-]; common
practice, no source."""


def primary_peak(design: Design) -> Draws:
    """Peak current that carries the power at the lowest mains while the cell stays discontinuous, and the rated current. [A]

    The chip limits the mean output current to half the secondary peak times the share it conducts in.
    """
    duty = np.minimum(design["discontinuous_share"], 0.95) * design["duty"]
    found: Draws = peak_from_duty(design["input_power"], design["bulk_low"], duty)
    limited = 2.0 * LIMIT_OVER_RATED * design.label.output_current / (design["ratio"] * design["secondary_share"])
    return np.maximum(found, limited / design["limit_over_peak"])


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


def auxiliary_plateau(design: Design) -> Draws:
    """Auxiliary winding while the rectifier conducts: output, rectifier and cable drop over whole turns of both windings. [V]"""
    volts = design.label.output_voltage * (1.0 + design["cable_drop_share"] * ("output cable" in design.features))
    ratio = design["auxiliary_turns"] / design["secondary_turns"]
    whole = max(round(_middle(design["auxiliary_turns"])), 1) / max(round(_middle(design["secondary_turns"])), 1)
    return (volts + design["output_drop"]) * _centred(ratio, whole)


def upper_feedback_resistance(design: Design) -> Draws:
    """With the lower one it makes the plateau of the auxiliary winding the reference. [ohm]"""
    found = design["lower_feedback_resistance"] * (design["auxiliary_plateau"] / design["reference_voltage"] - 1.0)
    step = _middle(design["auxiliary_plateau"]) / _middle(design["reference_voltage"])
    return _centred(found, _middle(design["lower_feedback_resistance"]) * (step - 1.0))


def _middle(draws: Draws) -> float:
    return float(np.median(draws))


def _centred(draws: Draws, middle: float) -> Draws:
    """Draws of the same spread about what the other values shown demand, so that the estimated board regulates to its label."""
    return draws * (middle / _middle(draws))


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
