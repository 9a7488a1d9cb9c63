"""Readings that say the same twice: the likelihood of one given another that moves along with it.

Resistance from three nodes to ground through one unread resistor is one piece of news, not three. Taken as independent, such
readings shout down everything else as soon as the resistor is not quite what was expected, and a sound part is accused. So
each reading may have one companion among those before it (a tree over the readings; Friedman, Geiger, Goldszmidt, Bayesian
network classifiers, Machine Learning 29 (1997) 131-163): the one its expected value is most correlated with over the
specimens of the sound board. Under a fault the readings may hang together otherwise: a leak of unknown size moves all readings
across it, and a hypothesis that knows of such a tie has a companion of its own (Bayesian multinets, the same paper; from memory).
The draws are then moved to where the companion was read, by linear regression within each hypothesis (Beaumont, Zhang,
Balding, Approximate Bayesian computation in population genetics, Genetics 162 (2002) 2025-2035).
"""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from triage.diagnosis.axis import draw_width, to_axis
from triage.diagnosis.likelihood import ReadingModel

LEAST_CORRELATION = 0.7
"""Below this a reading has no companion: with two dozen specimens chance alone seldom correlates so far (p < 0.001)."""
OWN_CORRELATION, LOOSE_CORRELATION = 0.95, 0.9
"""A hypothesis has a companion of its own where the readings of its specimens are correlated so far, and less than the second
figure with the companion that the sound board has."""
FEWEST = 8
"""Specimens with a number in both readings, below which nothing is said about how they move."""


class Companions:
    """The correlations between the expected readings of one board; remembers the draws of readings that were taken."""

    def __init__(self, model: ReadingModel) -> None:
        self._model = model
        hypotheses = model.expectations.hypotheses
        self._sound = next((row for row, one in enumerate(hypotheses) if not one.faults), 0)
        self._drawn: dict[int, NDArray[np.float64]] = {}
        self._ties: dict[tuple[int, int], NDArray[np.float64]] = {}

    def of(self, column: int, before: Sequence[int]) -> int | None:
        """The companion of a probe among others, by column; None where it moves along with none of them."""
        own = self._draws(column)[self._sound]
        best, found = LEAST_CORRELATION, None
        for other in before:
            likeness = abs(_correlation(own, self._draws(other)[self._sound]))
            if likeness > best:
                best, found = likeness, other
        return found

    def own(self, column: int, before: Sequence[int], common: int | None) -> dict[int, NDArray[np.int64]]:
        """Companion -> the hypotheses that have it of their own instead of the ``common`` one of all, by column."""
        who = np.flatnonzero(self._model.apart(column, self._sound))
        if not who.size or not before:
            return {}
        ties = np.stack([self._tie(column, other, who) for other in before])
        best = ties.argmax(axis=0)
        bound = self._tie(column, common, who) if common is not None else np.zeros(len(who))
        takes = (ties[best, np.arange(len(who))] >= OWN_CORRELATION) & (bound < LOOSE_CORRELATION)
        return {before[place]: who[takes & (best == place)] for place in np.unique(best[takes])}

    def _tie(self, column: int, other: int, who: NDArray[np.int64]) -> NDArray[np.float64]:
        """Size of the correlation of two readings over the specimens of some hypotheses, shape (len(who),) [-]."""
        if (column, other) not in self._ties:
            self._ties[column, other] = np.abs(_correlations(self._draws(column)[who], self._draws(other)[who]))
        return self._ties[column, other]

    def likelihood(
        self, column: int, values: Sequence[float], companion: int, shown: float, who: NDArray[np.int64] | None = None
    ) -> NDArray[np.float64]:
        """p(readings of a probe | hypothesis, what its companion showed), shape (H,) or (len(who),) [-].

        values: readings of the probe [SI]. companion: column of the other probe. shown: its reading [SI]; OL moves nothing.
        who: the hypotheses asked for, by default all. Where the companion's reading may have been a slip, the probe counts by
        itself to that share.
        """
        rows: slice | NDArray[np.int64] = slice(None) if who is None else who
        alone = self._model.likelihood(column, values)[rows]
        seen = float(to_axis(shown, self._model.axes[companion].instrument))
        if not np.isfinite(seen):
            return alone
        moved = _moved(self._draws(column)[rows], self._draws(companion)[rows], seen)
        given = self._model.likelihood_of_draws(column, values, self._model.axes[column].at(moved), draw_width(moved))
        there = self._model.likelihood(companion, [shown])[rows]
        slip = np.minimum(self._model.chance_of_slip(companion, shown) / there, 1.0)
        return (1.0 - slip) * given + slip * alone

    def _draws(self, column: int) -> NDArray[np.float64]:
        """Expected readings on the axis of their probe, shape (H, D)."""
        if column not in self._drawn:
            samples = self._model.expectations.samples[:, column, :]
            self._drawn[column] = np.asarray(to_axis(samples, self._model.axes[column].instrument), dtype=float)
        return self._drawn[column]


def _correlation(one: NDArray[np.float64], other: NDArray[np.float64]) -> float:
    """Correlation of two readings over the specimens of one hypothesis; 0 where either moves by less than its own error."""
    return float(_correlations(one[None, :], other[None, :])[0])


def _correlations(one: NDArray[np.float64], other: NDArray[np.float64]) -> NDArray[np.float64]:
    """The same for many hypotheses, (H, D) -> (H,)."""
    both = np.isfinite(one) & np.isfinite(other)
    share = 1.0 / np.maximum(both.sum(axis=1), 1)
    off = [np.where(both, x, 0.0) for x in (one, other)]
    off = [np.where(both, x - (x.sum(axis=1) * share)[:, None], 0.0) for x in off]
    spreads = [(x**2).sum(axis=1) * share for x in off]
    told = (both.sum(axis=1) >= FEWEST) & (np.minimum(*spreads) >= 1.0)
    together: NDArray[np.float64] = (off[0] * off[1]).sum(axis=1) * share
    return np.where(told, together / np.sqrt(np.maximum(spreads[0] * spreads[1], 1e-300)), 0.0)


def _moved(draws: NDArray[np.float64], companion: NDArray[np.float64], seen: float) -> NDArray[np.float64]:
    """Draws carried along the regression on their companion to where that was read; all in standard errors, shape (H, D).

    The one in the denominator is the error of the companion's reading itself: what the meter blurs is not followed.
    """
    both = np.isfinite(draws) & np.isfinite(companion)
    count = both.sum(axis=1)
    own, other = np.where(both, draws, 0.0), np.where(both, companion, 0.0)
    share = 1.0 / np.maximum(count, 1)
    own_mean, other_mean = own.sum(axis=1) * share, other.sum(axis=1) * share
    off = np.where(both, other - other_mean[:, None], 0.0)
    together = (np.where(both, own - own_mean[:, None], 0.0) * off).sum(axis=1) * share
    slope = np.where(count >= FEWEST, together / ((off**2).sum(axis=1) * share + 1.0), 0.0)
    return np.where(both, own + slope[:, None] * np.where(both, seen - other, 0.0), draws)
