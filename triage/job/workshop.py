"""The shop's own settings: meters, drawers, suppliers' lists, what an hour costs.

They lie in the user's data directory (``$XDG_DATA_HOME/triage``), each in a file of its own that need not be there:

    instruments.toml   the meters of the shop, instead of the shipped hand multimeter
    drawers.toml       what is in stock, or drawers.csv
    shop.toml          rate, minutes, prices of new adapters, suppliers' lists (beside it)

Each is read when it is first needed and again once it has changed.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, fields
from functools import lru_cache
from pathlib import Path
from typing import Any, TypeVar, cast

from triage.errors import CatalogError, EntryError
from triage.job.display import plain
from triage.job.folder import data_directory
from triage.replacement.drawers import FILES as DRAWER_FILES
from triage.replacement.drawers import Drawers, read_drawers
from triage.replacement.supplier import COLUMNS, SupplierList, read_supplier_list
from triage.safety.decision import Shop
from triage.safety.instruments import SHIPPED, Instruments
from triage.safety.instruments import load as load_instruments
from triage.toml_guard import read_toml

T = TypeVar("T")

INSTRUMENTS, SHOP = "instruments.toml", "shop.toml"
SETTINGS = (INSTRUMENTS, *DRAWER_FILES, SHOP)
"""Every settings file there may be."""
MOST_MONEY = 1e9
"""Above this a price or rate is a slip of the pen."""


@dataclass(frozen=True, slots=True)
class Supplier:
    """One list of a supplier, as shop.toml names it."""

    file: str
    """Name of the CSV file in the data directory."""
    columns: Mapping[str, str] | None = None
    """What a line holds -> heading; None: the headings are recognised."""


@dataclass(frozen=True, slots=True)
class ShopFile:
    """What shop.toml says."""

    shop: Shop = field(default_factory=Shop)
    new_adapter: Mapping[str, float] = field(default_factory=dict)
    """Profile or title of an adapter -> price of a new one [money]."""
    suppliers: tuple[Supplier, ...] = ()


def own_instruments() -> Instruments | None:
    """The meters of instruments.toml in the data directory, or None where there is no such file."""
    path = data_directory() / INSTRUMENTS
    return _fresh(load_instruments, path) if path.is_file() else None


def shop_instruments() -> Instruments:
    """The meters of the shop: its own, else the shipped ones. Raises InstrumentError for a file with faults."""
    return own_instruments() or _fresh(load_instruments, SHIPPED)


def own_drawers() -> Drawers:
    """The stock in the data directory; empty where there is none. Raises CatalogError."""
    folder = data_directory()
    path = next((folder / name for name in DRAWER_FILES if (folder / name).is_file()), None)
    return Drawers() if path is None else _fresh(read_drawers, path)


def own_shop() -> ShopFile:
    """Rate, prices and suppliers of shop.toml; the house estimates where there is none. Raises EntryError."""
    path = data_directory() / SHOP
    return _fresh(read_shop, path) if path.is_file() else ShopFile()


def own_suppliers() -> tuple[SupplierList, ...]:
    """The suppliers' lists that shop.toml names. Raises CatalogError for a list that cannot be read."""
    return read_suppliers(data_directory(), own_shop())


def read_suppliers(folder: Path, said: ShopFile) -> tuple[SupplierList, ...]:
    """The lists that a shop file beside them names. Raises CatalogError for one that cannot be read."""
    lists = []
    for supplier in said.suppliers:
        columns = tuple(sorted(supplier.columns.items())) if supplier.columns else ()
        lists.append(_fresh(_supplier_reader(columns), folder / supplier.file))
    return tuple(lists)


@lru_cache(maxsize=32)
def _supplier_reader(columns: tuple[tuple[str, str], ...]) -> Callable[[Path], SupplierList]:
    def read(path: Path) -> SupplierList:
        return read_supplier_list(path, dict(columns) or None)

    return read


def _fresh(read: Callable[[Path], T], path: Path) -> T:
    """What a file holds, read again only when it has changed."""
    try:
        found = path.stat()
    except OSError as error:
        where = plain(str(path.parent))
        raise CatalogError(plain(path.name), f"cannot be read: {error.strerror}", f"a file in {where}") from None
    return cast(T, _read(read, path, found.st_mtime_ns, found.st_size))


@lru_cache(maxsize=32)
def _read(read: Callable[[Path], Any], path: Path, changed: int, size: int) -> Any:
    return read(path)


def read_shop(path: Path) -> ShopFile:
    """Read a shop.toml. Raises EntryError with every fault of the file in one line."""
    document, _ = read_toml(path)
    faults: list[str] = []
    known = [one.name for one in fields(Shop)]
    figures = _figures(document.get("shop", {}), "shop", [*known, "rate_per_hour"], faults)
    if "rate_per_hour" in figures:
        figures["rate"] = figures.pop("rate_per_hour")
    prices = _figures(document.get("new_adapter", {}), "new_adapter", None, faults)
    rows = document.get("supplier", [])
    if not isinstance(rows, list):
        faults.append("supplier: expected [[supplier]] tables")
        rows = []
    suppliers = tuple(filter(None, (_supplier(row, f"supplier {number}", faults) for number, row in enumerate(rows, 1))))
    faults += [
        f"{plain(key, 40)}: expected one of shop, new_adapter, supplier"
        for key in document.keys() - {"shop", "new_adapter", "supplier"}
    ]
    if faults:
        raise EntryError(plain(path.name), "; ".join(faults))
    return ShopFile(Shop(**figures), prices, suppliers)


def _figures(table: object, where: str, known: list[str] | None, faults: list[str]) -> dict[str, float]:
    """Money and minutes of a table; what is wrong with them goes to ``faults``."""
    if not isinstance(table, dict):
        faults.append(f"{where}: expected a table [{where}]")
        return {}
    found = {}
    for key, value in table.items():
        if known is not None and key not in known:
            faults.append(f"{where}, {plain(key, 40)}: expected one of {', '.join(known)}")
        elif isinstance(value, bool) or not isinstance(value, int | float) or not 0.0 <= value <= MOST_MONEY:
            faults.append(f"{where}, {plain(key, 40)}: {plain(repr(value), 40)} found, expected a figure from 0 up")
        else:
            found[key] = float(value)
    return found


def _supplier(row: object, where: str, faults: list[str]) -> Supplier | None:
    """One list; a file name must not lead out of the data directory."""
    file = row.get("file") if isinstance(row, dict) else None
    if not isinstance(row, dict) or not isinstance(file, str) or not file or Path(file).name != file or "\0" in file:
        faults.append(f"{where}, file: {plain(repr(file), 60)} found, expected the name of a CSV file beside shop.toml")
        return None
    columns = row.get("columns")
    if columns is None:
        return Supplier(file)
    named = isinstance(columns, dict) and all(key in COLUMNS and isinstance(columns[key], str) for key in columns)
    if not named:
        faults.append(f"{where}, columns: expected headings for {', '.join(COLUMNS)}")
        return None
    return Supplier(file, dict(columns))
