"""The careful choice of the next reading: two-step value of information on the expected cost of the repair.

Cost of repair a under hypothesis h: minutes to do it, plus the minutes of a failed repair when it does not
    cure h; a repair that replaces more than is
needed cures too. A reading is worth what it takes off the expected cost, counting the best reading after it
(Heckerman, Breese, Rommelse, Decision-theoretic troubleshooting, Comm. ACM 38(3) (1995) 49-57). Looking ahead
is done in cost, not in
entropy: on the published test-sequencing example look-ahead on entropy stays far from the optimum.
"""

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import Costs
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.next_reading import Candidate, alive

REPAIRS = 24
"""Likeliest repairs that are weighed."""
MASS = 0.999
"""Belief that is kept for the look ahead."""


def repair_costs(
    actions: Actions,
    keep: NDArray[np.int64],
    belief: NDArray[np.float64],
    costs: Costs,
    kinds: Mapping[str, str],
    failed_minutes: float,
) -> NDArray[np.float64]:
    """Minutes of each of the likeliest repairs under each kept hypothesis, shape (repairs, len(keep))."""
    chances = actions.chances(belief)
    likeliest = np.argsort(-chances, kind="stable")[:REPAIRS]
    rows = []
    for action in likeliest[chances[likeliest] > 0]:
        cured = actions.cures(int(action))[keep]
        rows.append(costs.repair_minutes(actions.repairs[action], kinds) + failed_minutes * ~cured)
    return np.stack(rows)


def expected_cost(cost: NDArray[np.float64], weights: NDArray[np.float64]) -> NDArray[np.float64]:
    """Least expected cost over the repairs for each row of unnormalised ``weights``, shape (..., H) -> (...).
    """
    return np.min(weights @ cost.T, axis=-1)


def best(
    model: ReadingModel,
    belief: NDArray[np.float64],
    actions: Actions,
    costs: Costs,
    kinds: Mapping[str, str],
    failed_minutes: float,
    ranked: Sequence[Candidate],
    width: int = 8,
) -> Candidate | None:
    """The reading that leaves the least expected minutes, counting one more after it; None when repairing now
    is cheapest.

    Parameters
    ----------
    ranked: candidates, best first; the first ``width`` are looked at, both as first and as second reading.
    failed_minutes: what a repair that does not cure costs [min].
    """
    considered = list(ranked[:width])
    if not considered:
        return None
    keep = alive(belief, MASS)
    weight = belief[keep] / belief[keep].sum()
    cost = repair_costs(actions, keep, belief, costs, kinds, failed_minutes)
    bins = [model.bins[model.owner == c.column][:, keep].astype(float) for c in considered]
    totals = [_two_steps(i, considered, bins, weight, cost) for i in range(len(considered))]
    least = int(np.argmin(totals))
    return considered[least] if totals[least] < float(expected_cost(cost, weight)) else None


def _two_steps(
    first: int,
    considered: Sequence[Candidate],
    bins: Sequence[NDArray[np.float64]],
    weight: NDArray[np.float64],
    cost: NDArray[np.float64],
) -> float:
    """Expected minutes of taking reading ``first``, then the best second one or none, then the best repair.
    """
    branches = bins[first] * weight
    after = expected_cost(cost, branches)
    chance = branches.sum(axis=1)
    for second, candidate in enumerate(considered):
        if second == first:
            continue
        finer = branches[:, None, :] * bins[second][None, :, :]
        further = expected_cost(cost, finer).sum(axis=1) + (candidate.minutes + candidate.danger) * chance
        after = np.minimum(after, further)
    return considered[first].minutes + considered[first].danger + float(after.sum())
