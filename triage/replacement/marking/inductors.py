"""Small inductors: three digits in microhenry, R at the decimal point."""

import re
from collections.abc import Iterator

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.preferred import is_preferred
from triage.units import TOLERANCE_LETTERS

_DIGITS = re.compile(r"([1-9]\d)([0-4])([JKM])?", re.ASCII)
_POINT = re.compile(r"(\d?)R(\d{1,2})([JKM])?", re.ASCII)


def read_marking(text: str) -> Iterator[Decoded]:
    """Readings of ``101K``, ``331`` and ``4R7`` as inductors; other parts carry the same codes, so these come
    last.
    """
    match = _DIGITS.fullmatch(text)
    if match:
        inductance = float(f"{match[1]}e{int(match[2]) - 6}")
    else:
        match = _POINT.fullmatch(text)
        if match is None:
            return
        inductance = float(f"{match[1] or 0}.{match[2]}e-6")
    if inductance > 0 and is_preferred(inductance, "E12"):
        tolerance = TOLERANCE_LETTERS[match[3]] if match[3] else None
        yield decoded(
            "inductor_digits", "inductor", {"inductance": inductance}, tolerance, note="as inductor", doubt=4
        )
