"""Varistor discs: one school prints the voltage at 1 mA (``10D431K``), the other the highest ac voltage
(``07K275``).
"""

import re
from collections.abc import Iterator

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.tables import code_table
from triage.units import TOLERANCE_LETTERS

_AT_1_MA = re.compile(
    r"(?:[A-Z]{0,4}-?(?P<disc>\d{1,2})[DN]|(?:TVR|ZNR|MYG) ?-?(?P<bare>\d{2}))-?"
    r"(?P<code>[1-9]\d[0-3])(?P<letter>[JKLM])?"
)
_DISC_LAST = re.compile(r"(?P<code>[1-9]\d[0-3])(?P<letter>[JKLM])?D(?P<disc>\d{1,2})")
_AC = re.compile(r"(?:[A-Z]{0,4}-?)(?P<disc>\d{2})K(?P<volts>[1-9]\d{1,2})(?:E\d?)?")
_BODY_ONLY = re.compile(r"(?P<code>[1-9]\d[0-3])K")
_TOLERANCE = {letter: TOLERANCE_LETTERS[letter] for letter in "JKM"} | {"L": 0.15}
"""Varistor makers print L for 15 %: common practice, no source."""


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``10D431K``, ``431KD10``, ``TVR07471``, ``S10K275``, and ``471K`` alone on a disc."""
    plain = text.upper().replace(" ", "")
    for pattern in (_AT_1_MA, _DISC_LAST):
        match = pattern.fullmatch(plain)
        if match:
            groups = match.groupdict()
            yield from _at_1_ma(groups["code"], groups["letter"], groups["disc"] or groups.get("bare"))
    match = _AC.fullmatch(plain)
    if match:
        yield from _ac(match["volts"], match["disc"])
    match = _BODY_ONLY.fullmatch(plain)
    if match and _level(0, _volts(match["code"])):
        yield from _at_1_ma(match["code"], "K", None)


def _volts(code: str) -> float:
    return float(f"{code[:2]}e{code[2]}")


def _level(place: int, volts: float) -> tuple[float, float, float] | None:
    """The row of the level table whose entry at this place (1 mA, ac, dc) is the voltage."""
    rows = code_table("varistor")["levels_V"]
    return next(((float(row[0]), float(row[1]), float(row[2])) for row in rows if row[place] == volts), None)


def _values(
    level: tuple[float, float, float] | None, known: dict[str, float], disc: str | None
) -> dict[str, float]:
    values = dict(known)
    if level:
        values |= {"varistor_voltage": level[0], "ac_voltage": level[1], "dc_voltage": level[2]}
    if disc:
        values["diameter"] = float(f"{int(disc)}e-3")
    return values


def _at_1_ma(code: str, letter: str | None, disc: str | None) -> Iterator[Decoded]:
    if disc and int(disc) not in code_table("varistor")["disc_mm"]:
        return
    volts = _volts(code)
    values = _values(_level(0, volts), {"varistor_voltage": volts}, disc)
    note = "" if disc else "as varistor disc; a capacitor may carry the same print: measure its capacitance"
    yield decoded(
        "varistor",
        "varistor",
        values,
        _TOLERANCE[letter] if letter else None,
        note=note,
        doubt=0 if disc else 3,
    )


def _ac(volts: str, disc: str) -> Iterator[Decoded]:
    """The ac school where the voltage is a known ac level; else the three digits are taken as the code of the
    1 mA voltage.
    """
    if int(disc) not in code_table("varistor")["disc_mm"]:
        return
    level = _level(1, float(volts))
    if level is None and len(volts) == 3 and _level(0, _volts(volts)):
        yield from _at_1_ma(volts, None, disc)
        return
    yield decoded("varistor_ac", "varistor", _values(level, {"ac_voltage": float(volts)}, disc), 0.10)
