"""What the dead part was, as far as its type or the print on it tells.

A type number leads to the catalog. Parts without one are known by their print (``T1.6AL250V``, ``5D-9``, ``104K275V X2``):
what it says stands for the old part, and what it does not say stays unknown.
"""

from triage.board.part import Part
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart

KIND_CLASSES = {
    "bipolar_transistor": "bipolar_transistor", "mosfet": "mosfet", "optocoupler": "optocoupler", "bridge": "bridge",
    "shunt_reference": "shunt_reference", "regulator": "linear_regulator", "zener": "zener", "fuse": "fuse", "ntc": "ntc",
    "varistor": "varistor", "resistor": "resistor", "fusible_resistor": "fusible_resistor", "led": "led",
    "electrolytic": "electrolytic", "tvs": "tvs",
}
"""Part kind of a board -> the catalog class it is ordered from, where there is one alone."""

_FIELDS = {
    "fuse": {"current": "in_A", "ac_voltage": "vr_Vac", "breaking_current": "breaking_A"},
    "ntc": {"resistance": "r25_ohm", "diameter": "disc_mm"},
    "varistor": {"varistor_voltage": "v1mA_V", "ac_voltage": "vac_max_V", "dc_voltage": "vdc_max_V", "diameter": "disc_mm"},
    "x_capacitor": {"capacitance": "c_F", "ac_voltage": "vr_Vac"},
    "y_capacitor": {"capacitance": "c_F", "ac_voltage": "vr_Vac"},
}
"""Class read off a print -> its values -> catalog fields."""
_WORDS = ("speed", "safety_class")
_MILLIMETRES = frozenset({"disc_mm"})


def original_part(part: Part, catalog: Catalog) -> CatalogPart | None:
    """The dead part from the catalog, else from what its print says; None where neither tells."""
    if not part.type:
        return None
    return catalog.find(part.type) or _as_printed(part)


def _as_printed(part: Part) -> CatalogPart | None:
    from triage.replacement.marking_codes import decode

    for reading in decode(part.type):
        fields = _FIELDS.get(reading.part_class)
        if fields is None or KIND_CLASSES.get(part.kind, part.kind) not in (reading.part_class, "capacitor"):
            continue
        numbers = {
            fields[key]: value * 1e3 if fields[key] in _MILLIMETRES else value
            for key, value in reading.values.items() if key in fields
        }
        texts = {key: reading.marks[key] for key in _WORDS if key in reading.marks}
        return CatalogPart(
            part.type, reading.part_class, numbers, texts, source=f"print on the old part: {reading.source}",
            confidence="read",
        )
    return None
