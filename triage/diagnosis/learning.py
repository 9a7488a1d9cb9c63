"""What the bench's own closed jobs say about failure rates and shares: conjugate updates.

Only jobs whose repair was confirmed (the adapter works afterwards) may be counted. Formulas: Gelman et al.,
Bayesian Data Analysis, 3rd ed. (2013), sections 2.6 (gamma and Poisson) and 3.4 (multinomial and Dirichlet).
"""

from collections.abc import Hashable, Mapping, Sequence
from typing import NamedTuple, TypeVar

from triage.board.fault import Fault

POOLED_STRENGTH = 2.0
"""Jobs' worth of trust in a handbook rate, over all adapters; not tuned."""
PROFILE_STRENGTH = 10.0
"""Jobs' worth of trust in the pooled factor, for one adapter profile; not tuned."""

Key = TypeVar("Key", bound=Hashable)


class Gamma(NamedTuple):
    """Belief about a rate."""

    shape: float
    rate: float

    @property
    def mean(self) -> float:
        """Expected rate."""
        return self.shape / self.rate

    def after(self, events: float, exposure: float) -> "Gamma":
        """The belief after ``events`` in ``exposure``: shape + events, rate + exposure."""
        return Gamma(self.shape + events, self.rate + exposure)


def dirichlet(alpha: Mapping[Key, float], counts: Mapping[Key, float]) -> dict[Key, float]:
    """Parameters of a Dirichlet belief about shares after ``counts``."""
    return {key: a + counts.get(key, 0.0) for key, a in alpha.items()}


def shares(alpha: Mapping[Key, float]) -> dict[Key, float]:
    """Expected shares of a Dirichlet belief [-]."""
    total = sum(alpha.values())
    return {key: a / total for key, a in alpha.items()}


def factors(
    pooled: Sequence[Mapping[Fault, float]],
    found: Sequence[Fault],
    profile: Sequence[Mapping[Fault, float]] = (),
    found_here: Sequence[Fault] = (),
) -> dict[Fault, float]:
    """Factor on the handbook weight of each fault: (s + found) / (s + expected).

    Parameters
    ----------
    pooled: for each closed job the expected count of each fault under the handbook prior (its chances given
        that a part failed).
    found: confirmed root faults of those jobs.
    profile, found_here: the same for the jobs on this very adapter profile; they start from the pooled
        factor.
    """
    faults = {fault for job in (*pooled, *profile) for fault in job} | set(found) | set(found_here)
    result = {}
    for fault in sorted(faults):
        belief = Gamma(POOLED_STRENGTH, POOLED_STRENGTH).after(found.count(fault), sum(j.get(fault, 0.0) for j in pooled))
        expected = sum(job.get(fault, 0.0) for job in profile)
        here = Gamma(PROFILE_STRENGTH * belief.mean, PROFILE_STRENGTH).after(found_here.count(fault), expected)
        result[fault] = here.mean if profile else belief.mean
    return result
