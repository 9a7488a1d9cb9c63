"""The tables of codes.toml, read once when first needed."""

import tomllib
from functools import cache
from pathlib import Path
from typing import Any


@cache
def code_tables() -> dict[str, dict[str, Any]]:
    """All tables of codes.toml by name; each has ``source`` and ``confidence`` beside its own keys."""
    with Path(__file__).with_name("codes.toml").open("rb") as file:
        return tomllib.load(file)


def code_table(name: str) -> dict[str, Any]:
    """One table of codes.toml. Raises KeyError for a name that is not there."""
    return code_tables()[name]
