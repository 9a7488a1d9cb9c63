"""The capacitor behind a rectifier of the mains frequency."""

from triage.board.estimate.design import Design, Draws
from triage.physics.rectifier_estimates import capacitance_for_ripple

FAMILIES = ("linear_regulated", "linear_unregulated", "capacitor_dropper")


def reservoir_capacitance(design: Design) -> Draws:
    """Keeps the usual ripple at full load. [F]"""
    pulses = 1 if "half wave" in design.features else 2
    found: Draws = capacitance_for_ripple(design.label.output_current, design["reservoir_ripple"], design.mains.frequency, pulses)
    return found


def reservoir_esr(design: Design) -> Draws:
    """Series resistance of a general-purpose electrolytic of that size. [ohm]"""
    return design["reservoir_rc_time"] / design["reservoir_capacitance"]


def reservoir_leakage(design: Design) -> Draws:
    """Leakage that sheets allow an electrolytic of that size. [ohm]"""
    return design["leakage_time"] / design["reservoir_capacitance"]


def reservoir_ripple_rating(design: Design) -> float:
    """Ripple current of a reservoir: twice the output current and more. [A]"""
    return 2.5 * design.label.output_current
