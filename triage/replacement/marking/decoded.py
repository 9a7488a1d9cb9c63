"""One sensible reading of a printed code."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from triage.quantities import engineering
from triage.replacement.marking.tables import code_table

VALUE_UNITS: Mapping[str, str] = {
    "resistance": "ohm",
    "capacitance": "F",
    "inductance": "H",
    "zener_voltage": "V",
    "varistor_voltage": "V",
    "voltage": "V",
    "ac_voltage": "V",
    "dc_voltage": "V",
    "current": "A",
    "breaking_current": "A",
    "power": "W",
    "temperature": "degC",
    "diameter": "m",
    "temperature_coefficient": "1",
}
"""Value key -> unit. ``voltage`` is the rated dc voltage, ``varistor_voltage`` that at 1 mA, ``temperature``
the upper category temperature, ``temperature_coefficient`` relative per kelvin; the other keys are those of
parts and ratings.
"""

_WORDS = {
    "ac_voltage": "ac",
    "dc_voltage": "dc",
    "varistor_voltage": "at 1 mA",
    "breaking_current": "breaking",
    "diameter": "disc",
}


@dataclass(frozen=True, slots=True)
class Decoded:
    """What a printed code says when it is read in one way."""

    part_class: str
    """Class of the catalog: ``resistor``, ``film_capacitor``, ``x_capacitor``, ``electrolytic``, ``fuse``,
    ``varistor`` ...
    """
    values: Mapping[str, float]
    """Values and ratings in SI (temperature in degC), keys of VALUE_UNITS."""
    tolerance: float | None
    """Relative half-width of the main value; of an uneven tolerance the wider side. None where none is
    printed.
    """
    text: str
    """The reading in one line: ``100 nF 5 % 630 V``."""
    source: str
    """Where the rule of the code is from."""
    confidence: str
    """``verified`` where the rule was read in a public text, else ``from memory``."""
    marks: Mapping[str, str] = field(default_factory=dict)
    """What is not a number: ``speed``, ``breaking_class`` (letters; in words: ``speed_text``),
    ``safety_class``, ``dielectric``, ``tolerance`` where it is uneven.
    """
    note: str = ""
    """Doubt about this reading in one sentence, or empty."""
    doubt: int = 0
    """Order among the readings of one code: 0 is the usual one."""


def decoded(
    table: str,
    part_class: str,
    values: Mapping[str, float],
    tolerance: float | None = None,
    marks: Mapping[str, str] | None = None,
    note: str = "",
    doubt: int = 0,
) -> Decoded:
    """The reading with its line of text and with source and confidence of the table of codes.toml it was read
    by.
    """
    marks = marks or {}
    pieces = [_piece(key, value) for key, value in values.items()]
    if "tolerance" in marks:
        pieces.insert(1, marks["tolerance"])
    elif tolerance is not None:
        pieces.insert(1, f"{tolerance * 100:.3g} %")
    pieces += [word for key, word in marks.items() if key != "tolerance"]
    rule = code_table(table)
    return Decoded(
        part_class,
        dict(values),
        tolerance,
        " ".join(pieces),
        rule["source"],
        rule["confidence"],
        dict(marks),
        note,
        doubt,
    )


def _piece(key: str, value: float) -> str:
    if key == "temperature_coefficient":
        return f"{value * 1e6:.3g} ppm/K"
    text = engineering(value, VALUE_UNITS[key])
    return f"{text} {_WORDS[key]}" if key in _WORDS else text
