"""How hot a part gets: junctions, hot spots of resistors, windings.

One-dimensional heat flow: temperature rises by power times thermal resistance. The small table beside this
module stands in where no data sheet is at hand. Steady state, except the pulse formula. Temperatures in degC.
"""

import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from triage.physics.values import Values

_TABLE: dict[str, Any] = tomllib.loads(Path(__file__).with_name("thermal.toml").read_text("utf-8"))


@dataclass(frozen=True, slots=True)
class PackageResistance:
    """Thermal resistances of a package."""

    package: str
    junction_case: float
    """[K/W]"""
    junction_ambient: float
    """On a small board in still air [K/W]."""
    source: str
    confidence: str
    """``data sheet`` or ``from memory``, of the figure to ambient."""


PACKAGES: dict[str, PackageResistance] = {
    name: PackageResistance(name, row["junction_case"], row["junction_ambient"],
                            f"to case: {row['case_source']}; to ambient: {row['ambient_source']}",
                            row["confidence"])
    for name, row in _TABLE["package"].items()}
"""Package name -> its thermal resistances."""

RESISTOR_RISE: dict[str, float] = dict(_TABLE["resistor_rise_K"])
"""Resistor technology -> rise of its hottest spot at rated power [K]."""


def package_resistance(package: str = "", kind: str = "") -> PackageResistance | None:
    """Thermal resistances of a package, or of the one that a kind of part most likely has.

    package [key]: package name; empty or unknown: taken from the kind.
    kind [key]: part kind of the board.

    Returns [key]: the record, or None where neither is known.

    >>> package_resistance("TO-220").junction_ambient
    62.5
    >>> package_resistance(kind="zener").package
    'DO-35'
    """
    return PACKAGES.get(package) or PACKAGES.get(_TABLE["kind"].get(kind, ""))


def temperature_after(ambient: Values, power: Values, *resistances: Values) -> Values:
    """Temperature at the hot end of a chain of thermal resistances.

    ambient [degC]: temperature of the cold end: air, case or heat sink.
    power [W]: heat that flows.
    resistances [K/W]: one for each link.

    Returns [degC]: ambient + P sum(Rth).
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 14.4.

    >>> temperature_after(25.0, 1.0, 62.5)
    87.5
    """
    return ambient + power * sum(resistances)


def allowed_power(highest: Values, ambient: Values, *resistances: Values) -> Values:
    """Power that brings the hot end of a chain of thermal resistances to its limit.

    highest [degC]: highest temperature of the hot end.
    ambient [degC]: temperature of the cold end.
    resistances [K/W]: one for each link.

    Returns [W]: (T - Ta) / sum(Rth), never below 0.
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 14.5.

    >>> round(float(allowed_power(150.0, 50.0, 3.12, 0.5, 4.0)), 1)
    13.1
    """
    return np.maximum(highest - np.asarray(ambient, float), 0.0) / sum(resistances)


def allowed_ambient(highest: Values, power: Values, *resistances: Values) -> Values:
    """Ambient at which the hot end reaches its limit.

    highest [degC]: highest temperature of the hot end.
    power [W]: heat that flows.
    resistances [K/W]: one for each link.

    Returns [degC]: T - P sum(Rth).
    Source: V. K. Mehta, R. Mehta, Principles of Electronics, example 12.15.

    >>> allowed_ambient(90.0, 4.0, 10.0)
    50.0
    """
    return highest - power * sum(resistances)


def needed_resistance(highest: Values, ambient: Values, power: Values, *resistances: Values) -> Values:
    """Thermal resistance that is left over for one more link, such as the heat sink.

    highest [degC]: highest temperature of the hot end.
    ambient [degC]: temperature of the cold end.
    power [W]: heat that flows.
    resistances [K/W]: the links that are there already; none gives the whole chain, as from a power rating.

    Returns [K/W]: (T - Ta)/P - sum(Rth); negative when no sink is good enough.
    Source: B. R. Gupta, V. Singhal, Power Electronics, example 2.23; D. A. Neamen, Electronic Circuit
        Analysis and Design, example 8.3.

    >>> round(needed_resistance(125.0, 50.0, 30.0, 1.0, 0.3), 2)
    1.2
    """
    return (highest - ambient) / power - sum(resistances)


def superposed_rise(powers: Values, impedances: Values) -> Values:
    """Junction rise at the end of a train of pulses.

    powers [W]: steps of power, the later subtracted from the earlier; last axis.
    impedances [K/W]: transient thermal impedance for the time since each step.

    Returns [K]: sum of steps times impedances.
    Source: superposition, as in M. H. Rashid, Power Electronics, 4th edition, example 17.1.

    >>> round(float(superposed_rise(np.array([800.0, -800.0]), np.array([0.035, 0.025]))), 3)
    8.0
    """
    return np.sum(np.asarray(powers, float) * impedances, axis=-1)


def winding_rise(cold_resistance: Values, hot_resistance: Values, cold_temperature: Values,
                 ambient: Values) -> Values:
    """Rise of a copper winding from its change of resistance.

    cold_resistance [ohm]: before, at cold_temperature.
    hot_resistance [ohm]: at the end of the run.
    cold_temperature [degC]: of the winding at the first reading.
    ambient [degC]: at the end of the run.

    Returns [K]: (R - r)/r (t + 234.5) - (T - t).
    Valid: copper.
    Source: MIL-T-27, 4.8.12, as in the worked example of MIL-STD-975M (NASA), Appendix A, 3.6.

    >>> round(winding_rise(15.0, 17.0, 21.0, 25.0), 2)
    30.07
    """
    return ((hot_resistance - cold_resistance) / cold_resistance * (cold_temperature + 234.5)
            - (ambient - cold_temperature))


def hot_spot_temperature(ambient: Values, average_rise: Values) -> Values:
    """Hottest spot of a transformer or coil.

    ambient [degC]: temperature around it.
    average_rise [K]: average rise of the winding.

    Returns [degC]: Ta + 1.1 rise.
    Source: MIL-HDBK-217F Notice 2, section 11.3.

    >>> round(hot_spot_temperature(40.0, 15.0), 2)
    56.5
    """
    return ambient + 1.1 * average_rise


def transformer_rise(loss: Values, surface: Values) -> Values:
    """Average rise of a transformer from its loss and case surface.

    loss [W]: power turned into heat.
    surface [m2]: radiating surface of the case.

    Returns [K]: 125 K per watt and square inch.
    Valid: 3 to 150 square inches (0.002 to 0.1 m2).
    Source: MIL-HDBK-217F Notice 2, section 11.3.

    >>> round(transformer_rise(1.0, 0.0064516), 1)
    12.5
    """
    return 125.0 * loss / (surface / 0.0254 ** 2)


def resistor_hot_spot(ambient: Values, power: Values, power_rating: Values,
                      technology: str = "film") -> Values:
    """Hottest spot of a resistor on a board.

    ambient [degC]: air around it.
    power [W]: dissipation.
    power_rating [W]: rated dissipation at 70 degC.
    technology [key]: film, metal_oxide or wirewound.

    Returns [degC]: ambient and the share of the rise at rated power.
    Source: derating line of typical data sheets, full power at 70 degC, none at 155, 235 or 275 degC.

    >>> resistor_hot_spot(50.0, 0.125, 0.25)
    92.5
    """
    return ambient + RESISTOR_RISE[technology] * power / power_rating
