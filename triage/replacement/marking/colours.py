"""Resistor colour bands, named in words or by the two letters of IEC 60757, from either end."""

import re
from collections.abc import Iterator, Sequence

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.preferred import is_preferred
from triage.replacement.marking.tables import code_table

_REVERSED = "read from the other end"
_NOT_PREFERRED = "not a preferred value: look at the colours again"


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``yellow violet red gold``, ``bn-bk-bk-rd-bn`` and the like: 3 to 6 bands, or one black
    band (link).
    """
    bands = _bands(text)
    if bands == ["black"]:
        yield decoded("resistor_colour", "resistor", {"resistance": 0.0}, note="0 ohm link")
    if not 3 <= len(bands) <= 6:
        return
    for order, note in ((bands, ""), (bands[::-1], _REVERSED)):
        if note and order == bands:
            continue
        yield from _from_one_end(order, note)


def _bands(text: str) -> list[str]:
    """The colours in plain words, or an empty list when a word is no colour."""
    colours = code_table("resistor_colour")["exponent"]
    words = code_table("colour_word")["word"]
    bands = [words.get(word, word) for word in re.split(r"[ ,;/-]+", text.lower()) if word]
    return bands if all(band in colours for band in bands) else []


def _from_one_end(bands: Sequence[str], note: str) -> Iterator[Decoded]:
    table = code_table("resistor_colour")
    if len(bands) == 5 and bands[-1] in table["fusible_band"]:
        mark = f"{bands[-1]} fifth band: often a fusible or flame-proof type; {note}".removesuffix("; ")
        yield from _reading(bands[:4], 2, mark, "fusible_resistor")
        return
    yield from _reading(bands, 3 if len(bands) >= 5 else 2, note, "resistor")


def _reading(bands: Sequence[str], digits: int, note: str, part_class: str) -> Iterator[Decoded]:
    """The reading with this number of digit bands, if every band can stand where it stands."""
    table = code_table("resistor_colour")
    figures = [table["digit"].get(band) for band in bands[:digits]]
    if None in figures or figures[0] == 0:
        return
    tolerance = table["no_tolerance_band"]
    values = {"resistance": float(f"{''.join(map(str, figures))}e{table['exponent'][bands[digits]]}")}
    if len(bands) > digits + 1:
        tolerance = table["tolerance"].get(bands[digits + 1])
        if tolerance is None:
            return
    if len(bands) > digits + 2:
        coefficient = table["temperature_coefficient"].get(bands[digits + 2])
        if coefficient is None:
            return
        values["temperature_coefficient"] = coefficient
    doubt = 1 if _REVERSED in note else 0
    if not any(is_preferred(values["resistance"], series) for series in _series(digits)):
        doubt, note = doubt + 2, f"{note}; {_NOT_PREFERRED}".removeprefix("; ")
    yield decoded("resistor_colour", part_class, values, tolerance, note=note, doubt=doubt)


def _series(digits: int) -> tuple[str, ...]:
    return ("E24",) if digits == 2 else ("E24", "E96", "E192")
