"""Values as they are typed and printed at the bench, to and from SI floats.

The only module that knows Pint, and it loads it only for spelled-out units (``2.2 kilohm``, ``25 degF``); the
common forms (``4k7``, ``100n``, ``0,15 A``, ``230V~``) are read by the tables of ``triage.units``. A value of
the wrong kind, an unreadable text or an absurd one is refused with a QuantityError of one printable line.
Printed codes such as ``104J`` are not values: see ``triage.replacement.marking_codes``.
"""

import math
import re
from decimal import Decimal
from functools import cache
from pathlib import Path
from typing import Any

from triage.errors import QuantityError
from triage.number_text import clean, leading_number, shown
from triage.units import PREFIXES, TOLERANCE_LETTERS, UNITS, Unit, unit_of

_OVER_RANGE = re.compile(
    r"\+?(?:\.?[o0]\.?l\.?|over(?:[ -]?(?:load|range|flow|limit))?"
    r"|inf(?:inity|inite)?|open(?: (?:line|loop|circuit))?)(?: ?([a-z]{1,6}))?",
    re.IGNORECASE,
)
_TOLERANCE = re.compile(r"(?:\s*\(?\s*\+/?-\s*|\s*\(\s*|\s+)(\d+(?:[.,]\d+)?)\s*%\s*\)?$", re.ASCII)
_WAVEFORM = re.compile(r" ?(?:~|=|ac|dc|rms|pp|p-p|pk)$", re.IGNORECASE)
_UNIT_TEXT = re.compile(
    r"[A-Za-z]+(?:(?:\^|\*\*)-?[1-4])?(?:\s*[ */]\s*[A-Za-z]+(?:(?:\^|\*\*)-?[1-4])?){0,5}", re.ASCII
)
_NEGATIVE = (
    "a meter shows less than nothing when a voltage is left in the circuit: discharge it and read again"
)


def parse(text: str | float, unit: str) -> float:
    """The value of a typed text in SI.

    text: as typed or printed, or a plain number, which is taken to be in ``unit`` already. A tolerance behind
    it is read over. unit: key of ``triage.units.UNITS``: ``ohm``, ``F``, ``V``, ``degC`` ... Raises
    QuantityError for text that is no finite value of this unit, ValueError for an unknown unit key.

    >>> parse("4k7", "ohm"), parse("0,15 A", "A"), parse("100n", "F")
    (4700.0, 0.15, 1e-07)
    """
    return parse_with_tolerance(text, unit)[0]


def parse_reading(text: str | float, unit: str) -> float:
    """As ``parse``, for a meter's display: ``OL``, ``O.L``, ``0L``, ``over``, ``inf``, ``open`` give ``inf``.

    >>> parse_reading("O.L Mohm", "ohm")
    inf
    """
    if isinstance(text, str):
        wanted = unit_of(unit)
        match = _OVER_RANGE.fullmatch(clean(text, _expected(wanted)))
        if match and (match[1] is None or _scale(match[1], wanted) is not None):
            return math.inf
    return parse(text, unit)


def parse_with_tolerance(text: str | float, unit: str) -> tuple[float, float | None]:
    """The value in SI and its relative tolerance (0.05 for 5 %), None where none is given.

    The tolerance is a percentage behind the value (``10k 5%``, ``4.7 uF ±20%``) or the letter of IEC 60062
    behind a value that has its own multiplier or unit (``4K7J``, ``10RJ``, ``100nK``). Parameters and errors
    as ``parse``.

    >>> parse_with_tolerance("4K7J", "ohm")
    (4700.0, 0.05)
    """
    wanted = unit_of(unit)
    if not isinstance(text, str):
        return _plain_number(text, wanted), None
    plain = clean(text, _expected(wanted))
    tolerance = None
    match = _TOLERANCE.search(plain)
    if match:
        tolerance = float(match[1].replace(",", ".")) / 100
        if tolerance > 1:
            raise QuantityError("", f"{shown(text)} has a tolerance above 100 %", _expected(wanted))
        plain = plain[: match.start()]
    value, letter = _letter_code(plain, wanted) or _number_and_unit(plain, wanted)
    if tolerance is None and letter:
        tolerance = TOLERANCE_LETTERS[letter]
    return _checked(value, text, wanted), tolerance


