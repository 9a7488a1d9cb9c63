"""Regulation by a zener between the base and an auxiliary rail that follows the output."""

from triage.board.estimate.design import Design, Draws

FAMILIES = ("ringing_choke_zener",)


def feedback_turns(design: Design) -> Draws:
    """Makes the auxiliary rail reach the zener voltage less one junction when the output is right. [-]"""
    rail = design["regulation_zener_voltage"] - 0.7
    return design["secondary_turns"] * (rail + 0.7) / (design.label.output_voltage + design["output_drop"])
