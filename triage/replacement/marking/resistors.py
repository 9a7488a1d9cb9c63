"""Resistors marked in letters and digits: IEC 60062 letter code, value in clear, chip codes of three, four
and EIA-96 characters.
"""

import re
from collections.abc import Iterator

from triage.errors import QuantityError
from triage.quantities import parse_with_tolerance
from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.preferred import coarsest_series, is_preferred, series_values
from triage.replacement.marking.tables import code_table

HIGHEST = 1e8
"""Highest resistance a part of an adapter is taken to have [ohm]."""

_POWER = re.compile(r"(?<![\d.,/])(\d+(?:[.,]\d+)?|1/[248]) ?W(?![A-Za-z])", re.IGNORECASE)
_VALUE = re.compile(
    r"(?=.*[RKMGL]|.*ohm)\d*[.,]?\d*(?:[RKMGLkr]|(?:[kKMG] ?)?(?i:ohms?)|[kKMG](?=\d))?\d* ?(?:ohms?)?"
    r" ?[BCDFGJKMN]?(?: ?(?:\+/?-)? ?\d+(?:[.,]\d+)? ?%)?"
)
_CHIP_96 = re.compile(r"(0[1-9]|[1-8]\d|9[0-6])([A-FHRSXYZ])")


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``4K7J``, ``5W10RJ``, ``0.33 ohm 2W``, ``472``, ``1002``, ``01C`` and ``000``."""
    values: dict[str, float] = {}
    power = _POWER.search(text)
    if power:
        whole, _, part = power[1].replace(",", ".").partition("/")
        values["power"] = float(whole) / float(part or 1)
        text = (text[: power.start()] + " " + text[power.end() :]).strip()
    yield from _in_letters(text, values)
    if not power:
        yield from _chip_digits(text)
        yield from _chip_96(text)


def _in_letters(text: str, ratings: dict[str, float]) -> Iterator[Decoded]:
    spelled = re.sub(r"(?<=\d) ?k", "K", text)
    if not _VALUE.fullmatch(spelled):
        return
    try:
        resistance, tolerance = parse_with_tolerance(spelled, "ohm")
    except QuantityError:
        return
    figures = re.sub(r"\D", "", spelled)
    if (
        not 0 < resistance <= HIGHEST
        or re.match(r"0\d", spelled)
        or (len(figures) > 4 and "%" not in spelled)
    ):
        return
    usual = coarsest_series(resistance) is not None or resistance < 1
    note = "" if usual else "not a preferred value: read it again"
    yield decoded(
        "resistor_letter_code",
        "resistor",
        {"resistance": resistance, **ratings},
        tolerance,
        note=note,
        doubt=0 if usual else 2,
    )


def _chip_digits(text: str) -> Iterator[Decoded]:
    """Three digits (two and power of ten, E24), four digits (three and power of ten, E96 or E24), zeros
    (link).
    """
    if re.fullmatch(r"0{1,4}", text):
        yield decoded("resistor_chip_digits", "resistor", {"resistance": 0.0}, note="0 ohm link", doubt=0)
    if not re.fullmatch(r"[1-9]\d{2,3}", text, re.ASCII):
        return
    resistance = float(f"{text[:-1]}e{text[-1]}")
    series = ("E24",) if len(text) == 3 else ("E24", "E96")
    if resistance <= HIGHEST and any(is_preferred(resistance, name) for name in series):
        tolerance = None if len(text) == 3 else 0.01
        yield decoded(
            "resistor_chip_digits", "resistor", {"resistance": resistance}, tolerance, note=_CHIP, doubt=0
        )


_CHIP = "as chip resistor"


def _chip_96(text: str) -> Iterator[Decoded]:
    match = _CHIP_96.fullmatch(text)
    if match:
        exponent = code_table("resistor_chip_96")["exponent"][match[2]]
        resistance = float(f"{series_values('E96')[int(match[1]) - 1]}e{exponent}")
        yield decoded("resistor_chip_96", "resistor", {"resistance": resistance}, 0.01, note=_CHIP, doubt=1)
