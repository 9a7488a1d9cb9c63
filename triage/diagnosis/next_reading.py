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


def rank(
    model: ReadingModel,
    belief: NDArray[np.float64],
    actions: Actions,
    mass: float,
    columns: NDArray[np.int64],
) -> NDArray[np.float64]:
    """Gain of each of these probes under the belief, shape (len(columns),) [-]; ``columns`` in rising order.
    """
    if not len(columns):
        return np.zeros(0)
    keep = alive(belief, mass)
    keep = keep[np.argsort(actions.of[keep], kind="stable")]
    weight = (belief[keep] / belief[keep].sum()).astype(np.float32)
    wanted = np.zeros(len(model.axes), dtype=bool)
    wanted[columns] = True
    rows = np.flatnonzero(wanted[model.owner])
    joint = joint_table(model.bins[np.ix_(rows, keep)], weight, actions.of[keep])
    return gini_gain(joint, np.searchsorted(columns, model.owner[rows]))


def candidates(
    model: ReadingModel,
    belief: NDArray[np.float64],
    actions: Actions,
    mass: float,
    costs: Costs,
    sides: Mapping[str, str],
    taken: Sequence[Probe],
) -> tuple[Candidate, ...]:
    """The readings not taken yet that the shop can take, most gain per minute first; no gate is asked.

    taken: readings in the order they were taken.
    """
    probes = model.expectations.probes
    columns = np.array(
        [c for c, p in enumerate(probes) if p not in taken and costs.can_take(p) and model.known(c)], dtype=np.int64
    )
    gains = rank(model, belief, actions, mass, columns)
    found = [
        Candidate(int(c), probes[c], costs.minutes(probes[c], taken), costs.danger(probes[c], sides), float(gain))
        for c, gain in zip(columns, gains, strict=True)
    ]
    return tuple(sorted(found, key=lambda c: (-c.worth, c.column)))


def cold_first(ranked: tuple[Candidate, ...], least: float) -> tuple[Candidate, ...]:
    """The candidates without the live ones as long as a cold one is worth taking (at least ``least`` gain per
    minute).
    """
    cold = tuple(c for c in ranked if not c.probe.live)
    return cold if cold and cold[0].worth >= least else ranked
