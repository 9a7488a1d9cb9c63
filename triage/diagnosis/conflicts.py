"""What is left when nothing on the list fits: sets of parts that can together explain the odd readings.

Each reading that a sound board does not show is a conflict: at least one of the parts that can move this
    reading is not good. A set of parts that meets
every conflict is a candidate (de Kleer, Williams, Diagnosing multiple faults, Artificial Intelligence 32
(1987) 97-130; Reiter, A theory of diagnosis from first principles, ibid. 57-95).
"""

from collections.abc import Collection, Iterable, Sequence
from itertools import combinations

import numpy as np

from triage.board.evidence import Reading
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import tail

MOVES = 0.5
"""A fault moves a reading when its cells and those of the sound board overlap by less than this share [-]."""


def minimal_sets(sets: Iterable[Collection[str]]) -> list[frozenset[str]]:
    """The sets that contain no other one, each once, by size and name."""
    ordered = sorted({frozenset(s) for s in sets}, key=lambda s: (len(s), sorted(s)))
    kept: list[frozenset[str]] = []
    for candidate in ordered:
        if not any(smaller <= candidate for smaller in kept):
            kept.append(candidate)
    return kept


def hitting_sets(conflicts: Iterable[Collection[str]], largest: int = 4) -> list[frozenset[str]]:
    """The smallest sets that share a member with every conflict, up to a size; none when a conflict is empty.
    """
    wanted = minimal_sets(conflicts)
    members = sorted(set().union(*wanted)) if wanted else []
    found: list[frozenset[str]] = []
    for size in range(1, largest + 1):
        for chosen in combinations(members, size):
            candidate = frozenset(chosen)
            if all(candidate & conflict for conflict in wanted) and not any(s <= candidate for s in found):
                found.append(candidate)
    return found


def conflicts_of(model: ReadingModel, readings: Sequence[Reading], limit: float) -> list[frozenset[str]]:
    """For each reading that the sound board does not explain, the parts whose faults move that reading.

    limit: a reading less probable than this on the sound board is a conflict [-].
    """
    hypotheses = model.expectations.hypotheses
    sound = next((i for i, h in enumerate(hypotheses) if not h.root), None)
    if sound is None:
        return []
    single = [i for i, h in enumerate(hypotheses) if len(h.root) == 1 and not h.collateral]
    found = []
    for reading in readings:
        column = model.expectations.column(reading.probe)
        if column is None or not model.known(column):
            continue
        tables = model.sound_table(column, np.array([sound, *single]))
        if tail(tables[0], int(model.axes[column].index(reading.value))) >= limit:
            continue
        overlap = np.minimum(tables[0], tables[1:]).sum(axis=1)
        found.append(frozenset(hypotheses[i].root[0].ref for i, share in zip(single, overlap, strict=True) if share < MOVES))
    return [conflict for conflict in found if conflict]
