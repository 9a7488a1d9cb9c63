"""One module per adapter family: composes physics into the operating point of a board, healthy or faulty.

Every module of this folder that defines ``FAMILY`` is a family; they are found by themselves.
"""

import importlib
import pkgutil
from collections.abc import Mapping
from functools import cache

from triage.errors import ProfileError
from triage.families.family import Family


@cache
def families() -> Mapping[str, Family]:
    """All adapter families by key."""
    found: dict[str, Family] = {}
    for entry in pkgutil.iter_modules(__path__):
        family = getattr(importlib.import_module(f"{__name__}.{entry.name}"), "FAMILY", None)
        if family is not None:
            found[family.key] = family
    return found


def family_of(key: str) -> Family:
    """The family with this key. Raises ProfileError naming the known ones."""
    if key not in families():
        raise ProfileError("family", repr(key)[:60], "one of " + ", ".join(sorted(families())))
    return families()[key]
