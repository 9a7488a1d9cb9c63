"""Reads one file of the part catalog into records and checks all of it.

A file explains and bounds its own fields (``[fields]``, ``[choices]``, ``needed``, ``ordered``), so a new part class is one
new file. Parts stand one by one (``[[part]]``), as rows that share values (``[[series]]``), or as sizes whose value is
chosen later (``[[kind]]``, see ``triage.replacement.generic``). Faults are gathered and reported together.
"""

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path
from typing import Any

from triage.errors import CatalogError
from triage.replacement.catalog_part import CatalogPart
from triage.toml_guard import read_toml

CONFIDENCES = ("datasheet", "memory")
"""Words allowed as confidence of a record."""

_RECORD_KEYS = frozenset({"type", "marking", "source", "confidence", "from_memory"})
_SERIES_KEYS = frozenset({"columns", "rows"})
_KIND_KEYS = frozenset({"lowest", "highest", "values", "decade"})
_HEAD_KEYS = frozenset(
    {"class", "title", "kinds", "needed", "ordered", "fields", "texts", "choices", "common", "rules", "grade",
     "generic", "part", "series", "kind"}
)


class CatalogFaults(CatalogError):
    """All faults of one catalog file together; ``faults`` holds them one by one."""

    def __init__(self, where: str, faults: Sequence[CatalogError]) -> None:
        self.faults = tuple(faults)
        found = faults[0] if len(faults) == 1 else f"{len(faults)} faults: " + " | ".join(map(str, faults))
        super().__init__(where if len(faults) > 1 else "", str(found))

    def __reduce__(self) -> tuple[Any, ...]:
        return CatalogFaults, (self.where, self.faults)


@dataclass(frozen=True, slots=True)
class GenericSize:
    """A size of parts without a type number; the value is chosen by the place."""

    template: CatalogPart
    """Everything but the value; its type is empty."""
    lowest: float
    """Lowest usual value [SI]."""
    highest: float
    """Highest usual value [SI]."""
    values: tuple[float, ...] = ()
    """The usual values where they are few; empty: every value of the decade."""
    decade: tuple[float, ...] = ()
    """Values of one decade (IEC 60063), where they are not the file's."""


@dataclass(frozen=True, slots=True)
class CatalogFile:
    """One file of the catalog: the parts of one class."""

    part_class: str
    title: str
    kinds: tuple[str, ...]
    """Part kinds of a board that this class can stand for."""
    parts: tuple[CatalogPart, ...]
    needed: tuple[str, ...] = ()
    """Fields that every part has, the chief ratings first."""
    sizes: tuple[GenericSize, ...] = ()
    value_key: str = ""
    """Rating key of the value chosen for a size: ``r_ohm``, ``c_F``."""
    decade: tuple[float, ...] = ()
    """Values of one decade (IEC 60063)."""


@dataclass(frozen=True, slots=True)
class _Schema:
    """What a file says about its own records."""

    file: str
    part_class: str
    fields: Mapping[str, Sequence[Any]]
    texts: Mapping[str, str]
    choices: Mapping[str, Sequence[str]]
    needed: tuple[str, ...]
    ordered: tuple[tuple[str, ...], ...]
    common: Mapping[str, Any]
    value_key: str


def read_catalog_file(path: Path) -> CatalogFile:
    """Load and check one catalog file.

    Raises CatalogFaults with every fault found, each naming file, record, key, what was found and what was expected.
    """
    data = _parse(path)
    faults = list(_head_faults(path.name, data))
    if faults:
        raise CatalogFaults(path.name, faults)
    generic = data.get("generic", {})
    schema = _Schema(
        file=path.name, part_class=data["class"], fields=data["fields"], texts=data.get("texts", {}),
        choices=data.get("choices", {}), needed=tuple(data.get("needed", ())),
        ordered=tuple(tuple(keys) for keys in data.get("ordered", ())), common=data.get("common", {}),
        value_key=generic.get("field", ""),
    )
    parts: list[CatalogPart] = []
    types: set[str] = set()
    for record in _part_records(schema, data, faults):
        name = record.get("type")
        if not isinstance(name, str) or not name.strip():
            faults.append(CatalogError(f"{path.name}, a record", "it has no type", "a type number"))
            continue
        if name in types:
            faults.append(CatalogError(f"{path.name}, {name}", "the type is there twice", "unique types"))
        types.add(name)
        wrong = list(_record_faults(schema, name, record, schema.needed))
        faults.extend(wrong)
        if not wrong:
            parts.append(_part(schema, record))
    sizes = tuple(_sizes(schema, data, faults))
    if faults:
        raise CatalogFaults(path.name, faults)
    return CatalogFile(
        part_class=schema.part_class, title=data["title"], kinds=tuple(data.get("kinds", ())), parts=tuple(parts),
        needed=schema.needed, sizes=sizes, value_key=schema.value_key, decade=tuple(generic.get("decade", ())),
    )


