"""How much of a rating may be used, by part, role and stress quantity.

A part that passes its rating is destroyed; one that passes the derated limit wears out early. Several
published yardsticks stand in the table beside this module; the default is the usual practice of consumer
supplies, the others show ideal margins. Quantities are those of ``triage.board.stress``.
"""

import tomllib
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np

from triage.physics.values import Values

_TABLE: dict[str, Any] = tomllib.loads(Path(__file__).with_name("derating.toml").read_text("utf-8"))

SETS: dict[str, str] = dict(_TABLE["sets"])
"""Yardstick -> what it is."""

DEFAULT_SET = "smps_practice"


class Derating(NamedTuple):
    """Highest recommended share of a rating, with its source."""

    factor: float | None
    """Share of the rating [-]; None where the yardstick says nothing, then only the rating itself counts."""
    source: str


def _limit(kind: str, role: str, quantity: str, chosen: str) -> tuple[Any, str] | None:
    """Limit and source of the first row that fits, looking through the set and what it falls back to."""
    while chosen:
        rows = [row for row in _TABLE["limit"] if row["set"] == chosen and kind in row["kinds"]
                and any(word in role for word in row.get("roles", [role]))]
        if rows and quantity in rows[0]["limits"]:
            row = rows[0]
            return row["limits"][quantity], f"{row['source']} ({row['confidence']})"
        chosen = "" if rows else _TABLE["falls_back_to"].get(chosen, "")
    return None


def derating(kind: str, role: str, quantity: str, rating: float | None = None,
             chosen: str = DEFAULT_SET) -> Derating:
    """Share of a rating that should not be passed in lasting use.

    kind [key]: part kind of the board.
    role [key]: what the part does in the circuit.
    quantity [key]: stress quantity: peak_voltage, power, ripple_current, temperature ...
    rating [SI]: the rating itself (degC for a temperature). Temperature limits that are not a share need it;
        without it their factor is None.
    chosen [key]: yardstick, one of SETS.

    Returns [-]: the factor with its source; None where the yardstick has no figure. Raises KeyError for an
        unknown set.
    Source: the ``source`` of the row in derating.toml.

    >>> derating("bipolar_transistor", "main switch", "peak_voltage").factor
    0.85
    >>> round(derating("electrolytic", "output capacitor", "temperature", 105.0).factor, 3)
    0.905
    """
    if chosen not in SETS:
        raise KeyError(chosen)
    found = _limit(kind, role, quantity, chosen)
    if found is None:
        return Derating(None, "")
    limit, source = found
    if not isinstance(limit, dict):
        return Derating(float(limit), source)
    if rating is None or rating <= 0.0:
        return Derating(None, source)
    highest = min(limit.get("highest_degC", rating), rating - limit.get("below_rating_K", 0.0))
    return Derating(highest / rating, source)


def derated_power_fraction(temperature: Values, factor: Values, knee: Values, zero: Values) -> Values:
    """Share of its rated power that a resistor may turn into heat at a temperature.

    temperature [degC]: ambient of the resistor.
    factor [-]: share up to the knee.
    knee [degC]: temperature from which the share falls.
    zero [degC]: temperature at which nothing is left.

    Returns [-]: factor up to the knee, then falling linearly to 0.
    Source: MIL-STD-975M (NASA), Appendix A, 3.11; its worked example is a 0.5 W film resistor at 130 degC:
        0.25 W.

    >>> round(0.5 * float(derated_power_fraction(130.0, 0.6, 125.0, 155.0)), 3)
    0.25
    """
    return factor * np.clip((zero - np.asarray(temperature, float)) / (zero - knee), 0.0, 1.0)


def allowed_resistor_voltage(resistance: Values, power_rating: Values, voltage_rating: Values,
                             power_factor: Values = 0.6, voltage_factor: Values = 0.8) -> Values:
    """Highest lasting voltage on a resistor, by its heat or by its voltage limit.

    resistance [ohm]: resistance.
    power_rating [W]: rated dissipation.
    voltage_rating [V]: limiting element voltage.
    power_factor [-]: derating of the power.
    voltage_factor [-]: derating of the voltage.

    Returns [V]: the lower of the derated voltage limit and sqrt(P R) of the derated power.
    Source: MIL-STD-975M (NASA), Appendix A, 3.11; its worked example is 0.1 W, 475 kohm, 200 V: 160 V.

    >>> float(allowed_resistor_voltage(475e3, 0.1, 200.0))
    160.0
    """
    return np.minimum(voltage_factor * np.asarray(voltage_rating, float),
                      np.sqrt(power_factor * np.asarray(power_rating, float) * resistance))


def fuse_current_factor(rated_current: Values, temperature: Values = 25.0) -> Values:
    """Share of its rated current that a fuse may carry for good, by the strict space rule.

    rated_current [A]: rated current.
    temperature [degC]: ambient of the fuse.

    Returns [-]: 0.25 for 1/8 A up to 0.50 from 2 A on, less 0.005 per kelvin above 25 degC.
    Valid: 0.125 A to 15 A. Far stricter than consumer practice (0.80 of an IEC rating).
    Source: MIL-STD-975M (NASA), Appendix A, 3.9.

    >>> round(float(fuse_current_factor(2.0, 45.0)), 2)
    0.4
    """
    steps = np.array([0.25, 0.375, 0.5, 1.0, 2.0])
    factors = np.array([0.25, 0.30, 0.35, 0.40, 0.45, 0.50])
    base = factors[np.searchsorted(steps, np.asarray(rated_current, float), side="right")]
    return np.maximum(base - 0.005 * np.maximum(np.asarray(temperature, float) - 25.0, 0.0), 0.0)
