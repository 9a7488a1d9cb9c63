"""What a printed code on a part says, in every sensible way of reading it.

Codes without a type number: colour bands, letter and digit codes, capacitor, fuse, thermistor and varistor
prints. Type numbers are the catalog's business. Many codes mean different things on different bodies (``104``
is 100 kohm on a chip resistor and 100 nF on a disc), so all readings are returned, the usual one first;
nothing here decides what the part is.
"""

import importlib
import pkgutil
from collections.abc import Callable, Iterator
from functools import cache

from triage.errors import QuantityError
from triage.number_text import clean
from triage.replacement import marking
from triage.replacement.marking.decoded import VALUE_UNITS, Decoded
from triage.replacement.marking.preferred import (
    coarsest_series,
    is_preferred,
    nearest_preferred,
    series_values,
)

__all__ = [
    "VALUE_UNITS",
    "Decoded",
    "coarsest_series",
    "decode",
    "is_preferred",
    "nearest_preferred",
    "series_values",
]

Reader = Callable[[str], Iterator[Decoded]]


def decode(text: str) -> tuple[Decoded, ...]:
    """All sensible readings of a printed code, the usual one first; empty where there is none.

    text: as printed, in one line; bands as colour words. Never raises for any text: what cannot be a print
    (too long, control characters) has no reading.

    >>> [(reading.part_class, reading.text) for reading in decode("2A104J")]
    [('film_capacitor', '100 nF 5 % 100 V')]
    """
    try:
        plain = clean(text, "a code as printed")
    except QuantityError:
        return ()
    readings: dict[tuple[object, ...], Decoded] = {}
    for reader in _readers():
        for reading in reader(plain):
            readings.setdefault((reading.part_class, tuple(sorted(reading.values.items()))), reading)
    return tuple(sorted(readings.values(), key=lambda reading: reading.doubt))


@cache
def _readers() -> tuple[Reader, ...]:
    """The ``read_marking`` functions of the modules beside ``codes.toml``, in the order of their names."""
    found = []
    for module in pkgutil.iter_modules(marking.__path__, marking.__name__ + "."):
        reader = getattr(importlib.import_module(module.name), "read_marking", None)
        if reader is not None:
            found.append(reader)
    return tuple(found)
