"""Parts without a type number: from a size and a wanted value to what one can order.

A resistor is ordered as kind, power and value. There are tens of thousands of such combinations, so none is kept; those
near the wanted value are made when they are asked for.
"""

import math
import re
from collections.abc import Iterator

from triage.replacement.catalog_file import CatalogFile, GenericSize
from triage.replacement.catalog_part import CatalogPart

_SCALES = ((1e6, "M"), (1e3, "k"), (1.0, ""), (1e-3, "m"), (1e-6, "u"), (1e-9, "n"), (1e-12, "p"))
_LETTERS = {letter: scale for scale, letter in _SCALES if letter} | {"R": 1.0, "K": 1e3}
_WRITTEN = re.compile(r"(\d+)(?:\.(\d+))?([MkKRmunp]?)(\d*)")


def written_value(value: float) -> str:
    """A value as one writes it on a bench: ``330k``, ``4.7``, ``2.2n``. Not for reading meters (see quantities)."""
    for scale, letter in _SCALES:
        if value >= scale * 0.9999999:
            return f"{value / scale:.4g}{letter}"
    return f"{value:.4g}"


def read_value(text: str) -> float | None:
    """A value as ``written_value`` writes it, also ``4k7`` and ``2R2``; None when it is no value."""
    match = _WRITTEN.fullmatch(text)
    if match is None or (match[2] and match[4]) or (match[4] and not match[3]):
        return None
    number = float(f"{match[1]}.{match[2] or match[4] or '0'}")
    return number * _LETTERS.get(match[3], 1.0)


def parts_between(file: CatalogFile, low: float, high: float) -> Iterator[CatalogPart]:
    """Every size of the file in every usual value from low to high [SI], lowest value first within a size."""
    for size in file.sizes:
        for value in _values(file, size, low, high):
            yield _with_value(file, size, value)


def part_called(file: CatalogFile, name: str) -> CatalogPart | None:
    """The part with this full name, such as ``330k carbon film 0.25 W 250 V``, or None."""
    value = read_value(name.partition(" ")[0])
    if value is None:
        return None
    near = parts_between(file, value * 0.999, value * 1.001)
    return next((part for part in near if part.type.casefold() == name.casefold()), None)


def _values(file: CatalogFile, size: GenericSize, low: float, high: float) -> Iterator[float]:
    low, high = max(low, size.lowest) * (1 - 1e-9), min(high, size.highest) * (1 + 1e-9)
    if low > high or low <= 0:
        return
    if size.values:
        yield from (value for value in size.values if low <= value <= high)
        return
    for exponent in range(math.floor(math.log10(low)) - 1, math.floor(math.log10(high)) + 1):
        for digits in size.decade or file.decade:
            value = float(f"{digits}e{exponent}")
            if low <= value <= high:
                yield value


def _with_value(file: CatalogFile, size: GenericSize, value: float) -> CatalogPart:
    template = size.template
    numbers = dict(template.numbers)
    numbers[file.value_key] = value
    voltage = numbers.get("v_lim_V", numbers.get("vr_Vdc"))
    power = numbers.get("p_W")
    words = [written_value(value), template.text("kind")]
    if power is not None:
        words.append(f"{power:g} W")
    words.append(f"{voltage:g} V" if voltage is not None else template.text("name"))
    if template.text("case") not in ("", "axial"):
        words.append(template.text("case"))
    return CatalogPart(
        type=" ".join(word for word in words if word), part_class=file.part_class, numbers=numbers,
        texts=template.texts, source=template.source, confidence=template.confidence,
        from_memory=template.from_memory,
    )
