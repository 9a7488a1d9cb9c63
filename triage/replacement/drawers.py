"""The technician's own stock: what lies in which drawer, how many, at what price.

The stock lies in the technician's data directory as ``drawers.toml`` or ``drawers.csv``, beside the catalog and never
inside it. An item may say that its ratings were compared with the sheet or read off the body (``checked``, ``read``): that
is what lets a safety part pass whose catalog values are from memory.

    [[item]]
    type = "10 fusible 1 W 300 V"
    quantity = 12
    where = "drawer 4"
    price = 0.08
    checked = true                  # every catalog value compared with the maker's sheet
    read = { v_lim_V = 350.0 }      # or: these figures are printed on the body or in the sheet
"""

import csv
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from triage.errors import CatalogError
from triage.replacement.catalog import Catalog, plain_number
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.supplier import clean_cell, read_number
from triage.toml_guard import read_toml

FILES = ("drawers.toml", "drawers.csv")
"""Names looked for in the data directory, in this order."""
OWN_READING = "own reading"
"""Confidence of a part whose ratings the owner has compared with the sheet."""

_KEYS = ("type", "quantity", "where", "price", "checked", "read")


@dataclass(frozen=True, slots=True)
class StockItem:
    """One kind of part in the drawers."""

    type: str
    quantity: int = 0
    where: str = ""
    price: float | None = None
    """Price of one, in the owner's currency."""
    checked: bool = False
    """The owner has compared every catalog value with the maker's sheet."""
    read: Mapping[str, float] = field(default_factory=dict)
    """Figures the owner has read off the body or the sheet, by catalog key."""


class Drawers:
    """All items, found by type number."""

    def __init__(self, items: Iterable[StockItem] = ()) -> None:
        self.items = tuple(items)
        self._by_number = {plain_number(item.type): item for item in reversed(self.items)}

    def item(self, type_number: str) -> StockItem | None:
        """The item with this type number, or None."""
        return self._by_number.get(plain_number(type_number))

    def as_read(self, part: CatalogPart) -> CatalogPart:
        """The part with what its owner has read put over the catalog's figures."""
        item = self.item(part.type)
        if item is None or not (item.checked or item.read):
            return part
        numbers = {**part.numbers, **item.read}
        if item.checked:
            return replace(part, numbers=numbers, confidence=OWN_READING, from_memory=frozenset())
        doubtful = frozenset(part.numbers) | frozenset(part.texts) if part.confidence == "memory" else part.from_memory
        return replace(part, numbers=numbers, confidence=OWN_READING, from_memory=doubtful - frozenset(item.read))

    def parts(self, catalog: Catalog) -> Iterator[tuple[CatalogPart, StockItem]]:
        """Items in stock that the catalog knows, as the owner has read them."""
        for item in self.items:
            part = catalog.find(item.type) if item.quantity > 0 else None
            if part is not None:
                yield self.as_read(part), item


def load_drawers(folder: Path) -> Drawers:
    """The stock kept in a data directory; empty where there is none.

    Raises CatalogError where the file cannot be read; every fault of its items is reported together.
    """
    for name in FILES:
        path = folder / name
        if path.is_file():
            return read_drawers(path)
    return Drawers()


def read_drawers(path: Path) -> Drawers:
    """The stock of one file, TOML or CSV by its ending. Raises CatalogError as ``load_drawers``."""
    return Drawers(_from_toml(path) if path.suffix == ".toml" else _from_csv(path))


def _from_toml(path: Path) -> list[StockItem]:
    data, _ = read_toml(path, CatalogError, path.name)
    rows = data.get("item", [])
    if not isinstance(rows, list):
        raise CatalogError(path.name, "item is not a list", "[[item]] tables")
    return _items(path.name, rows)


def _from_csv(path: Path) -> list[StockItem]:
    try:
        text = path.read_text(encoding="utf-8-sig", errors="replace").replace("\0", "")
    except OSError as error:
        raise CatalogError(path.name, f"cannot be read: {error}") from None
    try:
        rows = list(csv.DictReader(text.splitlines(), skipinitialspace=True))
    except csv.Error as error:
        raise CatalogError(path.name, f"is not CSV: {error}") from None
    if rows and "type" not in rows[0]:
        raise CatalogError(f"{path.name}, first line", "no column type", "columns " + ", ".join(_KEYS[:4]))
    return _items(path.name, [{key: row[key] for key in _KEYS[:4] if row.get(key)} for row in rows])


def _items(file: str, rows: Iterable[Any]) -> list[StockItem]:
    items, faults = [], []
    for number, row in enumerate(rows, start=1):
        try:
            items.append(_item(f"{file}, item {number}", row))
        except CatalogError as error:
            faults.append(str(error))
    if faults:
        more = f" and {len(faults) - 5} more" if len(faults) > 5 else ""
        raise CatalogError(file, " | ".join(faults[:5]) + more)
    return items


def _item(where: str, row: Any) -> StockItem:
    if not isinstance(row, dict) or not isinstance(row.get("type"), str) or not clean_cell(row["type"]):
        raise CatalogError(where, "no type", "a type number or the name of a generic part")
    if unknown := row.keys() - set(_KEYS):
        raise CatalogError(where, f"unknown key {sorted(unknown)[0]!r}", ", ".join(_KEYS))
    quantity, price = read_number(row.get("quantity", 0)), read_number(row.get("price", 0))
    if quantity is None or quantity < 0 or quantity != int(quantity):
        raise CatalogError(f"{where}, quantity", f"{row.get('quantity')!r}", "a whole number from 0 up")
    if price is None or price < 0:
        raise CatalogError(f"{where}, price", f"{row.get('price')!r}", "a price from 0 up")
    read = row.get("read", {})
    if not isinstance(read, dict) or any(isinstance(x, bool) or not isinstance(x, int | float) for x in read.values()):
        raise CatalogError(f"{where}, read", f"{read!r}", "catalog keys with figures")
    return StockItem(
        type=clean_cell(row["type"]), quantity=int(quantity), where=clean_cell(str(row.get("where", ""))),
        price=price if "price" in row else None, checked=row.get("checked") is True,
        read={key: float(value) for key, value in read.items()},
    )
