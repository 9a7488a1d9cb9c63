"""From prior and evidence to the chance of each hypothesis: exact Bayes over one array.

Evidence is taken in a fixed order of its own, so that a job gives the same belief to the last bit in whatever
order its entries were made. Readings of one probe are taken together (the part does not change between them), those of
probes that move along with each other one given the other.
"""

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cached_property, partial

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Evidence, Reading, Sign, Symptom
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.companion import Companions
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.settings import Settings
from triage.diagnosis.signs import complaint_likelihood, sign_likelihood, sign_table
from triage.errors import EntryError

_SMALLEST = 1e-300
MOST_TERMS = 256
"""Terms remembered for a board; the oldest go first."""
WHOLE = Sign("sound")
"""The whole adapter was looked at, and nothing was found."""


@dataclass(frozen=True)
class Likelihoods:
    """All that is needed to weigh evidence on one board."""

    expectations: Expectations
    readings: ReadingModel
    kinds: Mapping[str, str]
    """ref -> part kind, for signs at a part."""
    settings: Settings
    prior: NDArray[np.float64] | None = None
    """Chances of the hypotheses before anything was seen, shape (H,) [-]; see ``complaint_likelihood``."""
    _known: dict[object, NDArray[np.float64]] = field(default_factory=dict, repr=False, compare=False)
    """Terms worked out before: a job asks for those of its earlier entries at every further one."""

    def log(self, evidence: Iterable[Evidence]) -> NDArray[np.float64]:
        """log p(evidence | hypothesis), shape (H,), independent of the order of the evidence.

        A reading that the board has no expectation for says nothing. Raises EntryError for a sign or
        complaint it does not know.
        """
        total = np.zeros(len(self.expectations.hypotheses))
        for term in self.terms(evidence).values():
            total += term
        return total

    def terms(self, evidence: Iterable[Evidence]) -> dict[Symptom | Sign | Probe, NDArray[np.float64]]:
        """The parts that add up to ``log``, by complaint, sign and probe, in their fixed order: each independent of the others,
        but for a reading that counts given its companion before it."""
        seen: set[Symptom | Sign] = set()
        taken: dict[Probe, list[float]] = {}
        for entry in evidence:
            if isinstance(entry, Reading):
                if np.isnan(entry.value):
                    raise EntryError(f"reading {entry.probe}", "no number", "a value or OL")
                taken.setdefault(entry.probe, []).append(entry.value)
            else:
                seen.add(entry)
        if WHOLE in seen:
            # A look all over has taken the places outside the board in.
            seen -= {Sign(WHOLE.sign, place) for place in sign_table().at_place}
        found: dict[Symptom | Sign | Probe, NDArray[np.float64]] = {}
        for entry in sorted(seen, key=repr):
            found[entry] = self._term(entry, partial(self._seen, entry))
        before: dict[int, float] = {}
        for probe in sorted(taken):
            column, values = self.expectations.column(probe), tuple(sorted(taken[probe]))
            if column is None or not self.readings.known(column):
                continue
            other = self.companions.of(column, tuple(before))
            if other is None:
                term = self._term((probe, values), partial(self.readings.likelihood, column, values))
            else:
                given = partial(self.companions.likelihood, column, values, other, before[other])
                term = self._term((probe, values, other, before[other]), given)
            found[probe] = self._with_own(term, column, values, before, other)
            before[column] = values[len(values) // 2]
        return found

    def _with_own(
        self, term: NDArray[np.float64], column: int, values: Sequence[float], before: Mapping[int, float], common: int | None
    ) -> NDArray[np.float64]:
        """The term of a reading with the hypotheses that have a companion of their own."""
        own = self.companions.own(column, tuple(before), common)
        if own:
            term = term.copy()
        for other, who in own.items():
            given = self.companions.likelihood(column, values, other, before[other], who)
            term[who] = np.log(np.maximum(given, _SMALLEST))
        return term

    @cached_property
    def companions(self) -> Companions:
        """Which readings move along with which."""
        return Companions(self.readings)

    def _seen(self, entry: Symptom | Sign) -> NDArray[np.float64]:
        if isinstance(entry, Symptom):
            return complaint_likelihood(entry, self.expectations, self.settings, self.prior)
        return sign_likelihood(entry, self.expectations, self.kinds)

    def _term(self, key: object, chance: Callable[[], NDArray[np.float64]]) -> NDArray[np.float64]:
        """Logarithm of a chance, worked out once."""
        if key not in self._known:
            while len(self._known) >= MOST_TERMS:
                self._known.pop(next(iter(self._known)))
            term = np.log(np.maximum(chance(), _SMALLEST))
            term.flags.writeable = False
            self._known[key] = term
        return self._known[key]


def posterior(prior: NDArray[np.float64], log_likelihood: NDArray[np.float64]) -> NDArray[np.float64]:
    """Chance of each hypothesis, proportional to prior x likelihood, shape (H,), adds up to 1 [-]."""
    with np.errstate(divide="ignore"):
        log_weight = np.log(prior) + log_likelihood
    weight = np.exp(log_weight - log_weight.max())
    return weight / weight.sum()


def with_hunches(
    prior: NDArray[np.float64], hypotheses: Sequence[Hypothesis], refs: Iterable[str], factor: float
) -> NDArray[np.float64]:
    """The prior with the odds of every hypothesis that has a suspected part at fault multiplied by
    ``factor``.

    A part named twice counts once: a hunch is an opinion and does not grow by being repeated.
    """
    suspected = set(refs)
    if not suspected:
        return prior
    raised = np.array([factor if any(f.ref in suspected for f in hypothesis.faults) else 1.0 for hypothesis in hypotheses])
    weight = prior * raised
    return weight / weight.sum()
