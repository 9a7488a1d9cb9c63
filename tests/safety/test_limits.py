"""Every record of every table of the room says where its figures come from, and how surely."""

from collections.abc import Iterator
from pathlib import Path

import pytest

import triage.safety
from triage.safety.limits import CONFIDENCES, Source, source_of, table

NAMES = sorted(path.stem for path in Path(triage.safety.__file__).parent.glob("*.toml"))
COMPUTED = {"inspection": "measure", "retest": "limit"}
"""Table -> the key of a record whose source comes with the limit computed for it."""


def records(name: str) -> Iterator[tuple[str, dict]]:
    """Every record of a table with its place; functions of instruments and the rows of levels lie one
    deeper."""
    for key, value in table(name).items():
        for number, record in enumerate(value if isinstance(value, list) else [value]):
            if name == "instruments":
                yield from ((f"{key} {number} {f['key']}", f) for f in record["function"])
            elif name == "insulation" and key == "creepage":
                yield from ((f"{key} {inner}", row) for inner, row in record.items())
            else:
                yield f"{key} {number}", record


@pytest.mark.parametrize("name", NAMES)
def test_every_record_has_document_and_confidence(name) -> None:
    bare = []
    for place, record in records(name):
        if COMPUTED.get(name, "") in record or (name == "decision" and place.startswith("work")):
            continue
        if not record.get("document") or record.get("confidence") not in CONFIDENCES:
            bare.append(place)
    assert bare == []


def test_source_reads_as_one_line_and_says_what_is_from_memory() -> None:
    assert str(source_of({"document": "IEC 1", "clause": "table 2", "confidence": "verified"})) == "IEC 1, table 2"
    assert str(Source("common practice")) == "common practice (from memory)"
