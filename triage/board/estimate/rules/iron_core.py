"""Iron-core supplies: winding for the crest that the output needs, core and copper of the handbooks."""

import math

import numpy as np

from triage.board.estimate.design import Design, Draws
from triage.physics.magnetics import sine_flux_density, turns_for_voltage
from triage.physics.rectifier_estimates import secondary_peak

FAMILIES = ("linear_regulated", "linear_unregulated")

DIODE_DROP = 0.9
"""Drop of one rectifier diode in its pulse [V]."""


def rectifier_drops(design: Design) -> float:
    """Junctions in a row: two of a bridge, one of a half wave or a tapped winding. [-]"""
    return 1.0 if design.features & {"half wave", "centre tap"} else 2.0


def winding_voltage(design: Design) -> Draws:
    """Rms voltage of the loaded winding, or half of a tapped one, that gives the crest behind the rectifier. [V]"""
    found: Draws = secondary_peak(design["reservoir_crest"], DIODE_DROP, design["rectifier_drops"]) / math.sqrt(2.0)
    return found


def winding_current(design: Design) -> Draws:
    """Rms current of the secondary behind a capacitor input. [A]"""
    return design["form_factor"] * design.label.output_current


def volt_amperes(design: Design) -> Draws:
    """Rated power of the transformer. [VA]"""
    return design["winding_voltage"] * design["winding_current"]


def regulation(design: Design) -> Draws:
    """Fall of the winding from no load to full load: the smaller the transformer, the more. [-]"""
    return design["iron_regulation_10va"] * (10.0 / design["volt_amperes"]) ** (1.0 / 3.0)


def open_voltage(design: Design) -> Draws:
    """Rms voltage of the winding without load. [V]"""
    return design["winding_voltage"] * (1.0 + design["regulation"])


def core_area(design: Design) -> Draws:
    """Core of the handbook rule. [m2]"""
    return design["iron_area_per_root_va"] * np.sqrt(design["volt_amperes"])


def primary_turns(design: Design) -> Draws:
    """Turns that keep the iron below its usual flux density. [-]"""
    one_turn = sine_flux_density(design.mains.nominal, design.mains.frequency, 1.0, design["core_area"])
    found: Draws = one_turn / design["iron_flux_density"]
    return found


def secondary_turns(design: Design) -> Draws:
    """Turns for the winding voltage without load. [-]"""
    found: Draws = turns_for_voltage(design["primary_turns"], design.mains.nominal, design["open_voltage"])
    return found


def secondary_resistance(design: Design) -> Draws:
    """Half of the usual regulation. [ohm]"""
    return 0.5 * design["regulation"] * design["winding_voltage"] / design["winding_current"]


def primary_resistance(design: Design) -> Draws:
    """The other half of the regulation, seen from the mains. [ohm]"""
    return design["secondary_resistance"] * (design["primary_turns"] / design["secondary_turns"]) ** 2


def half_turns(design: Design) -> Draws:
    """The second half of a tapped winding is wound like the first. [-]"""
    return design["secondary_turns"]


def half_resistance(design: Design) -> Draws:
    """The second half of a tapped winding is wound like the first. [ohm]"""
    return design["secondary_resistance"]


def primary_inductance(design: Design) -> Draws:
    """Takes the usual magnetising current. [H]"""
    rated = design["volt_amperes"] / design.mains.nominal
    return design.mains.nominal / (2.0 * math.pi * design.mains.frequency * design["magnetising_share"] * rated)


def leakage_inductance(design: Design) -> Draws:
    """Usual share of the rated impedance. [H]"""
    impedance = design.mains.nominal**2 / design["volt_amperes"]
    return design["iron_leakage_share"] * impedance / (2.0 * math.pi * design.mains.frequency)


def core_resistance(design: Design) -> Draws:
    """Takes the usual iron loss. [ohm]"""
    return design.mains.nominal**2 / (design["iron_loss_share"] * design["volt_amperes"])


def transformer_power(design: Design) -> Draws:
    """Copper and iron loss that the transformer stands. [W]"""
    return (design["regulation"] + design["iron_loss_share"]) * design["volt_amperes"]


def input_current(design: Design) -> Draws:
    """Rated current of the primary. [A]"""
    return design["volt_amperes"] / design.mains.low


def bridge_diode_voltage(design: Design) -> Draws:
    """Crest of the open winding at the highest mains, half as much again. [V]"""
    return 1.5 * math.sqrt(2.0) * design["open_voltage"] * design.mains.high / design.mains.nominal


def secondary_rectifier_voltage(design: Design) -> Draws:
    """Twice the crest of the open winding, or half winding, at the highest mains, and a fifth. [V]"""
    return 1.2 * 2.0 * math.sqrt(2.0) * design["open_voltage"] * design.mains.high / design.mains.nominal


def reservoir_voltage_rating(design: Design) -> Draws:
    """Next usual rating above the crest without load at the highest mains. [V]"""
    return math.sqrt(2.0) * design["open_voltage"] * design.mains.high / design.mains.nominal - design["rectifier_drops"] * 0.6
