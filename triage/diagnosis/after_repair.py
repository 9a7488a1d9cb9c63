"""What is still wrong after a repair that did not cure.

The belief before the repair is about what was wrong; each hypothesis then turns into what is left of it: the
fitted parts are good now, parts that were not fitted are as they were, and collateral may have failed again.
What should have been cured by the repair keeps only the chance that the repair itself was bad, and stands
from then on as "no part fault" (a joint, a wrong or defective new part).
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.fault import Hypothesis
from triage.diagnosis.settings import Settings


@dataclass(frozen=True, slots=True)
class Fitted:
    """Parts that were replaced, after which the adapter did not work in limits. Readings after it are of the
    new state.
    """

    refs: frozenset[str]


def remains(hypothesis: Hypothesis, refs: frozenset[str]) -> tuple[Hypothesis, Hypothesis]:
    """What is left of a hypothesis after these parts were fitted: (nothing failed again, collateral failed
    again).
    """
    root = tuple(fault for fault in hypothesis.root if fault.ref not in refs)
    collateral = tuple(fault for fault in hypothesis.collateral if fault.ref not in refs)
    if root:
        return Hypothesis(root, collateral), Hypothesis(root, hypothesis.collateral)
    # The root was replaced: what it had taken along and nobody replaced now stands by itself.
    left = Hypothesis(collateral)
    return left, left


def carry_over(
    belief: NDArray[np.float64], hypotheses: Sequence[Hypothesis], refs: Iterable[str], settings: Settings
) -> NDArray[np.float64]:
    """Chance of each hypothesis about the present state, after these parts were fitted without a cure.

    Parameters
    ----------
    belief: chances before the repair, shape (H,) [-].
    hypotheses: H hypotheses; a remaining state that is not listed goes to the listed one with the same parts
        at fault, else to its root alone, else to the first of its faults.
    refs: parts fitted.
    settings: ``bad_repair`` and ``fails_again``.
    """
    fitted = frozenset(refs)
    place = {hypothesis: i for i, hypothesis in enumerate(hypotheses)}
    by_faults: dict[frozenset[object], int] = {}
    for i, hypothesis in enumerate(hypotheses):
        by_faults.setdefault(frozenset(hypothesis.faults), i)
    now = np.zeros(len(hypotheses))
    for chance, hypothesis in zip(belief, hypotheses, strict=True):
        if hypothesis.root and hypothesis.repair <= fitted:
            now[place.get(Hypothesis(()), 0)] += chance * settings.bad_repair
            continue
        once, again = remains(hypothesis, fitted)
        split = settings.fails_again if again != once else 0.0
        for state, share in ((once, 1 - split), (again, split)):
            now[_nearest(state, place, by_faults)] += chance * share
    return now / now.sum()


def _nearest(state: Hypothesis, place: dict[Hypothesis, int], by_faults: dict[frozenset[object], int]) -> int:
    if state in place:
        return place[state]
    for faults in (frozenset(state.faults), frozenset(state.root), *(frozenset({f}) for f in state.faults)):
        if faults in by_faults:
            return by_faults[faults]
    return place.get(Hypothesis(()), 0)
