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
from triage.diagnosis.information import gini_gain, joint_table
from triage.diagnosis.likelihood import ReadingModel

FEW = 600
"""Up to so many hypotheses in question are scored with fine outcomes."""


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


class Scorer:
    """Scores readings by what they tell about the repair; holds the outcome tables in the order of the
    repairs.
    """

    def __init__(self, model: ReadingModel, actions: Actions, mass: float) -> None:
        """mass: hypotheses that together hold less than 1 - mass are left out when readings are scored [-].
        """
        self.model = model
        self._actions = actions
        self._mass = mass
        self._order = np.argsort(actions.of, kind="stable")
        self._few_bins = np.ascontiguousarray(model.few_bins[:, self._order])

    def gains(self, belief: NDArray[np.float64]) -> NDArray[np.float64]:
        """Expected fall of the impurity of the repair for every probe, shape (P,) [-].

        With few hypotheses in question the outcomes are fine, so that near ones are told apart; with many
        they are coarse.
        """
        keep = alive(belief, self._mass)
        if len(keep) > FEW:
            weight = belief[self._order].astype(np.float32)
            joint = joint_table(self._few_bins, weight, self._actions.of[self._order])
            return gini_gain(joint, self.model.few_owner)
        keep = keep[np.argsort(self._actions.of[keep], kind="stable")]
        weight = (belief[keep] / belief[keep].sum()).astype(np.float32)
        return gini_gain(joint_table(self.model.bins[:, keep], weight, self._actions.of[keep]), self.model.owner)


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
    """The candidates without the live ones as long as a cold one is worth taking (at least ``least`` gain per
    minute).
    """
    cold = tuple(c for c in ranked if not c.probe.live)
    return cold if cold and cold[0].worth >= least else ranked
