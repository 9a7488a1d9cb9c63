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
"""Jobs' worth of trust in the shares of the family, for one adapter profile; not tuned."""

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


class Trust(NamedTuple):
    """What the handbook is worth against the bench's own jobs."""

    pooled: Gamma = Gamma(POOLED_STRENGTH, POOLED_STRENGTH)
    """Belief about the factor on a handbook rate before any job of the family, its exposure in expected failures."""
    profile: float = PROFILE_STRENGTH
    """Jobs' worth of trust in the shares of the family, for one adapter profile."""


def factors(
    handbook: Mapping[Fault, float],
    jobs: int,
    found: Sequence[Fault],
    jobs_here: int = 0,
    found_here: Sequence[Fault] = (),
    came_back: Sequence[Fault] = (),
    trust: Trust | None = None,
) -> dict[Fault, float]:
    """Factor on the handbook weight of each fault.

    Over a family each closed job is an exposure: so many failures of each kind were to be expected in it (gamma and Poisson). On
    one profile every closed job is one draw among the faults of that board (multinomial and Dirichlet), whose shares start from
    those of the family.

    Parameters
    ----------
    handbook: chance of each fault given that a part failed; adds up to 1 [-].
    jobs: closed jobs of the family.
    found: confirmed root faults of those jobs.
    jobs_here: those of them on this very profile.
    found_here: confirmed root faults on it.
    came_back: faults whose repair did not hold on it: each such job was one of the other faults, nobody knows which, and counts
        for them by their shares.
    """
    trust = trust or Trust()
    rate = {fault: trust.pooled.after(found.count(fault), jobs * share).mean for fault, share in handbook.items()}
    if not jobs_here:
        return rate
    family = shares({fault: share * rate[fault] for fault, share in handbook.items()})
    counts = {fault: float(found_here.count(fault)) for fault in family}
    for accused in came_back:
        others = {fault: share for fault, share in family.items() if fault != accused}
        for fault, share in (shares(others) if others else {}).items():
            counts[fault] += share
    here = shares(dirichlet({fault: trust.profile * share for fault, share in family.items()}, counts))
    return {fault: here[fault] / share if share else rate[fault] for fault, share in handbook.items()}
