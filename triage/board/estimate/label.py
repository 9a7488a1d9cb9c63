"""The mains an adapter is made for, from the input line of its label."""

import re

from triage.board.part import Mains
from triage.errors import QuantityError

NOMINAL = (100.0, 110.0, 115.0, 117.0, 120.0, 127.0, 200.0, 208.0, 220.0, 230.0, 240.0)
"""Nominal mains voltages of the world; a label that prints other figures prints limits [V]. IEC 60038 and older practice."""
TOLERANCE = 0.10
"""Tolerance of the mains about its nominal voltage [-]. IEC 60038."""
PREFERRED = (230.0, 120.0, 100.0)
"""Which nominal voltage is taken out of a range, the first that lies in it [V]."""

_NUMBER = r"(\d{2,3}(?:[.,]\d+)?)"
_VOLTS = re.compile(rf"{_NUMBER}\s*(?:V[^0-9]{{0,4}})?(?:-|to|/|\u2013|\.\.\.?)\s*{_NUMBER}\s*V|{_NUMBER}\s*V", re.IGNORECASE)
_HERTZ = re.compile(r"(\d{2})(?:\s*(?:/|-)\s*\d{2})?\s*Hz", re.IGNORECASE)


def mains_of(line: str) -> Mains:
    """The mains of an input line such as ``100-240 V~ 50/60 Hz``, ``230 V~`` or ``198-253 V~ 50 Hz``.

    Nominal voltages are widened by the tolerance of the mains, other figures are taken as limits. Without a frequency it is that
    of the voltage. Raises QuantityError for a line without volts.
    """
    found = _VOLTS.search(line)
    if found is None:
        raise QuantityError("input line", repr(line[:40]), "volts as on the label, for example 100-240 V~ 50/60 Hz or 230 V~")
    first, last = (float((text or found[3]).replace(",", ".")) for text in (found[1], found[2]))
    if not 50.0 <= first <= last <= 500.0:
        raise QuantityError("input line", f"{first:g} to {last:g} V", "mains voltages from 50 to 500 V, the lower one first")
    low = first * (1.0 - TOLERANCE) if first in NOMINAL else first
    high = last * (1.0 + TOLERANCE) if last in NOMINAL else last
    nominal = first if first == last else next((volts for volts in PREFERRED if first <= volts <= last), 0.5 * (first + last))
    cycles = _HERTZ.search(line)
    frequency = float(cycles[1]) if cycles else (60.0 if nominal < 160.0 else 50.0)
    return Mains(frequency, round(low, 3), nominal, round(high, 3))
