"""Which reading tells most about the repair for its minutes.

Score of a reading: expected fall of the Gini impurity of the repair,
G = sum_k P(k) sum_a P(a | k)^2 - sum_a P(a)^2, over its outcomes k and the repairs a (the normalised form of
edge cutting; Golovin, Krause, Ray, Near-optimal Bayesian active learning with noisy observations, NIPS 2010),
divided by minutes with hazard.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import Costs
from triage.diagnosis.likelihood import ReadingModel


@dataclass(frozen=True, slots=True)
class Candidate:
    """A reading that may be taken, with its worth."""

    column: int
    probe: Probe
    minutes: float
    """Work, set-up included [min]."""
    danger: float
    """What its hazard is worth [min]."""
    gain: float
    """Expected fall of the impurity of the repair [-]."""

    @property
    def worth(self) -> float:
        """Gain per minute of work and hazard [1/min]."""
        return self.gain / (self.minutes + self.danger)


def alive(belief: NDArray[np.float64], mass: float) -> NDArray[np.int64]:
    """The likeliest hypotheses that together hold ``mass`` of the belief, in the order of the list."""
    order = np.argsort(-belief, kind="stable")
    reach = int(np.searchsorted(np.cumsum(belief[order]), mass)) + 1
    return np.sort(order[:reach])


@dataclass(frozen=True, slots=True)
class Scorer:
    """Scores readings by what they tell about the repair.

    Most faults leave most readings as they are. The outcome table of each probe is therefore kept as its
    commonest row and, for the hypotheses that read otherwise, the difference to it; thousands of hypotheses
    then cost what the differences cost.
    """

    model: ReadingModel
    actions: Actions
    usual: NDArray[np.float64]
    """p(outcome) of the commonest row, shape (K, P), filled up with zeros."""
    change: NDArray[np.float64]
    """Difference to it, shape (K, all moved hypotheses of all probes), by probe and repair."""
    who: NDArray[np.int64]
    """Hypothesis of each column of ``change``."""
    starts: NDArray[np.int64]
    """Columns of ``change`` at which the next stretch of one probe and one repair begins."""
    twice: NDArray[np.float64]
    """2 x usual row of the probe of each stretch, shape (K, stretches)."""
    action: NDArray[np.int64]
    """Repair of each stretch."""
    probes: NDArray[np.int64]
    """Probes that have stretches."""
    first: NDArray[np.int64]
    """First stretch of each of them."""

    @classmethod
    def of_model(cls, model: ReadingModel, actions: Actions) -> "Scorer":
        """Tabulate the outcomes of a board."""
        counts = np.bincount(model.owner, minlength=len(model.axes))
        width, order = int(counts.max()), np.argsort(actions.of, kind="stable")
        usual, changes, who, keys = np.zeros((width, len(counts))), [], [], []
        for column, (end, count) in enumerate(zip(np.cumsum(counts), counts, strict=True)):
            table = model.bins[end - count : end, order].astype(float)
            common = table[:, model.commonest(column, order)]
            moved = np.flatnonzero((table != common[:, None]).any(axis=0))
            usual[:count, column] = common
            changes.append(np.pad(table[:, moved] - common[:, None], ((0, width - count), (0, 0))))
            who.append(order[moved])
            keys.append(column * len(actions.repairs) + actions.of[order[moved]])
        key = np.concatenate(keys)
        starts = np.flatnonzero(np.diff(key, prepend=-1))
        probe, action = np.divmod(key[starts], len(actions.repairs))
        first = np.flatnonzero(np.diff(probe, prepend=-1))
        twice = 2.0 * usual[:, probe]
        return cls(
            model,
            actions,
            usual,
            np.concatenate(changes, axis=1),
            np.concatenate(who),
            starts,
            twice,
            action,
            probe[first],
            first,
        )

    def gains(self, belief: NDArray[np.float64]) -> NDArray[np.float64]:
        """Expected fall of the impurity of the repair for every probe, shape (P,) [-].

        Sum over repairs of (usual x chance + change)^2, of which only repairs with a change need a second
        look.
        """
        chances = self.actions.chances(belief)
        squares = float((chances**2).sum())
        total, purity = self.usual.copy(), self.usual**2 * squares
        if self.starts.size:
            weighted = self.change * belief[self.who]
            change = np.add.reduceat(weighted, self.starts, axis=1)
            more = change * (self.twice * chances[self.action] + change)
            total[:, self.probes] += np.add.reduceat(change, self.first, axis=1)
            purity[:, self.probes] += np.add.reduceat(more, self.first, axis=1)
        return (purity / np.maximum(total, 1e-30)).sum(axis=0) - squares


def candidates(
    scorer: Scorer, belief: NDArray[np.float64], costs: Costs, sides: Mapping[str, str], taken: Sequence[Probe]
) -> tuple[Candidate, ...]:
    """The readings not taken yet that the shop can take, most gain per minute first; no gate is asked.

    taken: readings in the order they were taken.
    """
    seen, gains = set(taken), scorer.gains(belief)
    found = []
    for column, probe in enumerate(scorer.model.expectations.probes):
        if probe not in seen and costs.can_take(probe) and scorer.model.known(column):
            minutes, danger = costs.minutes(probe, taken), costs.danger(probe, sides)
            found.append(Candidate(column, probe, minutes, danger, float(gains[column])))
    return tuple(sorted(found, key=lambda c: (-c.worth, c.column)))


def cold_first(ranked: tuple[Candidate, ...], least: float) -> tuple[Candidate, ...]:
    """The candidates without the live ones as long as a cold one is worth taking (at least ``least`` gain per minute), and of the
    cold ones those of the board as it is before those for which a leg is lifted."""
    for group in (
        tuple(c for c in ranked if not c.probe.live and not c.probe.lifted),
        tuple(c for c in ranked if not c.probe.live),
    ):
        if group and group[0].worth >= least:
            return group
    return ranked