def engineering(value: float, unit: str, digits: int = 3) -> str:
    """The value as it is written at the bench: ``4.7 kohm``, ``150 mA``, ``OL`` for ``inf``.

    value: in SI. unit: key of ``triage.units.UNITS``. digits: significant digits, 1 to 15; zeros at the end
    are left off. ``parse`` reads it back, within the rounding. Raises ValueError for an unknown unit or
    number of digits.

    >>> engineering(4700, "ohm"), engineering(2.2e-07, "F"), engineering(float("inf"), "ohm")
    ('4.7 kohm', '220 nF', 'OL')
    """
    wanted = unit_of(unit)
    if not 1 <= digits <= 15:
        raise ValueError(f"{digits} significant digits: give 1 to 15")
    if math.isnan(value):
        return "no value"
    if math.isinf(value):
        return "OL" if value > 0 else "-OL"
    rounded = Decimal(f"{value:.{digits - 1}e}")
    suffix = "" if unit == "1" else f" {unit}"
    if not rounded:
        return f"0{suffix}"
    exponents = {
        0: "",
        **{PREFIXES[prefix]: prefix for prefix in wanted.prefixes if prefix not in wanted.unwritten},
    }
    step = 3 * (rounded.adjusted() // 3)
    step = min(max(step, min(exponents)), max(exponents))
    step = step if step in exponents else 0
    mantissa = rounded.scaleb(-step)
    if not -4 <= mantissa.adjusted() < 6:
        return f"{float(rounded):.{digits}g}{suffix}"
    plain = f"{mantissa:f}"
    if "." in plain:
        plain = plain.rstrip("0").rstrip(".")
    return f"{plain} {exponents[step]}{unit}" if suffix else plain


def _expected(unit: Unit) -> str:
    return f"{unit.noun}{'' if unit.key == '1' else ' in ' + unit.key}, for example {unit.example}"


def _checked(value: Decimal | None, text: str, unit: Unit) -> float:
    """The value as a float, refused where it is missing, not finite, vanishing, or negative for a quantity
    that cannot be.
    """
    number = math.nan if value is None else float(value)
    if not math.isfinite(number) or (value and not number):
        raise QuantityError("", f"{shown(text)} is not a finite value", _expected(unit))
    if number < 0 and not unit.signed:
        advice = _NEGATIVE if unit.key in ("ohm", "F") else ""
        raise QuantityError("", f"{shown(text)} is negative", _expected(unit), advice)
    return number


def _plain_number(given: float, unit: Unit) -> float:
    """A number from a file or a program, checked like a typed one; True and False are none."""
    try:
        finite = math.isfinite(given) and not isinstance(given, bool)
        return _checked(Decimal(repr(float(given))) if finite else None, str(given), unit)
    except OverflowError:
        raise QuantityError("", "the number is too large", _expected(unit)) from None


@cache
def _letter_code_form(unit: Unit) -> re.Pattern[str]:
    """Pattern of values with a letter at the decimal point: sign, digits, letter, digits, tolerance letter,
    unit.
    """
    letters = sorted({*unit.point_letters, *_point_prefixes(unit)}, key=len, reverse=True)
    names = "|".join(re.escape(name) for name, factor in unit.names.items() if factor == 1)
    tolerance = f"([{unit.tolerance_letters}])?" if unit.tolerance_letters else "()"
    return re.compile(rf"([+-]?)(\d*)({'|'.join(letters)})(\d+) ?{tolerance} ?(?i:{names})?", re.ASCII)


@cache
def _point_prefixes(unit: Unit) -> dict[str, float]:
    """Prefix letters that may stand at the decimal point -> factor; capitals of k, u, n, p too."""
    letters = {letter: 10.0 ** PREFIXES[letter] for letter in unit.point_prefixes}
    letters |= {letter.upper(): factor for letter, factor in letters.items() if letter in "kunp"}
    return letters


def _letter_code(text: str, unit: Unit) -> tuple[Decimal, str] | None:
    """Value and tolerance letter of an IEC 60062 letter code (``4k7``, ``R47``, ``2n2J``, ``5V1``), or None
    for other text.
    """
    if not unit.point_letters and not unit.point_prefixes:
        return None
    match = _letter_code_form(unit).fullmatch(text)
    if match is None:
        return None
    sign, whole, letter, part, tolerance = match.groups()
    factor = unit.point_letters.get(letter) or _point_prefixes(unit)[letter]
    return Decimal(f"{sign}{whole or 0}.{part}") * Decimal(repr(factor)), tolerance or ""


def _number_and_unit(text: str, unit: Unit) -> tuple[Decimal, str]:
    """Value and tolerance letter of a number with or without prefix and unit."""
    split = leading_number(text.removeprefix("~") if unit.key in ("V", "A") else text, _expected(unit))
    if split is None:
        raise QuantityError("", f"{shown(text)} {_why_no_number(text)}", _expected(unit))
    number, suffix = split
    factor = _scale(suffix, unit)
    if factor is not None:
        return number * factor, ""
    head, letter = suffix[:-1].strip(), suffix[-1:]
    if letter in unit.tolerance_letters and head.endswith((*unit.point_letters, *_point_prefixes(unit))):
        factor = _scale(head, unit)
        if factor is not None:
            return number * factor, letter
    other = _other_unit(suffix, unit)
    if other is not None:
        raise QuantityError("", f"{shown(text)} is {other.noun}", _expected(unit))
    return _by_library(number, suffix, text, unit), ""


def _why_no_number(text: str) -> str:
    if _OVER_RANGE.fullmatch(text):
        return "is what a meter shows above its range, not a value"
    return "is not a number" if text.lower() in ("nan", "+nan", "-nan") else "cannot be read"


def _scale(suffix: str, unit: Unit) -> Decimal | None:
    """Factor of what stands behind the number (prefix, unit, ``~`` or ``ac``), or None where it is not of
    this unit.

    Raises QuantityError for ``m`` and ``M`` where the other one must be meant or both may be.
    """
    bare = _WAVEFORM.sub("", suffix) if unit.key in ("V", "A") else suffix
    if not bare:
        return Decimal(1)
    if bare.casefold() in unit.names:
        return Decimal(repr(unit.names[bare.casefold()]))
    prefix, rest = bare[0], bare[1:].strip()
    prefix = prefix.lower() if prefix in "KUNP" else prefix
    if prefix not in PREFIXES or (rest and unit.names.get(rest.casefold()) != 1):
        return None
    if prefix not in unit.prefixes:
        if prefix in "mM" and unit.prefixes:
            meant = "m" if prefix == "M" else "M"
            raise QuantityError(
                "",
                f"{prefix} in {shown(suffix)} is {'mega' if prefix == 'M' else 'milli'}",
                _expected(unit),
                f"write {meant}{unit.key} if that is meant" if meant in unit.prefixes else "",
            )
        return None
    if prefix == "m" and not rest and unit.key == "ohm":
        raise QuantityError(
            "", "m alone may be milli or mega", _expected(unit), "write M for megohm, mohm for milliohm"
        )
    return Decimal(1).scaleb(PREFIXES[prefix])


def _other_unit(suffix: str, wanted: Unit) -> Unit | None:
    """The unit of the tables that a suffix belongs to, when it is not the wanted one; None where it is in
    none of them.
    """
    bare = _WAVEFORM.sub("", suffix)
    others = [unit for unit in UNITS.values() if unit is not wanted and unit.key != "1"]
    for unit in others:
        if bare == unit.key or (bare[:1] in unit.prefixes and bare[1:] == unit.key):
            return unit
    low = bare.casefold()
    for unit in others:
        if low in unit.names or (low[:1] in PREFIXES and unit.names.get(low[1:]) == 1):
            return unit
    return None


@cache
def _library() -> tuple[Any, Any]:
    """Pint and a registry of the units in unit_definitions.txt, loaded when first needed (a fraction of a
    second).
    """
    import pint

    return pint, pint.UnitRegistry(str(Path(__file__).with_name("unit_definitions.txt")))


def _by_library(number: Decimal, unit_text: str, text: str, wanted: Unit) -> Decimal:
    """The number converted from a spelled-out unit. Raises QuantityError for an unknown unit or another
    dimension.

    Only names with small whole powers reach the library, never the typed numbers: its expression reader would
    work out ``9**9**9`` for hours.
    """
    unreadable = QuantityError("", f"{shown(text)} cannot be read", _expected(wanted))
    if not _UNIT_TEXT.fullmatch(unit_text):
        raise unreadable
    pint, registry = _library()
    target = registry.parse_units(wanted.definition or wanted.key)
    failures = (pint.PintError, ValueError, TypeError, ArithmeticError, AttributeError, SyntaxError)
    for spelling in dict.fromkeys((unit_text, unit_text.lower())):
        try:
            given = registry.parse_units(spelling)
        except failures:
            continue
        if given.dimensionality != target.dimensionality:
            noun = next(
                (unit.noun for unit in UNITS.values() if _same_kind(given, unit)), f"not {wanted.noun}"
            )
            raise QuantityError("", f"{shown(text)} is {noun}", _expected(wanted))
        try:
            return Decimal(f"{registry.Quantity(float(number), given).to(target).magnitude:.14g}")
        except failures:
            raise unreadable from None
    raise unreadable


def _same_kind(given: Any, unit: Unit) -> bool:
    """Whether a unit of the library measures the same quantity as one of the tables."""
    registry = _library()[1]
    return bool(given.dimensionality == registry.parse_units(unit.definition or unit.key).dimensionality)
