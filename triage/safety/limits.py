"""The limit tables beside this room's modules, and where each of their figures comes from.

Every record of a table carries ``document``, ``clause`` and ``confidence``; ``confidence`` says whether the
figure was read in a text (``verified``) or is ``from memory``. Standards are copyrighted: the tables hold
single limit values as facts and replace neither the standard nor an accredited test nor local law.
"""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

CONFIDENCES = ("verified", "from memory")
"""How surely a figure is known: read in a text, or remembered."""


@dataclass(frozen=True, slots=True)
class Source:
    """Where a limit comes from."""

    document: str
    """Document with its edition; ``common practice`` where no document says it."""
    clause: str = ""
    """Clause or table."""
    confidence: str = "from memory"
    """One of CONFIDENCES."""

    def __str__(self) -> str:
        place = f"{self.document}, {self.clause}" if self.clause else self.document
        return place if self.confidence == "verified" else f"{place} ({self.confidence})"


@cache
def table(name: str) -> Mapping[str, Any]:
    """The shipped table ``<name>.toml`` of this room, as read."""
    with (Path(__file__).resolve().parent / f"{name}.toml").open("rb") as file:
        return tomllib.load(file)


def source_of(record: Mapping[str, Any]) -> Source:
    """The source that a record of a table carries. Raises KeyError when it carries none."""
    return Source(record["document"], record.get("clause", ""), record["confidence"])
