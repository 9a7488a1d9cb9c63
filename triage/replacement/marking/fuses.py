"""Fuse caps: speed, rated current, breaking capacity, rated voltage, in the order of IEC 60127-1 or as makers
turn it.
"""

import re
from collections.abc import Iterator

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.preferred import decade_digits
from triage.replacement.marking.tables import code_table

_VOLTAGE = re.compile(r"(?<![\d.,])(\d{2,3})V(?:ac|~)?", re.IGNORECASE)
_RATING = re.compile(
    r"(?P<speed>FF|TT|F|M|T)?(?P<amps>\d+(?:[.,]\d+)?|[.,]\d+)(?P<milli>m)?A(?P<breaking>[LHE])?(?P<late>FF|TT|F|M|T)?",
    re.IGNORECASE,
)


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``T3.15AL250V``, ``F2AL250V``, ``T500mAH``, ``250V 2A`` and the like."""
    packed = re.sub(r"[ /~]|-(?=\d)", "", text)
    voltage = _VOLTAGE.search(packed)
    match = _RATING.fullmatch(_VOLTAGE.sub("", packed, count=1))
    if match is None or (match["speed"] and match["late"]):
        return
    amps = match["amps"].replace(",", ".")
    current = float(f"{amps}e-3") if match["milli"] else float(amps)
    if not 0.01 <= current <= 63:
        return
    table = code_table("fuse")
    values = {"current": current}
    marks: dict[str, str] = {}
    if voltage:
        values["ac_voltage"] = float(voltage[1])
    speed = (match["speed"] or match["late"] or "").upper()
    if speed:
        marks |= {"speed": speed, "speed_text": table["speed"][speed]}
    if match["breaking"]:
        letter = match["breaking"].upper()
        least = float(table["breaking_current_A"][letter])
        values["breaking_current"] = (
            max(least, table["low_breaking_multiple"] * current) if letter == "L" else least
        )
        marks |= {"breaking_class": letter, "breaking_text": f"{table['breaking'][letter]} breaking capacity"}
    step = decade_digits(current) in table["steps"]
    note = "" if step else "not a step of IEC 60127: read it again, or a fuse to another standard"
    note = note or ("" if speed else "speed not printed")
    yield decoded("fuse", "fuse", values, marks=marks, note=note, doubt=0 if speed else 1)