def _parse(path: Path) -> dict[str, Any]:
    try:
        return read_toml(path, CatalogError, path.name)[0]
    except CatalogError as error:
        raise CatalogFaults(path.name, [error]) from None


def _is_texts(found: object) -> bool:
    return isinstance(found, list) and all(isinstance(one, str) for one in found)


def _is_numbers(found: object) -> bool:
    return isinstance(found, list) and all(_is_number(one) for one in found)


def _is_tables(found: object) -> bool:
    return isinstance(found, list) and all(isinstance(one, dict) for one in found)


def _is_generic(found: object) -> bool:
    return isinstance(found, dict) and isinstance(found.get("field", ""), str) and _is_numbers(found.get("decade", []))


_SHAPES: Mapping[str, tuple[Callable[[Any], bool], str]] = {
    "kinds": (_is_texts, "a list of part kinds"),
    "needed": (_is_texts, "a list of keys"),
    "ordered": (lambda found: isinstance(found, list) and all(map(_is_texts, found)), "lists of keys, the least first"),
    "texts": (lambda found: isinstance(found, dict), "a table of keys and their meaning"),
    "choices": (lambda found: isinstance(found, dict) and all(map(_is_texts, found.values())), "lists of words by key"),
    "common": (lambda found: isinstance(found, dict), "a table of values that all parts share"),
    "generic": (_is_generic, "a table with field (a key) and decade (figures)"),
    "part": (_is_tables, "[[part]] tables"),
    "series": (
        lambda found: _is_tables(found) and all(_is_texts(one.get("columns", [])) for one in found),
        "[[series]] tables with columns (keys) and rows",
    ),
    "kind": (
        lambda found: _is_tables(found)
        and all(_is_numbers(one.get(key, [])) for one in found for key in ("values", "decade")),
        "[[kind]] tables, values and decade lists of figures",
    ),
}
"""Key of a file -> whether what stands there has the right shape, and that shape in words."""


def _head_faults(file: str, data: Mapping[str, Any]) -> Iterator[CatalogError]:
    """Faults of the head: without a sound head no record can be judged."""
    for key, kind, word in (("class", str, "the part class"), ("title", str, "a title"), ("fields", dict, "a table")):
        if not isinstance(data.get(key), kind):
            yield CatalogError(f"{file}, {key}", f"{data.get(key)!r}", word)
    for key in data.keys() - _HEAD_KEYS:
        yield CatalogError(f"{file}, {key}", "an unknown table or key", ", ".join(sorted(_HEAD_KEYS)))
    fields = data.get("fields")
    for key, spec in fields.items() if isinstance(fields, dict) else ():
        numbers = spec[:2] if isinstance(spec, list) and len(spec) == 3 else ()
        if len(numbers) != 2 or not all(_is_number(limit) for limit in numbers) or numbers[0] >= numbers[1]:
            yield CatalogError(f"{file}, fields.{key}", f"{spec!r}", "[lowest, highest, meaning]")
    for key, (is_right, word) in _SHAPES.items():
        if key in data and not is_right(data[key]):
            yield CatalogError(f"{file}, {key}", f"{data[key]!r}"[:60], word)
    if "kind" in data and not isinstance(data.get("generic"), dict):
        yield CatalogError(f"{file}, generic", "missing", "field and decade of the value, as there are [[kind]] tables")


def _part_records(schema: _Schema, data: Mapping[str, Any], faults: list[CatalogError]) -> Iterator[dict[str, Any]]:
    """Every part of the file as one flat record, rows of a series filled up with what the series shares."""
    for part in data.get("part", ()):
        yield {**schema.common, **part}
    for number, series in enumerate(data.get("series", ()), start=1):
        yield from _rows(schema, f"series {number}", series, faults)


def _rows(
    schema: _Schema, name: str, table: Mapping[str, Any], faults: list[CatalogError]
) -> Iterator[dict[str, Any]]:
    columns, rows = table.get("columns"), table.get("rows")
    where = f"{schema.file}, {name}"
    if not isinstance(columns, list) or not isinstance(rows, list) or not all(isinstance(key, str) for key in columns):
        faults.append(CatalogError(where, "columns or rows are missing or no lists", "columns, a list of names, and rows"))
        return
    shared = {key: value for key, value in table.items() if key not in _SERIES_KEYS}
    for index, row in enumerate(rows, start=1):
        if not isinstance(row, list) or len(row) != len(columns):
            faults.append(CatalogError(f"{where}, row {index}", f"{row!r}", f"{len(columns)} values"))
            continue
        yield {**schema.common, **shared, **dict(zip(columns, row, strict=True))}


