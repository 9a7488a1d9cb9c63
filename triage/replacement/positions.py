"""The table of positions: what a role asks of the part fitted there (``positions.toml`` beside this module).

Only reading and choosing; turning a position into figures is the work of ``triage.replacement.demand``.
"""

import tomllib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

from triage.board.part import Board, Part
from triage.errors import CatalogError

_TABLE = Path(__file__).with_name("positions.toml")


@dataclass(frozen=True, slots=True)
class Need:
    """One requirement of a position, as the table states it; see the head of ``positions.toml``."""

    key: str
    """Catalog field it is about."""
    source: str
    """Source of the fraction or rule, in words."""
    alternatives: tuple[str, ...] = ()
    """Fields that may stand for ``key`` where it is not given."""
    stress: tuple[str, ...] = ()
    of: str = ""
    as_: str = ""
    factor: float | None = None
    rating: str = ""
    own: bool = True
    floor: float | None = None
    floor_230: float | None = None
    floor_120: float | None = None
    ceiling: float | None = None
    ceiling_stress: tuple[str, ...] = ()
    times: float = 1.0
    power_over: str = ""
    value: tuple[str, ...] = ()
    low: float = 0.0
    high: float = 0.0
    value_at_most: str = ""
    like: str = ""
    like_rating: str = ""
    share: float = 1.0
    plus: float = 0.0
    words: tuple[str, ...] = ()
    rule: str = ""
    if_known: bool = False


@dataclass(frozen=True, slots=True)
class Position:
    """One position of the table."""

    roles: tuple[str, ...]
    classes: tuple[str, ...]
    needs: tuple[Need, ...]
    kinds: tuple[str, ...] = ()
    only_kinds: tuple[str, ...] = ()
    families: tuple[str, ...] = ()
    was: tuple[str, ...] = ()
    safety: bool = False
    same_pins: bool = False
    never: tuple[str, ...] = ()
    together: tuple[str, ...] = ()
    note: str = ""


_RENAMED = {"or": "alternatives", "as": "as_"}
_LISTS = ("alternatives", "stress", "ceiling_stress", "words")


@cache
def positions(path: Path = _TABLE) -> tuple[Position, ...]:
    """All positions of the table. Raises CatalogError where it names an unknown key or source."""
    data = tomllib.loads(path.read_text(encoding="utf-8"))
    sources: Mapping[str, str] = data["sources"]
    known = set(Position.__dataclass_fields__)
    table = []
    for record in data["position"]:
        if unknown := record.keys() - known:
            raise CatalogError(f"{path.name}, {record.get('roles')}", f"{sorted(unknown)}", ", ".join(sorted(known)))
        needs = tuple(_need(path.name, row, sources) for row in record["needs"])
        listed: dict[str, Any] = {
            key: tuple(value) if isinstance(value, list) else value for key, value in record.items()
        }
        table.append(Position(**{**listed, "needs": needs}))
    return tuple(table)


def position_of(board: Board, part: Part, dead_class: str = "") -> Position | None:
    """The position that fits a part best.

    Role before kind; among the positions of a role the one for this family, this kind and the dead part's catalog class
    (``dead_class``, empty when unknown) comes first. None when nothing fits.
    """
    role = plain_role(part.role)
    best: tuple[int, Position] | None = None
    for position in positions():
        score = _fitness(position, board, part, role, dead_class)
        if score and (best is None or score > best[0]):
            best = (score, position)
    return best[1] if best else None


def plain_role(role: str) -> str:
    """A role without its remarks: ``mains fuse, slow`` -> ``mains fuse``; ``zener (rail to base)`` -> ``zener``."""
    return role.partition(" (")[0].partition(",")[0].strip()


def _fitness(position: Position, board: Board, part: Part, role: str, dead_class: str) -> int:
    """How well a position fits a part; 0: not at all."""
    by_role = role in position.roles
    if not by_role and part.kind not in position.kinds:
        return 0
    if position.only_kinds and part.kind not in position.only_kinds:
        return 0
    if position.families and not any(word in board.family for word in position.families):
        return 0
    if position.was and dead_class not in position.was:
        return 0
    return 1 + 8 * by_role + 2 * bool(position.families) + bool(position.was and dead_class)


def _need(file: str, row: Mapping[str, Any], sources: Mapping[str, str]) -> Need:
    record: dict[str, Any] = {_RENAMED.get(key, key): value for key, value in row.items()}
    named: Sequence[str] = [record.pop(key) for key in ("value", "or_value") if key in record]
    where = f"{file}, {record.get('key')}"
    if unknown := record.keys() - set(Need.__dataclass_fields__):
        raise CatalogError(where, f"{sorted(unknown)}", ", ".join(sorted(Need.__dataclass_fields__)))
    if record.get("source") not in sources:
        raise CatalogError(f"{where}, source", f"{record.get('source')!r}", "one of " + ", ".join(sources))
    for key in _LISTS:
        record[key] = tuple(record.get(key, ()))
    return Need(**{**record, "source": sources[record["source"]], "value": tuple(named)})
