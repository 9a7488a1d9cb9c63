"""The table of roles (``roles.toml`` beside this module): kind, values and ratings of the part in each role."""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

_TABLE = Path(__file__).with_name("roles.toml")


@dataclass(frozen=True, slots=True)
class Role:
    """What the part in a role usually is."""

    name: str
    kind: str
    value: Mapping[str, str] = field(default_factory=dict)
    """Value key -> quantity."""
    ratings: Mapping[str, str | float] = field(default_factory=dict)
    """Rating key -> figure [SI] or quantity, to be rounded up to the next usual rating."""
    link: bool = False
    """True where a wire joins the two nodes of a part that the board lacks."""
    precise: bool = False
    """True for a part of one percent, whose value is not rounded to a coarse series: others must match it."""


@cache
def roles() -> Mapping[str, Role]:
    """All roles by name."""
    table: dict[str, dict[str, Any]] = tomllib.loads(_TABLE.read_text(encoding="utf-8"))
    return {name: Role(name, **record) for name, record in table.items()}
