"""Inrush thermistors: ``5D-9`` is 5 ohm cold on a disc of 9 mm."""

import re
from collections.abc import Iterator

from triage.replacement.marking.decoded import Decoded, decoded
from triage.replacement.marking.tables import code_table

_CODE = re.compile(r"(?:NTC|MF72)? ?-?(\d{1,3}(?:[.,]\d)?)D-?(\d{1,2})", re.IGNORECASE)


def read_marking(text: str) -> Iterator[Decoded]:
    """Reading of ``NTC 10D-11``, ``5D-9``, ``2.5D15``. Three digits behind the D are a varistor's, not read
    here.
    """
    match = _CODE.fullmatch(text)
    if match is None or int(match[2]) not in code_table("ntc")["disc_mm"]:
        return
    resistance = float(match[1].replace(",", "."))
    if match[1].startswith("0") or resistance == 0:
        return
    values = {"resistance": resistance, "diameter": float(f"{match[2]}e-3")}
    yield decoded("ntc", "ntc", values, note="resistance at 25 degC")