def _record_faults(
    schema: _Schema, name: str, record: Mapping[str, Any], needed: Sequence[str]
) -> Iterator[CatalogError]:
    """Every fault of one record."""
    for key in needed:
        if key not in record:
            yield CatalogError(f"{schema.file}, {name}, {key}", "missing", "a value, as each part of the class has one")
    for key, value in record.items():
        if key not in _RECORD_KEYS:
            yield from _value_faults(schema, name, key, value)
    if record.get("confidence") not in CONFIDENCES:
        yield CatalogError(
            f"{schema.file}, {name}, confidence", f"{record.get('confidence')!r}", " or ".join(CONFIDENCES)
        )
    if not isinstance(record.get("source"), str) or not record["source"]:
        yield CatalogError(f"{schema.file}, {name}, source", f"{record.get('source')!r}", "where the values were read")
    for key in ("marking", "from_memory"):
        words = record.get(key, [])
        if not isinstance(words, list) or not all(isinstance(word, str) for word in words):
            yield CatalogError(f"{schema.file}, {name}, {key}", f"{words!r}", "a list of texts")
        elif key == "from_memory":
            for word in words:
                if word not in record:
                    yield CatalogError(f"{schema.file}, {name}, from_memory", f"{word!r}", "keys of this record")
    yield from _order_faults(schema, name, record)


def _value_faults(schema: _Schema, name: str, key: str, value: Any) -> Iterator[CatalogError]:
    where = f"{schema.file}, {name}, {key}"
    if key in schema.fields:
        low, high, meaning = schema.fields[key]
        if not _is_number(value):
            yield CatalogError(where, f"{value!r}", f"a number: {meaning}")
        elif not low <= value <= high:
            yield CatalogError(where, f"{value:g}", f"{low:g} to {high:g}: {meaning}")
    elif key in schema.choices:
        if value not in schema.choices[key]:
            yield CatalogError(where, f"{value!r}", " or ".join(schema.choices[key]))
    elif key in schema.texts:
        if not isinstance(value, str):
            yield CatalogError(where, f"{value!r}", "a text")
    else:
        yield CatalogError(where, "a key the file head does not explain", "a key of [fields], [texts] or [choices]")


def _order_faults(schema: _Schema, name: str, record: Mapping[str, Any]) -> Iterator[CatalogError]:
    """Faults of physical order, such as a minimum above the typical value."""
    for keys in schema.ordered:
        known = [(key, record[key]) for key in keys if _is_number(record.get(key))]
        for (low_key, low), (high_key, high) in pairwise(known):
            if low > high:
                yield CatalogError(
                    f"{schema.file}, {name}, {low_key}", f"{low:g}", f"at most {high_key} = {high:g}"
                )


def _part(schema: _Schema, record: Mapping[str, Any]) -> CatalogPart:
    numbers: dict[str, float] = {}
    texts: dict[str, str] = {}
    for key, value in record.items():
        if key in _RECORD_KEYS:
            continue
        if key in schema.fields and _is_number(value):
            numbers[key] = float(value)
        elif isinstance(value, str) and value:
            texts[key] = value
    remembered = record.get("from_memory")
    return CatalogPart(
        type=str(record.get("type", "")), part_class=schema.part_class, numbers=numbers, texts=texts,
        markings=tuple(map(str, record.get("marking", ()))), source=str(record.get("source", "")),
        confidence=str(record.get("confidence", "")), from_memory=frozenset(remembered) if remembered else frozenset(),
    )


def _sizes(schema: _Schema, data: Mapping[str, Any], faults: list[CatalogError]) -> Iterator[GenericSize]:
    needed = tuple(key for key in schema.needed if key != schema.value_key)
    for table in data.get("kind", ()):
        name = str(table.get("kind", "a kind"))
        lists = [table.get(key, []) for key in ("values", "decade")]
        if not all(isinstance(one, list) and all(map(_is_number, one)) for one in lists):
            faults.append(CatalogError(f"{schema.file}, {name}", "values or decade", "lists of numbers"))
            continue
        values, decade = map(tuple, lists)
        lowest, highest = table.get("lowest", min(values, default=None)), table.get("highest", max(values, default=None))
        if not _is_number(lowest) or not _is_number(highest) or not 0 < lowest <= highest:
            faults.append(CatalogError(f"{schema.file}, {name}", f"{lowest!r} to {highest!r}", "lowest and highest value"))
            continue
        sized = {key: value for key, value in table.items() if key not in _KIND_KEYS}
        for record in _rows(schema, name, sized, faults):
            wrong = list(_record_faults(schema, name, record, needed))
            faults.extend(wrong)
            if not wrong:
                yield GenericSize(_part(schema, record), float(lowest), float(highest), values, decade)


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and math.isfinite(value)
