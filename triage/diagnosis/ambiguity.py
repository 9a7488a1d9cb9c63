"""Which suspects one reading cannot tell apart: expected values whose windows touch fall into one set.

(Hochwald, Bastian, A DC approach for analog fault dictionary determination, IEEE Trans. Circuits and Systems
26 (1979) 523-529.)
"""

import math
from collections.abc import Hashable, Mapping
from typing import TypeVar

Key = TypeVar("Key", bound=Hashable)


def ambiguity_sets(values: Mapping[Key, float], window: float) -> list[list[Key]]:
    """Sets of names whose values, each with a window of +-``window``, touch or overlap in a chain; by rising
    value.

    Infinite values (OL) form a set of their own.
    """
    ordered = sorted(values, key=lambda key: values[key])
    sets: list[list[Key]] = []
    for key in ordered:
        if sets:
            before = values[sets[-1][-1]]
            if values[key] == before or (math.isfinite(values[key]) and values[key] - before <= 2 * window):
                sets[-1].append(key)
                continue
        sets.append([key])
    return sets
