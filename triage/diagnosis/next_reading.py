"""Which reading tells most about the repair for its minutes.

Score of a reading: expected fall of the Gini impurity of the repair,
G = sum_k P(k) sum_a P(a | k)^2 - sum_a P(a)^2, over its outcomes k and the repairs a (the normalised form of
edge cutting; Golovin, Krause, Ray, Near-optimal Bayesian active learning with noisy observations, NIPS 2010),
divided by minutes with hazard.
"""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import PLUG_FUNCTIONS, Costs
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
class Stretches:
    """All stretches of one length: so many hypotheses with the same repair that read a probe otherwise than usual."""

    change: NDArray[np.float64]
    """Difference of their outcome tables to the usual row, shape (length, K, stretches); by probe."""
    who: NDArray[np.int64]
    """The hypotheses, shape (length, stretches)."""
    action: NDArray[np.int64]
    """Repair of each stretch."""
    probes: NDArray[np.int64]
    """Probes that have such stretches."""
    first: NDArray[np.int64]
    """First stretch of each of them."""


@dataclass(frozen=True, slots=True)
class Scorer:
    """Scores readings by what they tell about the repair.

    Most faults leave most readings as they are. The outcome table of each probe is therefore kept as its commonest row and, for
    the hypotheses that read otherwise, the difference to it; thousands of hypotheses then cost what the differences cost. They
    are summed over each stretch of one probe and one repair; stretches of one length lie together: whole arrays are added.
    """

    model: ReadingModel
    actions: Actions
    usual: NDArray[np.float64]
    """p(outcome) of the commonest row, shape (K, P), filled up with zeros."""
    stretches: tuple[Stretches, ...]

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
        change, hypotheses, key = np.concatenate(changes, axis=1), np.concatenate(who), np.concatenate(keys)
        starts = np.flatnonzero(np.diff(key, prepend=-1))
        lengths = np.diff(starts, append=len(key))
        found = []
        for length in np.unique(lengths):
            own = starts[lengths == length]
            place = own[None, :] + np.arange(length)[:, None]
            probe, action = np.divmod(key[own], len(actions.repairs))
            first = np.flatnonzero(np.diff(probe, prepend=-1))
            planes = np.ascontiguousarray(change[:, place].transpose(1, 0, 2))
            found.append(Stretches(planes, hypotheses[place], action, probe[first], first))
        return cls(model, actions, usual, tuple(found))

    def gains(self, belief: NDArray[np.float64]) -> NDArray[np.float64]:
        """Expected fall of the impurity of the repair for every probe, shape (P,) [-].

        Sum over repairs of (usual x chance + change)^2, multiplied out: only repairs with a change need a second look.
        """
        chances = self.actions.chances(belief)
        squares = float((chances**2).sum())
        total, purity = self.usual.copy(), self.usual**2 * squares
        for one in self.stretches:
            change = one.change[0] * belief[one.who[0]]
            for plane, who in zip(one.change[1:], one.who[1:], strict=True):
                change += plane * belief[who]
            total[:, one.probes] += np.add.reduceat(change, one.first, axis=1)
            mixed = np.add.reduceat(change * chances[one.action], one.first, axis=1)
            change *= change
            purity[:, one.probes] += 2.0 * self.usual[:, one.probes] * mixed + np.add.reduceat(change, one.first, axis=1)
        return (purity / np.maximum(total, 1e-30)).sum(axis=0) - squares


COLD, LIFTED, LIVE = range(3)
"""Stages of readings: the board as it is, with a leg lifted, powered."""


@dataclass(frozen=True, slots=True)
class Offers:
    """What every reading of a board costs, tabulated."""

    probes: tuple[Probe, ...]
    possible: NDArray[np.bool_]
    """True where the shop can take the reading and something is known of it, shape (P,)."""
    stage: NDArray[np.int64]
    """COLD, LIFTED or LIVE, shape (P,)."""
    work: NDArray[np.float64]
    """Minutes without set-up, shape (P,)."""
    danger: NDArray[np.float64]
    """What the hazard is worth [min], shape (P,)."""
    group: NDArray[np.int64]
    """Place of each reading's set-up in ``examples``, shape (P,)."""
    examples: tuple[Probe, ...]
    """A reading with each set-up there is."""
    costs: Costs

    @classmethod
    def of_model(cls, model: ReadingModel, costs: Costs, sides: Mapping[str, str]) -> "Offers":
        """Tabulate the readings of a board."""
        probes = model.expectations.probes
        setups = [(probe.condition, probe.lifted, probe.function in PLUG_FUNCTIONS) for probe in probes]
        places = {setup: place for place, setup in enumerate(dict.fromkeys(setups))}
        return cls(
            probes,
            np.array([costs.can_take(probe) and model.known(column) for column, probe in enumerate(probes)], dtype=bool),
            np.array([LIVE if probe.live else LIFTED if probe.lifted else COLD for probe in probes]),
            np.array([costs.reading[probe.function] for probe in probes]),
            np.array([costs.danger(probe, sides) for probe in probes]),
            np.array([places[setup] for setup in setups]),
            tuple(probes[setups.index(setup)] for setup in places),
            costs,
        )

    def minutes(self, taken: Sequence[Probe]) -> NDArray[np.float64]:
        """Minutes of every reading after those ``taken``, set-up included, shape (P,) [min]."""
        setup = np.array([self.costs.minutes(probe, taken) - self.costs.reading[probe.function] for probe in self.examples])
        return self.work + setup[self.group]


@dataclass(frozen=True, slots=True)
class Ranking:
    """The readings not taken yet that the shop can take, most gain per minute first; no gate is asked."""

    offers: Offers
    order: NDArray[np.int64]
    """Columns of the readings, best first."""
    minutes: NDArray[np.float64]
    """Work and set-up of every reading, shape (P,) [min]."""
    gains: NDArray[np.float64]
    """Expected fall of the impurity of the repair, shape (P,) [-]."""

    @classmethod
    def of_belief(cls, scorer: Scorer, offers: Offers, belief: NDArray[np.float64], taken: Sequence[Probe]) -> "Ranking":
        """Score all readings; ``taken``: those taken, in their order."""
        seen = set(taken)
        gains, minutes = scorer.gains(belief), offers.minutes(taken)
        open_ = offers.possible.copy()
        if seen:
            open_ &= np.array([probe not in seen for probe in offers.probes], dtype=bool)
        order = np.argsort(-gains / (minutes + offers.danger), kind="stable")
        return cls(offers, order[open_[order]], minutes, gains)

    def best(self, allowed: Callable[[Probe], bool], least: float, most: int = 8) -> tuple[Candidate, ...]:
        """The best readings that are allowed, at most ``most``: those of the board as it is as long as one of them is worth
        taking (at least ``least`` gain per minute), else the unpowered ones with a leg lifted among them, else all."""
        for last in (COLD, LIFTED):
            group = self._first(self.order[self.offers.stage[self.order] <= last], allowed, most)
            if group and group[0].worth >= least:
                return group
        return self._first(self.order, allowed, most)

    def _first(self, columns: NDArray[np.int64], allowed: Callable[[Probe], bool], most: int) -> tuple[Candidate, ...]:
        found: list[Candidate] = []
        for column in map(int, columns):
            if allowed(self.offers.probes[column]):
                found.append(self._candidate(column))
                if len(found) == most:
                    break
        return tuple(found)

    def _candidate(self, column: int) -> Candidate:
        minutes, danger = float(self.minutes[column]), float(self.offers.danger[column])
        return Candidate(column, self.offers.probes[column], minutes, danger, float(self.gains[column]))
