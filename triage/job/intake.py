"""Markings typed at intake: the part they name goes into the board with the values and ratings that the catalog has for it.

A marking is a type number of the catalog, or a code that is the value itself (``104``, ``4k7J``, colour bands). Where it is
neither, the error names the nearest types, for a half-read marking to be completed.
"""

from dataclasses import replace

from triage.board.estimate.revise import MARKED, MARKED_ELSE, part_called, with_value
from triage.board.kinds import kinds
from triage.board.part import Board, Part
from triage.board.profile import RATING_UNITS
from triage.errors import EntryError
from triage.job.display import plain
from triage.job.fitting import with_part
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.marking.decoded import Decoded
from triage.replacement.marking_codes import decode
from triage.replacement.search import search

KIND_CLASSES = {"x_capacitor": ("x_capacitor",), "y_capacitor": ("y_capacitor",)}
"""Kinds whose catalog files call them by a wider one."""
MOST_NEAR = 5


def with_marking(board: Board, ref: str, marking: str, catalog: Catalog) -> tuple[Board, str]:
    """The board with what a marking says of a part, and that in one line.

    Raises EntryError for an unknown part, and for a marking that is neither a type of the catalog nor a value code for a part of
    that kind.
    """
    part = part_called(board, ref)
    found = catalog.find(marking)
    if found is not None and _fits(part, found.part_class, catalog):
        said = f"{part.ref}: {plain(found.type)}, {found.part_class.replace('_', ' ')} of the catalog"
        return _with_type(board, part, found), said
    for reading in decode(marking):
        if _fits(part, reading.part_class, catalog):
            return _with_code(board, part, reading, marking), f"{part.ref}: {plain(reading.text)}"
    wanted = f"the marking of a {part.kind.replace('_', ' ')}"
    raise EntryError(f"marking of {part.ref}", repr(plain(marking, 40)), wanted, _near(part, marking, catalog))


def _fits(part: Part, part_class: str, catalog: Catalog) -> bool:
    """Whether a catalog class may stand in the place of a part of this kind."""
    if part_class == part.kind or part_class in KIND_CLASSES.get(part.kind, ()):
        return True
    if part.kind in KIND_CLASSES or part_class in KIND_CLASSES:
        return False
    return part_class in catalog.classes and part.kind in catalog.file(part_class).kinds


def _near(part: Part, marking: str, catalog: Catalog) -> str:
    """Advice: the nearest types of fitting classes."""
    near = [one.type for one in search(catalog, marking) if _fits(part, one.part_class, catalog)][:MOST_NEAR]
    return "nearest: " + ", ".join(map(plain, near)) if near else "enter value and ratings by hand"


def _with_type(board: Board, part: Part, found: CatalogPart) -> Board:
    """The board with a type of the catalog in the position, its values no longer estimated."""
    fitted = with_part(board, part.ref, found)
    new = fitted.part(part.ref)
    known = {key: value for key, value in new.value.items() if value != part.value.get(key)}
    known |= _figures(new, found)
    spread = {key: factor for key, factor in part.spread.items() if key not in known and key != "saturation_factor"}
    tolerance = {key: width for key, width in part.tolerance.items() if key not in known}
    tolerance |= {key: _printed_tolerance(part, found, key) for key in known}
    if "saturation_factor" in new.value:
        tolerance["saturation_factor"] = 0.5
    named = replace(new, value={**new.value, **known}, tolerance=tolerance, spread=spread, origin="marking")
    return replace(fitted, parts=tuple(named if one is new else one for one in fitted.parts))


def _figures(part: Part, found: CatalogPart) -> dict[str, float]:
    """Values of the part that catalog figures give but no rule of its position asks for."""
    known = {}
    low, high = found.number("hfe_min"), found.number("hfe_max")
    if part.kind == "bipolar_transistor" and low and high:
        known["gain"] = (low * high) ** 0.5
    low, high = found.number("ctr_min_percent"), found.number("ctr_max_percent")
    if part.kind == "optocoupler" and low:
        known["transfer_ratio"] = (low * (high or 2.0 * low)) ** 0.5 / 100.0
    for key, names in (("on_resistance", ("rds_on_max_ohm",)), ("zener_voltage", ("vz_V",)), ("reference_voltage", ("vref_V",)),
                       ("capacitance", ("c_F",)), ("resistance", ("r_ohm",)), ("esr", ("z_100kHz_20C_ohm",)),
                       ("cold_resistance", ("r25_ohm",)), ("output_voltage", ("vout_V",))):
        figure = found.number(*names)
        if key in part.value and figure is not None:
            known[key] = abs(figure)
    return known


def _printed_tolerance(part: Part, found: CatalogPart, key: str) -> float:
    """Relative half-width of a value of a catalog part [-]: as its sheet says, else what is usual for the kind."""
    low, high = {"gain": ("hfe_min", "hfe_max"), "transfer_ratio": ("ctr_min_percent", "ctr_max_percent"),
                 "zener_voltage": ("vz_min_V", "vz_max_V")}.get(key, ("", ""))
    least, most = found.number(low), found.number(high)
    if least and most and most > least:
        return min((most / least) ** 0.5 - 1.0, 0.9)
    percent = found.number("c_tol_percent") if key == "capacitance" else found.number("tol_percent") if key != "esr" else None
    return percent / 100.0 if percent else 0.3 if key == "esr" else MARKED.get(part.kind, MARKED_ELSE)


def _with_code(board: Board, part: Part, reading: Decoded, marking: str) -> Board:
    """The board with the value and ratings that a code says."""
    kind = kinds()[part.kind]
    for key, value in reading.values.items():
        name = {"ac_voltage": "voltage", "dc_voltage": "voltage"}.get(key, key)
        if name in kind.values:
            board = with_value(board, part.ref, name, value, "marking", reading.tolerance)
        elif name in RATING_UNITS:
            board = with_value(board, part.ref, name, value, "marking")
    named = board.part(part.ref)
    typed = replace(named, type=plain(marking, 60), origin="marking")
    return replace(board, parts=tuple(typed if one is named else one for one in board.parts))
