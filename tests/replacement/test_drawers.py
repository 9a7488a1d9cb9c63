"""Own stock and supplier lists: read, found, and nothing in them obeyed."""

import time
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.replacement.numbers import type_numbers
from triage.errors import CatalogError
from triage.replacement.catalog import Catalog
from triage.replacement.drawers import OWN_READING, Drawers, StockItem, load_drawers
from triage.replacement.supplier import LONGEST_CELL, clean_cell, read_number, read_supplier_list


def test_no_file_is_an_empty_stock(tmp_path: Path) -> None:
    """A technician without a list has empty drawers."""
    assert load_drawers(tmp_path).items == ()


def test_stock_from_toml(tmp_path: Path) -> None:
    """Where, how many, price, and what was read off the body."""
    (tmp_path / "drawers.toml").write_text(
        '[[item]]\ntype = "UF4007"\nquantity = 20\nwhere = "drawer 3"\nprice = 0.1\n'
        '[[item]]\ntype = "10 fusible 1 W 300 V"\nquantity = 3\nread = { v_lim_V = 350.0 }\n',
        encoding="utf-8",
    )
    drawers = load_drawers(tmp_path)
    item = drawers.item("uf 4007")
    assert item is not None and (item.quantity, item.where, item.price) == (20, "drawer 3", 0.1)
    part = Catalog().find("10 fusible 1 W 300 V")
    assert part is not None
    read = drawers.as_read(part)
    assert read.numbers["v_lim_V"] == 350.0
    assert not read.is_remembered("v_lim_V")
    assert read.is_remembered("r_ohm")


def test_stock_from_csv(tmp_path: Path) -> None:
    """Only the columns that are known are taken."""
    (tmp_path / "drawers.csv").write_text(
        'type, quantity, where, price, colour\nBC547B, 40, "box 2", "0,03", red\n1N4007, 100,,,\n', encoding="utf-8"
    )
    drawers = load_drawers(tmp_path)
    assert drawers.items[0] == StockItem("BC547B", 40, "box 2", 0.03)
    assert drawers.items[1] == StockItem("1N4007", 100, "", None)


def test_checked_items_are_the_owners_own_reading() -> None:
    """All catalog values compared with the sheet: nothing is from memory any more."""
    part = Catalog().find("T 1A 5x20 L")
    assert part is not None and part.is_remembered("in_A")
    read = Drawers([StockItem("T 1A 5x20 L", 5, checked=True)]).as_read(part)
    assert read.confidence == OWN_READING and not read.is_remembered("in_A")
    assert Drawers().as_read(part) is part


def test_all_faults_of_a_stock_list_are_told_together(tmp_path: Path) -> None:
    """One report names each item and key."""
    (tmp_path / "drawers.toml").write_text(
        '[[item]]\nquantity = 2\n[[item]]\ntype = "A"\nquantity = -1\n[[item]]\ntype = "B"\nprice = "dear"\n'
        '[[item]]\ntype = "C"\ncolour = "red"\n',
        encoding="utf-8",
    )
    with pytest.raises(CatalogError) as caught:
        load_drawers(tmp_path)
    for piece in ("item 1: no type", "item 2, quantity", "item 3, price", "item 4: unknown key 'colour'"):
        assert piece in str(caught.value)


@pytest.mark.parametrize("text", ["[[item", "item = 3", "\x00\xff"])
def test_a_broken_stock_list_is_one_error(tmp_path: Path, text: str) -> None:
    """No traceback, whatever the file holds."""
    (tmp_path / "drawers.toml").write_bytes(text.encode("latin-1"))
    with pytest.raises(CatalogError):
        load_drawers(tmp_path)


def test_supplier_list_with_known_headings(tmp_path: Path) -> None:
    """Semicolons, decimal commas and a heading in the trade's words are recognised."""
    path = tmp_path / "list.csv"
    path.write_text(
        "Order code;Manufacturer part number;Description;Unit price;Available\n"
        '1001;UF4007;"fast; 1 A";0,12 EUR;1.500\n1002;;nothing;1;1\n1003;UF-4007;again;0,10;20\n',
        encoding="utf-8-sig",
    )
    found = read_supplier_list(path)
    assert found.skipped == 1
    assert [(line.type, line.price, line.stock, line.order) for line in found.lines] == [
        ("UF4007", 0.12, 1, "1001"),
        ("UF-4007", 0.10, 20, "1003"),
    ]
    line = found.line("uf4007")
    assert line is not None and line.price == 0.10


