"""Lists of suppliers: type numbers with price and stock from a CSV file, 100,000 rows and more.

A line of a supplier says what can be bought, not what it stands: ratings come from the catalog alone. Whatever the file
holds is data: control characters are dropped, long cells cut, and a row that cannot be used is counted, never obeyed.
"""

import csv
import math
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any, TextIO

from triage.errors import CatalogError

if TYPE_CHECKING:
    from triage.replacement.search import MarkingList

COLUMNS = {
    "type": ("type", "part", "part number", "mpn", "manufacturer part number", "mfr part #", "article"),
    "price": ("price", "unit price", "price each"), "stock": ("stock", "quantity", "qty", "available"),
    "text": ("text", "description", "details"), "order": ("order", "order code", "order number", "sku"),
}
"""What a line holds -> headings it is known by when no mapping is given."""

LONGEST_CELL = 120
"""Characters kept of one cell."""
LONGEST_ROW = 1 << 20
"""Characters of one cell that the reader takes before it calls the file broken."""

_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f\u200b-\u200f\u2028-\u202e\u2060-\u206f\ufeff]+")
_NUMBER = re.compile(r"[-+]?(?:\d[\d.,' \u00a0]*|[.,]\d+)")


@dataclass(frozen=True, slots=True)
class SupplierLine:
    """One line of a supplier's list."""

    type: str
    price: float | None = None
    stock: int | None = None
    text: str = ""
    order: str = ""


@dataclass(frozen=True)
class SupplierList:
    """The lines of one file, and how many could not be used."""

    name: str
    lines: Sequence[SupplierLine]
    skipped: int
    """Rows without a type number."""

    @cached_property
    def _markings(self) -> "MarkingList":
        from triage.replacement.search import MarkingList

        return MarkingList((line.type,) for line in self.lines)

    def search(self, marking: str, limit: int = 10) -> list[tuple[SupplierLine, float]]:
        """Lines whose type number is most like a marking as typed, with the score, best first."""
        return [(self.lines[number], score) for number, score, _ in self._markings.nearest(marking, limit)]

    @cached_property
    def _by_number(self) -> Mapping[str, SupplierLine]:
        from triage.replacement.catalog import plain_number

        found: dict[str, SupplierLine] = {}
        for line in self.lines:
            had = found.get(number := plain_number(line.type))
            if had is None or (line.price is not None and (had.price is None or line.price < had.price)):
                found[number] = line
        return found

    def line(self, type_number: str) -> SupplierLine | None:
        """The cheapest line of this type number, or None."""
        from triage.replacement.catalog import plain_number

        return self._by_number.get(plain_number(type_number))


def read_supplier_list(path: Path, columns: Mapping[str, str] | None = None) -> SupplierList:
    """Read a supplier's CSV.

    ``columns`` maps what a line holds (a key of COLUMNS) to the heading in the file; without it the headings are
    recognised. Separator (comma, semicolon, tab) and decimal comma are recognised too. Raises CatalogError when the file
    cannot be read or has no column of type numbers.
    """
    try:
        with path.open(encoding="utf-8-sig", errors="replace", newline="") as file:
            return _read(path.name, file, columns)
    except (OSError, csv.Error) as error:
        raise CatalogError(path.name, f"cannot be read: {error}", "a CSV file with a line of headings") from None


def _read(name: str, file: TextIO, columns: Mapping[str, str] | None) -> SupplierList:
    lines = _without_nul(file)
    head = next(lines, "")
    separator = max(",;\t|", key=head.count)
    old = csv.field_size_limit(LONGEST_ROW)
    try:
        headings = next(csv.reader([head], delimiter=separator), [])
        places = _places(name, headings, columns)
        found, skipped = [], 0
        for row in csv.reader(lines, delimiter=separator):
            line = _line(row, places)
            if line is None:
                skipped += bool(row)
            else:
                found.append(line)
    finally:
        csv.field_size_limit(old)
    return SupplierList(name, found, skipped)


def _without_nul(file: TextIO) -> Iterator[str]:
    return (line.replace("\0", "") for line in file)


def _places(name: str, headings: Sequence[str], columns: Mapping[str, str] | None) -> dict[str, int]:
    plain = [clean_cell(heading).casefold() for heading in headings]
    places: dict[str, int] = {}
    for what, heading in (columns or {}).items():
        if what not in COLUMNS:
            raise CatalogError(f"column {what!r}", "not something a line holds", ", ".join(COLUMNS))
        if heading.casefold() not in plain:
            shown = ", ".join(clean_cell(heading) for heading in headings[:12])
            raise CatalogError(f"{name}, first line", f"no column {heading!r}", f"one of {shown}")
        places[what] = plain.index(heading.casefold())
    for what, known in COLUMNS.items():
        if what not in places and (columns is None or what == "type"):
            place = next((plain.index(word) for word in known if word in plain), None)
            if place is not None:
                places[what] = place
    if "type" not in places:
        shown = ", ".join(clean_cell(heading) for heading in headings[:12])
        raise CatalogError(f"{name}, first line", f"columns {shown}", "a column of type numbers", "name it in the mapping")
    return places


def _line(row: Sequence[str], places: Mapping[str, int]) -> SupplierLine | None:
    def cell(what: str) -> str:
        place = places.get(what, -1)
        return clean_cell(row[place]) if 0 <= place < len(row) else ""

    type_number = cell("type")
    if not type_number:
        return None
    stock = read_number(cell("stock"))
    return SupplierLine(
        type=type_number, price=read_number(cell("price")), stock=None if stock is None else int(stock), text=cell("text"),
        order=cell("order"),
    )


def clean_cell(text: str) -> str:
    """A cell as plain data: no control characters, at most LONGEST_CELL characters."""
    return _CONTROL.sub(" ", text[: 4 * LONGEST_CELL]).strip()[:LONGEST_CELL]


def read_number(cell: Any) -> float | None:
    """A number as written in a list, with decimal point or comma and with or without currency; None where there is none.

    >>> read_number("1.234,50 EUR"), read_number("0,12"), read_number("1,200")
    (1234.5, 0.12, 1200.0)
    """
    if isinstance(cell, int | float) and not isinstance(cell, bool):
        return float(cell) if math.isfinite(cell) else None
    match = _NUMBER.search(str(cell)[:LONGEST_CELL])
    if match is None:
        return None
    text = match[0].replace(" ", "").replace("\u00a0", "").replace("'", "")
    comma, point = text.rfind(","), text.rfind(".")
    if comma > point:
        is_grouping = point < 0 and re.fullmatch(r"[-+]?[1-9]\d{0,2}(,\d{3})+", text)
        text = text.replace(",", "") if is_grouping else text.replace(".", "").replace(",", ".")
    else:
        text = text.replace(",", "")
    try:
        return float(text.rstrip("."))
    except ValueError:
        return None
