"""Capacitors: three-digit codes, letter codes and values in clear, with voltage codes, safety class,
dielectric and temperature.

Which class of part it is follows from what is printed beside the value: X or Y class, ceramic class,
microfarads with a voltage and a temperature; where nothing decides, the usual body comes first and the other
as a second reading.
"""

import re
from collections.abc import Iterator
from dataclasses import dataclass

from triage.errors import QuantityError
from triage.quantities import parse_with_tolerance
from triage.replacement.marking.capacitor_line import CapacitorLine, split_line
from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.preferred import is_preferred
from triage.replacement.marking.tables import code_table

_DIGITS = re.compile(
    r"(?P<volts>[0-3][A-Z])?(?P<figures>[1-9]\d)(?P<power>\d)(?P<letter>[B-DF-HJKMNPQSTZ])?(?P<trailing>\d{2,4})?"
)
_PICOFARADS = re.compile(r"(?P<volts>[0-3][A-Z])?(?P<whole>\d)R(?P<part>\d)(?P<letter>[BCDFG])?")
_IN_CLEAR = re.compile(r"\d*[.,]?\d*(?:[pnum]|(?i:[pnu]f|mfd)|mF)\d*F?[BCDGJKM]?", re.ASCII)
_MICROFARADS = re.compile(r"0?([.,]\d{1,4})([JKM])?(\d{2,4})?", re.ASCII)
_ONLY_DIGITS = re.compile(r"[1-9]\d{0,3}", re.ASCII)
_ELECTROLYTIC_FROM = 0.47e-6
"""From here on a capacitor without class and tolerance letter is usually an electrolytic [F]."""
_ELECTROLYTIC_ONLY = 10e-6
"""Above this it is one [F]."""
_CAN_VOLTAGE = 100
"""Up to here a bare number with a voltage is taken for the microfarads of a can [V]."""
_HIGHEST = 1.0
"""Highest capacitance of a print that is taken seriously [F]."""