def test_supplier_list_with_a_mapping(tmp_path: Path) -> None:
    """What the headings do not tell, the mapping does; a wrong mapping is told with the headings there are."""
    path = tmp_path / "list.csv"
    path.write_text('Artikel,Preis\n1N4007,"1,200.50"\n', encoding="utf-8")
    assert read_supplier_list(path, {"type": "Artikel", "price": "Preis"}).lines[0].price == 1200.5
    with pytest.raises(CatalogError, match="a column of type numbers"):
        read_supplier_list(path)
    with pytest.raises(CatalogError, match="no column 'Price'"):
        read_supplier_list(path, {"type": "Artikel", "price": "Price"})
    with pytest.raises(CatalogError, match="not something a line holds"):
        read_supplier_list(path, {"kind": "Artikel"})


def test_what_a_list_holds_is_data(tmp_path: Path) -> None:
    """Escapes, formulas, markup, NUL, long cells and invisible characters stay harmless text."""
    path = tmp_path / "list.csv"
    hostile = ["\x1b[2J1N4007", "=cmd|' /C calc'!A0", "[red]BC547[/red]", "A\u202eB", "x" * 5000, "A\x00B"]
    path.write_text("type\n" + "\n".join(f'"{cell}"' for cell in hostile) + "\n", encoding="utf-8")
    found = read_supplier_list(path)
    assert len(found.lines) == len(hostile)
    for line in found.lines:
        assert len(line.type) <= LONGEST_CELL
        assert all(char.isprintable() for char in line.type)
    assert found.lines[0].type == "[2J1N4007"


def test_a_broken_list_is_one_error(tmp_path: Path) -> None:
    """A cell without end, a folder, nothing at all."""
    path = tmp_path / "list.csv"
    path.write_text('type\n"' + "x" * (2 << 20), encoding="utf-8")
    with pytest.raises(CatalogError):
        read_supplier_list(path)
    with pytest.raises(CatalogError):
        read_supplier_list(tmp_path)
    path.write_text("", encoding="utf-8")
    with pytest.raises(CatalogError):
        read_supplier_list(path)


@settings(deadline=None)
@given(st.text(max_size=300))
def test_any_cell_becomes_plain_text_and_any_number_is_finite(text: str) -> None:
    """Whatever stands in a cell."""
    assert all(char.isprintable() or char == "\u00a0" or char.isspace() for char in clean_cell(text)) or not text.isprintable()
    number = read_number(text)
    assert number is None or abs(number) < float("inf")


@pytest.mark.parametrize(
    ("text", "number"),
    [
        ("0.12", 0.12),
        ("0,12", 0.12),
        ("1.234,50 EUR", 1234.5),
        ("1,234.50", 1234.5),
        ("USD 3", 3.0),
        ("1,200", 1200.0),
        ("-", None),
        ("", None),
        ("n/a", None),
        ("1'000.5", 1000.5),
        (True, None),
        (float("inf"), None),
        (7, 7.0),
    ],
)
def test_numbers_as_lists_write_them(text: object, number: float | None) -> None:
    """Decimal comma or point, thousands, currency (common practice, no source)."""
    assert read_number(text) == number


@pytest.mark.long
def test_a_list_of_100_000_rows_is_read_and_searched(tmp_path: Path) -> None:
    """The size of a large supplier's list; the time is printed, the answer checked."""
    names = type_numbers(100_000, seed=9)
    path = tmp_path / "list.csv"
    path.write_text("type,price\n" + "".join(f'"{name}",{i % 97 / 100}\n' for i, name in enumerate(names)), encoding="utf-8")
    start = time.perf_counter()
    found = read_supplier_list(path)
    read = time.perf_counter() - start
    assert len(found.lines) == 100_000
    start = time.perf_counter()
    best = found.search(names[4711])
    print(f"\n100,000 rows read in {read:.2f} s, first search with its index {time.perf_counter() - start:.2f} s")
    assert best[0][0].type == names[4711] and best[0][1] == 1.0
