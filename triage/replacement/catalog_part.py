"""The record of one orderable part, as the catalog knows it.

Numbers keep the keys of the catalog files, unit at the end (``vrrm_V``, ``trr_max_s``); a key that is absent is a rating
nobody has read, and no rule may take it for granted.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field

MEMORY = "memory"
"""Confidence of a record typed from memory."""


@dataclass(frozen=True, slots=True)
class CatalogPart:
    """One part type with its ratings, where they come from and how sure they are."""

    type: str
    """Type number, or the description that one orders by: ``330k carbon film 0.25 W 250 V``."""
    part_class: str
    """Catalog class: ``schottky``, ``fuse`` ..."""
    numbers: Mapping[str, float]
    """Rating key with its unit -> value."""
    texts: Mapping[str, str] = field(default_factory=dict)
    """Case, pins, speed, safety class, notes ..."""
    markings: tuple[str, ...] = ()
    """What may be printed on the body."""
    source: str = ""
    confidence: str = MEMORY
    """``datasheet`` or ``memory``."""
    from_memory: frozenset[str] = frozenset()
    """Rating keys typed from memory in a record that is otherwise read from a sheet."""

    def number(self, *keys: str) -> float | None:
        """The first of these ratings that is known, or None."""
        for key in keys:
            value = self.numbers.get(key)
            if value is not None:
                return value
        return None

    def text(self, key: str) -> str:
        """A text of the record, empty when absent."""
        return self.texts.get(key, "")

    def is_remembered(self, key: str) -> bool:
        """Whether this rating was typed from memory, so that it must be checked before it decides on safety."""
        return self.confidence == MEMORY or key in self.from_memory