@dataclass(slots=True)
class _Value:
    """The value of a line as one form of print gives it."""

    table: str
    capacitance: float
    tolerance: float | None = None
    uneven: str = ""
    letter: str = ""
    code_voltage: float | None = None
    note: str = ""
    doubt: int = 0


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``104J 630V``, ``2A103J``, ``222M 1kV``, ``.1uF 275V X2``, ``4n7``, ``10uF 400V 105C`` and
    the like.
    """
    line = split_line(text)
    for form in (
        _three_digits,
        _picofarads,
        _in_clear,
        _decimal_microfarads,
        _can_of_microfarads,
        _chip_tantalum,
    ):
        for value in form(line):
            if 0 < value.capacitance <= _HIGHEST:
                yield from _as_parts(value, line)


def _three_digits(line: CapacitorLine) -> Iterator[_Value]:
    match = _DIGITS.fullmatch(line.value)
    if match is None:
        return
    table = code_table("capacitor_digits")
    volts = code_table("capacitor_voltage_code")["volts"].get(match["volts"])
    if (match["volts"] and volts is None) or (match["trailing"] and not match["letter"]):
        return
    if match["trailing"]:
        volts = float(match["trailing"])
    value = _Value(
        "capacitor_digits",
        float(f"{match['figures']}e{table['exponent'][match['power']] - 12}"),
        code_voltage=volts,
    )
    plain = not (match["letter"] or volts or line.voltages or line.safety_classes or line.dielectric)
    if not is_preferred(value.capacitance, "E24"):
        if plain:
            return
        value.note, value.doubt = "not a preferred value: read it again", 2
    if plain:
        value.doubt, value.note = 1, "as small capacitor"
    if match["power"] == "0" and not match["letter"] and line.voltages and max(line.voltages) <= _CAN_VOLTAGE:
        value.doubt, value.note = 2, "as small capacitor in pF"
    if _add_letter(value, match["letter"] or ""):
        yield value


def _add_letter(value: _Value, letter: str) -> bool:
    """Put the tolerance of a letter to the value; False where the letter does not go with it."""
    table = code_table("capacitor_digits")
    value.letter = letter
    if not letter:
        return True
    if value.capacitance < 9.99e-12 and letter in table["small_tolerance_F"]:
        value.tolerance = table["small_tolerance_F"][letter] / value.capacitance
    elif letter in table["tolerance"]:
        value.tolerance = table["tolerance"][letter]
    elif letter in table["uneven_tolerance"]:
        low, high = table["uneven_tolerance"][letter]
        value.tolerance, value.uneven = max(-low, high), f"{low * 100:+.0f}/{high * 100:+.0f} %"
    return value.tolerance is not None


def _picofarads(line: CapacitorLine) -> Iterator[_Value]:
    match = _PICOFARADS.fullmatch(line.value)
    if match:
        volts = code_table("capacitor_voltage_code")["volts"].get(match["volts"])
        value = _Value(
            "capacitor_digits", float(f"{match['whole']}.{match['part']}e-12"), code_voltage=volts, doubt=1
        )
        if _add_letter(value, match["letter"] or ""):
            yield value


def _in_clear(line: CapacitorLine) -> Iterator[_Value]:
    if not _IN_CLEAR.fullmatch(line.value):
        return
    try:
        capacitance, tolerance = parse_with_tolerance(line.value, "F")
    except QuantityError:
        return
    letter = line.value[-1] if line.value[-1] in "JKM" else ""
    yield _Value("capacitor_value", capacitance, tolerance, letter=letter)


def _decimal_microfarads(line: CapacitorLine) -> Iterator[_Value]:
    match = _MICROFARADS.fullmatch(line.value)
    if match and (match[2] or line.voltages or line.safety_classes):
        volts = float(match[3]) if match[2] and match[3] else None
        if match[3] and not match[2]:
            return
        value = _Value("capacitor_decimal", float(f"0{match[1].replace(',', '.')}e-6"), code_voltage=volts)
        if _add_letter(value, match[2] or ""):
            yield value


def _can_of_microfarads(line: CapacitorLine) -> Iterator[_Value]:
    """``100 16V`` on an aluminium can: microfarads without the unit."""
    low = bool(line.voltages) and max(line.voltages) <= _CAN_VOLTAGE
    if (
        not (low or line.temperature)
        or line.safety_classes
        or line.dielectric
        or not _ONLY_DIGITS.fullmatch(line.value)
    ):
        return
    coded = len(line.value) == 3 and line.value[-1] != "0"
    value = _Value("electrolytic_line", float(f"{line.value}e-6"), doubt=2 if coded else 0)
    if is_preferred(value.capacitance, "E24"):
        yield value


def _chip_tantalum(line: CapacitorLine) -> Iterator[_Value]:
    """``107C``: three digits and one voltage letter on a moulded chip."""
    match = re.fullmatch(r"([1-9]\d)([5-7])([eA-Z])", line.value, re.ASCII)
    volts = code_table("capacitor_chip_voltage")["volts"].get(match[3]) if match else None
    if match and volts and not line.voltages and not line.safety_classes:
        capacitance = float(f"{match[1]}e{int(match[2]) - 12}")
        yield _Value(
            "capacitor_chip_voltage",
            capacitance,
            code_voltage=volts,
            note="as moulded chip tantalum",
            doubt=2,
        )


def _as_parts(value: _Value, line: CapacitorLine) -> Iterator[Decoded]:
    """The value as the part, or the two parts, that print may be on."""
    voltages = [*line.voltages, *([value.code_voltage] if value.code_voltage else [])]
    values = {"capacitance": value.capacitance}
    marks = {"tolerance": value.uneven} if value.uneven else {}
    if line.safety_classes:
        marks["safety_class"] = " ".join(line.safety_classes)
    if line.dielectric:
        marks["dielectric"] = line.dielectric
    note = value.note
    if voltages:
        values["ac_voltage" if line.alternating or line.safety_classes else "voltage"] = float(min(voltages))
        if len(set(voltages)) > 1:
            printed = ", ".join(f"{volts:g} V" for volts in voltages)
            note = f"{note}; {printed} are printed, the lowest is taken".removeprefix("; ")
    if line.temperature is not None:
        values["temperature"] = line.temperature
    classes = _classes(value, line, bool(voltages))
    if len(classes) > 1:
        note = f"{note}; the body tells which kind it is".removeprefix("; ")
    tolerance = line.tolerance if value.tolerance is None else value.tolerance
    for place, part_class in enumerate(classes):
        yield decoded(value.table, part_class, values, tolerance, marks, note, value.doubt + place)


def _classes(value: _Value, line: CapacitorLine, rated: bool) -> tuple[str, ...]:
    """Part classes the print may be on, the usual one first."""
    if line.safety_classes:
        return (
            ("y_capacitor",)
            if any(name.startswith("Y") for name in line.safety_classes)
            else ("x_capacitor",)
        )
    if line.ceramic:
        return ("ceramic_capacitor",)
    if line.dielectric:
        return ("film_capacitor",)
    if value.table in ("electrolytic_line", "capacitor_chip_voltage"):
        return ("electrolytic",)
    if (
        value.table == "capacitor_value"
        and value.capacitance >= _ELECTROLYTIC_FROM
        and value.letter not in ("J", "K")
    ):
        film_too = value.capacitance <= _ELECTROLYTIC_ONLY and line.temperature is None
        return ("electrolytic", "film_capacitor") if film_too else ("electrolytic",)
    if value.capacitance > _ELECTROLYTIC_ONLY:
        return ("electrolytic",)
    if (
        value.uneven
        or value.letter in ("B", "C", "D", "M")
        or (value.letter in ("", "K") and value.capacitance < 0.99e-9)
    ):
        return ("ceramic_capacitor",)
    if value.table == "capacitor_decimal" or value.letter in ("J", "G", "F"):
        return ("film_capacitor",)
    return (
        ("film_capacitor", "ceramic_capacitor")
        if rated or value.letter
        else ("ceramic_capacitor", "film_capacitor")
    )
