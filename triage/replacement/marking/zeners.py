"""Zener voltages printed with V at the decimal point, with or without the Pro Electron series and tolerance
letter.
"""

import re
from collections.abc import Iterator

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.tables import code_table

_CODE = re.compile(
    r"(?:(?P<series>BZ[A-Z]\d{2})-?|(?P<short>55|79|83|84|85|97)(?=[A-E]))?(?P<letter>[A-E])?(?P<volts>\d{1,3})(?:V(?P<part>\d)?)?"
)


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``BZX55C4V7``, ``55C12``, ``C5V6`` and ``5V6``."""
    match = _CODE.fullmatch(text.upper().replace(" ", ""))
    if match is None or not (
        "V" in match.group() or (match["letter"] and (match["series"] or match["short"]))
    ):
        return
    volts = float(f"{match['volts']}.{match['part'] or 0}")
    if not 1.8 <= volts <= 300:
        return
    tolerance = code_table("zener")["tolerance"][match["letter"]] if match["letter"] else None
    yield decoded(
        "zener",
        "zener",
        {"zener_voltage": volts},
        tolerance,
        doubt=0 if match["letter"] or match["part"] else 2,
    )
